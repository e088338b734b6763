import { asc, eq, sql } from "drizzle-orm";
import { read, type Tx } from "@/db/client";
import { contacts } from "@/db/schema/ledger";
import { permit } from "@/lib/auth/rules";
import { civilDayIn, daysBetween, earlierDay, isDay } from "@/lib/base/civil";
import { ok, refuse, type Result } from "@/lib/base/result";
import { plural, showDay } from "@/lib/base/show";
import type { Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { lookAlikes } from "@/lib/ledger/queries";
import type { CheckAnswer, CheckLine, CheckState, CheckUnit } from "./check";

/** Unfound lines for which look-alikes are sought: each is a look-up of its own. */
export const ALIKE_LINES = 100;
const SOON_DAYS = 14;

type Found = CheckUnit & {
  key: string;
  saleLineId: string | null;
  installationId: string | null;
  orderNumber: string | null;
  shippedOn: string | null;
  endedOn: string | null;
  /** Sales of this unit itself, as far as the one who asks may see them. */
  sales: number;
  /** It stood in a system once and does no more. */
  leftOn: string | null;
};
type Window = { kind: "doa" | "cover"; firstOn: string; lastOn: string; clause: string };
type OpenRma = { number: string; ticketNumber: number };

export type UnitCover = {
  unit: Found;
  state: CheckState;
  firstOn: string | null;
  lastOn: string | null;
  clause: string | null;
  doaUntil: string | null;
  rma: OpenRma | null;
  doubts: string[];
  /** Why no fault of it can be reported; none: it can. */
  hindered: string | null;
};

/**
 * Units by key or id, each under the sale that decides about it: its own open one, else the newest of
 * the system it stands or stood in, else its own that has ended. As queries.saleCase, for thousands at once.
 */
async function unitsFound(tx: Tx, by: { keys: string[] } | { ids: string[] }): Promise<Found[]> {
  const where =
    "keys" in by
      ? sql`u.serial_key = any(${sql.param(by.keys)}::text[])`
      : sql`u.id = any(${sql.param(by.ids)}::uuid[])`;
  const newest = (unit: ReturnType<typeof sql>) => sql`
    select s.id, s.unit_id, s.account_id, s.order_number, s.shipped_on, s.ended_on from sale_line s
    where s.unit_id = ${unit} order by s.ended_on is not null, s.shipped_on desc, s.created_at desc limit 1`;
  const result = await tx.execute(sql`
    select u.id as "unitId", u.serial, u.serial_key as key, m.kind = 'part' as "isPart", m.code as "modelCode",
      m.name as "modelName", sale.id as "saleLineId", sale.order_number as "orderNumber",
      sale.shipped_on as "shippedOn", sale.ended_on as "endedOn", sale.account_id as "accountId",
      a.name as "accountName",
      case when sale.unit_id <> u.id and place.to_on is null then place.id end as "installationId",
      case when sale.unit_id <> u.id and place.to_on is null then place.slot end as slot,
      case when sale.unit_id <> u.id then root.serial end as "systemSerial",
      case when sale.unit_id <> u.id then place.to_on end as "leftOn",
      (select count(*)::int from sale_line n where n.unit_id = u.id) as sales
    from unit u
    join model m on m.id = u.model_id
    left join lateral (${newest(sql`u.id`)}) own on true
    left join lateral (
      select i.id, i.slot, i.to_on, s.unit_id as root_id from installation i join sale_line s on s.id = i.sale_line_id
      where i.unit_id = u.id order by i.to_on is not null, i.from_on desc limit 1
    ) place on own.id is null or own.ended_on is not null
    left join lateral (${newest(sql`place.root_id`)}) held on true
    left join sale_line sale on sale.id = coalesce(held.id, own.id)
    left join unit root on root.id = sale.unit_id
    left join account a on a.id = sale.account_id
    where ${where}`);
  return result.rows as Found[];
}

async function windowsOf(tx: Tx, found: readonly Found[]): Promise<Map<string, Window[]>> {
  const units = found.filter((f) => f.saleLineId !== null && f.leftOn === null);
  const result = await tx.execute(sql`
    select w.unit_id as "unitId", w.kind, w.first_on as "firstOn", w.last_on as "lastOn", c.number as clause
    from unnest(${sql.param(units.map((u) => u.unitId))}::uuid[], ${sql.param(units.map((u) => u.saleLineId))}::uuid[],
      ${sql.param(units.map((u) => u.installationId))}::uuid[]) as asked(unit_id, sale_id, place_id)
    join cover_window w on w.unit_id = asked.unit_id and w.sale_line_id = asked.sale_id
      and w.installation_id is not distinct from asked.place_id
    join clause c on c.id = w.clause_id`);
  const out = new Map<string, Window[]>();
  for (const { unitId, ...w } of result.rows as (Window & { unitId: string })[]) {
    const list = out.get(unitId);
    if (list) list.push(w);
    else out.set(unitId, [w]);
  }
  return out;
}

async function openRmas(tx: Tx, ids: string[]): Promise<Map<string, OpenRma>> {
  const result = await tx.execute(sql`
    select l.unit_id as "unitId", r.number, t.number as "ticketNumber" from rma_line l
    join rma r on r.id = l.rma_id join ticket t on t.id = r.ticket_id
    where l.unit_id = any(${sql.param(ids)}::uuid[]) and l.state in ('open', 'received', 'tested')`);
  return new Map(
    (result.rows as (OpenRma & { unitId: string })[]).map(({ unitId, ...rma }) => [unitId, rma]),
  );
}

/** What the kept windows say on a day: the same answer as queries.coverFor gives for one unit. */
function standing(windows: readonly Window[], f: Found, onDay: string) {
  const last = (list: readonly Window[]) =>
    list.reduce<Window | null>((a, b) => (a === null || b.lastOn > a.lastOn ? b : a), null);
  const open = windows.filter((w) => w.firstOn <= onDay && onDay <= w.lastOn);
  const over = f.endedOn !== null && onDay > f.endedOn;
  const doa = open.find((w) => w.kind === "doa") ?? null;
  const firstOn = windows.map((w) => w.firstOn).sort()[0] ?? null;
  const end = last(windows)?.lastOn ?? null;
  // Nothing is covered past the end of its sale, whatever the clause would have given.
  const lastOn = end !== null && f.endedOn !== null ? earlierDay(end, f.endedOn) : end;
  const state: CheckState =
    windows.length === 0
      ? "none"
      : over
        ? "ended"
        : doa
          ? "doa"
          : open.length > 0
            ? "covered"
            : onDay < firstOn!
              ? "later"
              : "ended";
  const decides = state === "doa" ? doa : (last(open) ?? last(windows));
  return {
    state,
    firstOn,
    lastOn,
    clause: decides?.clause ?? null,
    doaUntil: state === "doa" ? doa!.lastOn : null,
  };
}

function hinders(f: Found, rma: OpenRma | null): string | null {
  if (rma) return `on ${rma.number} already`;
  if (f.saleLineId === null) return "never sold";
  if (f.leftOn !== null) return `left ${f.systemSerial ?? "its system"} on ${showDay(f.leftOn)}`;
  if (f.endedOn !== null) return `its sale under order ${f.orderNumber} ended on ${showDay(f.endedOn)}`;
  return null;
}

async function judged(tx: Tx, found: readonly Found[], onDay: string): Promise<UnitCover[]> {
  const windows = await windowsOf(tx, found);
  const rmas = await openRmas(
    tx,
    found.map((f) => f.unitId),
  );
  return found.map((f) => {
    const rma = rmas.get(f.unitId) ?? null;
    const at = standing(windows.get(f.unitId) ?? [], f, onDay);
    const hindered = hinders(f, rma);
    const doubts = hindered ? [hindered] : [];
    if (rma && hinders(f, null)) doubts.push(hinders(f, null)!);
    if (f.sales > 1) doubts.push(`sold ${f.sales} times; its newest sale counts`);
    if (f.shippedOn !== null && f.shippedOn > onDay)
      doubts.push(`shipped on ${showDay(f.shippedOn)}, after the day asked`);
    if (at.state === "none" && !hinders(f, null))
      doubts.push("no clause keeps cover for it; a person reads its terms");
    if (at.state === "covered" && daysBetween(onDay, at.lastOn!) <= SOON_DAYS) {
      const days = daysBetween(onDay, at.lastOn!);
      doubts.push(
        days === 0 ? "this is its last covered day" : `cover ends ${days} ${plural(days, "day")} later`,
      );
    }
    return { unit: f, ...at, rma, doubts, hindered };
  });
}

/** Cover and open RMA of units by id, for acting on them. What the one who asks may not see is left out. */
export async function coverOfUnits(ctx: Ctx, ids: readonly string[], onDay: string): Promise<UnitCover[]> {
  return read(ctx, async (tx) => judged(tx, await unitsFound(tx, { ids: [...ids] }), onDay));
}

/** Whom an account's answers go to when nobody is named: its first contact. */
export async function accountContact(
  ctx: Ctx,
  accountId: string,
): Promise<{ contactId: string; name: string; email: string } | null> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({ contactId: contacts.id, name: contacts.name, email: contacts.email })
      .from(contacts)
      .where(eq(contacts.accountId, accountId))
      .orderBy(asc(contacts.createdAt), asc(contacts.email))
      .limit(1),
  );
  return rows[0] ?? null;
}

const NOT_FOUND = {
  unit: null,
  state: "not_found",
  firstOn: null,
  lastOn: null,
  clause: null,
  doaUntil: null,
  rma: null,
  startable: false,
} as const;

export const checkDay = (ctx: Ctx, asked: string): Result<string> => {
  if (asked === "") return ok(civilDayIn(ctx.now, env().MENDBAY_ZONE));
  return isDay(asked) && asked >= "1990-01-01" && asked <= "2199-12-31"
    ? ok(asked)
    : refuse("invalid", "The day needs another look.", {
        fields: { day: ["Write a day of the calendar as year-month-day, such as 2026-12-01."] },
      });
};

/**
 * Every line answered once, in the order given: the unit, its cover on a day, an open RMA, and what
 * is doubtful about it. A handful of statements however many lines; a line that is wrong has its own
 * answer and touches no other.
 */
export async function checkSerials(
  ctx: Ctx,
  lines: readonly CheckLine[],
  onDay: string,
): Promise<Result<CheckAnswer[]>> {
  const may = permit(ctx, "cover.check");
  if (!may.ok) return may;
  return read(ctx, async (tx) => {
    const keys = [...new Set(lines.map((l) => l.key).filter(Boolean))];
    const found = await judged(tx, await unitsFound(tx, { keys }), onDay);
    const byKey = new Map(found.map((c) => [c.unit.key, c]));
    const missing = lines.filter((l) => l.key !== "" && l.sameAs === null && !byKey.has(l.key));
    const alike = new Map<string, string[]>();
    for (const l of missing.slice(0, ALIKE_LINES))
      alike.set(
        l.key,
        (await lookAlikes({ ...ctx, tx }, l.key, 3)).map((u) => u.serial),
      );
    const most = mostLines(lines, byKey);
    return ok(
      lines.map((l): CheckAnswer => {
        const twice = l.sameAs === null ? [] : [`named in line ${l.sameAs} already`];
        const c = byKey.get(l.key);
        if (!c) {
          const like = alike.get(l.key) ?? [];
          const doubts = [
            ...(l.key === "" ? ["no serial in this line"] : []),
            ...(like.length > 0 ? [`looks like ${like.join(", ")}; look at each character`] : []),
            ...twice,
          ];
          return {
            ...l,
            ...NOT_FOUND,
            doubts: doubts.length > 0 ? doubts : ["look at each character again"],
          };
        }
        const { unit, state, firstOn, lastOn, clause, doaUntil, rma, doubts, hindered } = c;
        const other = most && unit.accountId !== null && unit.accountId !== most.accountId;
        return {
          ...l,
          unit: {
            unitId: unit.unitId,
            serial: unit.serial,
            isPart: unit.isPart,
            modelCode: unit.modelCode,
            modelName: unit.modelName,
            systemSerial: unit.systemSerial,
            slot: unit.slot,
            accountId: unit.accountId,
            accountName: unit.accountName,
          },
          state,
          firstOn,
          lastOn,
          clause,
          doaUntil,
          rma,
          doubts: [
            ...twice,
            ...doubts,
            ...(other ? [`bought by ${unit.accountName}, most lines by ${most.accountName}`] : []),
          ],
          startable: hindered === null && l.sameAs === null && (state === "covered" || state === "doa"),
        };
      }),
    );
  });
}

/** The account that bought more than half of what was found: who asks, very likely. */
function mostLines(lines: readonly CheckLine[], byKey: ReadonlyMap<string, UnitCover>) {
  const counts = new Map<string, { accountId: string; accountName: string | null; n: number }>();
  let total = 0;
  for (const l of lines) {
    const unit = byKey.get(l.key)?.unit;
    if (!unit?.accountId) continue;
    total++;
    const at = counts.get(unit.accountId);
    if (at) at.n++;
    else counts.set(unit.accountId, { accountId: unit.accountId, accountName: unit.accountName, n: 1 });
  }
  return [...counts.values()].find((c) => c.n * 2 > total) ?? null;
}
