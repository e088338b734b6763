import { type SQL, eq, sql } from "drizzle-orm";
import { read, type Tx } from "@/db/client";
import { goodwills } from "@/db/schema/coverage";
import { may, permit } from "@/lib/auth/rules";
import { addPeriod, instantAt } from "@/lib/base/civil";
import { ok, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { defaultSite } from "@/lib/ledger/queries";
import {
  GoodwillFilter,
  type GoodwillFigures,
  type GoodwillReport,
  type GoodwillView,
  type OpenGoodwill,
} from "./goodwill";
import type { Outcome, Remedy } from "./schema";

export const GOODWILL_PAGE = 25;
export const GOODWILL_OPEN_LIMIT = 50;

const ref = (kind: SQL) => sql`(select e.letter::text || e.number from entry e
  where e.ticket_id = g.ticket_id and ${kind} and e.data ->> 'goodwillId' = g.id::text order by e.seq limit 1)`;

const FROM = sql`from goodwill g
  join ticket t on t.id = g.ticket_id
  join unit u on u.id = g.unit_id
  join model m on m.id = u.model_id
  left join account a on a.id = g.account_id`;

const COLUMNS = sql`g.id, g.state::text as state, g.ticket_id as "ticketId", t.number as "ticketNumber",
  g.ticket_unit_id as "ticketUnitId", u.serial, m.name as "modelName", coalesce(a.name, t.person_email) as customer,
  t.fault_words as "faultWords", g.asked_by as "askedBy", g.asked_by_name as "askedByName", g.asked_at as "askedAt",
  ${ref(sql`e.kind = 'goodwill_asked'`)} as "askRef", g.reason, g.wanted_remedy::text as "wantedRemedy",
  g.answered_by_name as "answeredByName", g.answered_at as "answeredAt",
  ${ref(sql`e.kind in ('goodwill_granted', 'goodwill_declined')`)} as "answerRef",
  g.answer, g.remedy::text as remedy, g.limit_cents as "limitCents", g.decision_id as "decisionId"`;

const asDate = (v: unknown) => (v === null ? null : new Date(v as string));
const asView = (r: Record<string, unknown>) =>
  ({ ...r, askedAt: asDate(r.askedAt), answeredAt: asDate(r.answeredAt) }) as unknown as GoodwillView;

/** A person who answers nothing and keeps no house reads what they asked themselves. */
const ownOnly = (ctx: Ctx): boolean =>
  ctx.actor.kind === "staff" && !ctx.actor.roles.some((r) => r === "manager" || r === "admin");
const whose = (ctx: Ctx): SQL =>
  ownOnly(ctx) && ctx.actor.kind === "staff" ? sql`g.asked_by = ${ctx.actor.userId}` : sql`true`;

function askedIn(month: string | null, zone: string): SQL {
  if (month === null) return sql`true`;
  const first = `${month}-01`;
  const next = addPeriod(first, "P1M");
  return sql`g.asked_at >= ${instantAt(first, "00:00", zone)} and g.asked_at < ${instantAt(next, "00:00", zone)}`;
}

const MOMENT = sql`coalesce(g.answered_at, g.asked_at)`;

/** Rows of the list after a place in it, newest first. */
async function listed(tx: Tx, ctx: Ctx, filter: GoodwillFilter, zone: string, limit: number) {
  const [at, id] = filter.after?.split("_") ?? [];
  const found = await tx.execute(sql`select ${COLUMNS} ${FROM}
    where ${whose(ctx)} and ${askedIn(filter.month, zone)}
      and ${filter.state === null ? sql`g.state <> 'asked'` : sql`g.state = ${filter.state}`}
      ${at && id ? sql`and (${MOMENT}, g.id) < (${at}::timestamptz, ${id}::uuid)` : sql``}
    order by ${MOMENT} desc, g.id desc limit ${limit + 1}`);
  const rows = found.rows.map(asView);
  const page = rows.slice(0, limit);
  const last = page.at(-1);
  return {
    rows: page,
    next:
      rows.length > limit && last ? `${(last.answeredAt ?? last.askedAt).toISOString()}_${last.id}` : null,
  };
}

const openAsks = async (tx: Tx, ctx: Ctx): Promise<OpenGoodwill[]> =>
  (
    await tx.execute(sql`select ${COLUMNS}, n.id as "newestId", n.outcome::text as "newestOutcome", n.headline as "newestHeadline", n.reasons as "newestReasons",
        (select e.letter::text || e.number from entry e where e.ticket_id = g.ticket_id and e.kind = 'decision' and e.data ->> 'decisionId' = n.id::text limit 1) as "newestRef",
        b.granted, b.cents
      ${FROM}
      join lateral (select d.id, d.outcome, d.answer -> 'headline' ->> 'staff' as headline, jsonb_path_query_array(d.answer, '$.reasons[0 to 2].staff') as reasons from coverage_decision d
        where d.ticket_id = g.ticket_id and d.unit_id = g.unit_id order by d.made_at desc limit 1) n on true
      join lateral (select count(*)::int as granted, coalesce(sum(x.limit_cents), 0)::float8 as cents from goodwill x
        where x.account_id = g.account_id and x.state = 'granted') b on true
      where g.state = 'asked' and ${whose(ctx)}
      order by g.asked_at, g.id limit ${GOODWILL_OPEN_LIMIT + 1}`)
  ).rows.map((r) => ({
    ...asView(r),
    newest: {
      id: r.newestId as string,
      ref: r.newestRef as string | null,
      outcome: r.newestOutcome as Outcome,
      headline: r.newestHeadline as string,
      reasons: r.newestReasons as string[],
    },
    changed: r.newestId !== r.decisionId,
    before: { granted: r.granted as number, cents: r.cents as number },
  }));

/** Asks that wait on top, figures of a month, and the list by page. */
export async function goodwillReport(ctx: Ctx, raw: unknown): Promise<Result<GoodwillReport>> {
  const allowed = permit(ctx, "goodwill.read");
  if (!allowed.ok) return allowed;
  const filter = GoodwillFilter.parse(raw);
  const { zone } = await defaultSite(ctx);
  return read(ctx, async (tx) => {
    const open = await openAsks(tx, ctx);
    const counted = await tx.execute<GoodwillFigures>(sql`select count(*)::int as asked,
        (count(*) filter (where g.state = 'asked'))::int as waiting,
        (count(*) filter (where g.state = 'granted'))::int as granted,
        (count(*) filter (where g.state = 'declined'))::int as declined,
        coalesce(sum(g.limit_cents) filter (where g.state = 'granted'), 0)::float8 as "grantedCents"
      from goodwill g where ${whose(ctx)} and ${askedIn(filter.month, zone)}`);
    const months = await tx.execute<{ month: string }>(sql`
      select distinct to_char(g.asked_at at time zone ${zone}, 'YYYY-MM') as month from goodwill g
      where ${whose(ctx)} order by 1 desc limit 60`);
    return ok({
      filter,
      mine: ownOnly(ctx),
      open: open.slice(0, GOODWILL_OPEN_LIMIT),
      moreOpen: open.length > GOODWILL_OPEN_LIMIT,
      figures: counted.rows[0]!,
      ...(await listed(tx, ctx, filter, zone, GOODWILL_PAGE)),
      months: months.rows.map((m) => m.month),
    });
  });
}

/** The whole list by the same filter, for a sheet. */
export async function goodwillRows(
  ctx: Ctx,
  raw: unknown,
): Promise<Result<{ rows: GoodwillView[]; zone: string }>> {
  const allowed = permit(ctx, "goodwill.read");
  if (!allowed.ok) return allowed;
  const filter = GoodwillFilter.parse(raw);
  const { zone } = await defaultSite(ctx);
  return read(ctx, async (tx) => {
    const rows: GoodwillView[] = [];
    for (let after: string | null = null; ;) {
      const page = await listed(tx, ctx, { ...filter, after }, zone, 1000);
      rows.push(...page.rows);
      after = page.next;
      if (after === null) return ok({ rows, zone });
    }
  });
}

/** How many asks wait: in all, and those that this person may answer. Null for who may not read them. */
export async function openGoodwills(ctx: Ctx): Promise<{ open: number; toAnswer: number } | null> {
  if (!may(ctx, "goodwill.read")) return null;
  const me = ctx.actor.kind === "staff" ? ctx.actor.userId : null;
  const found = await read(ctx, (tx) =>
    tx.execute<{ open: number; others: number }>(sql`select count(*)::int as open,
      (count(*) filter (where g.asked_by is distinct from ${me}::uuid))::int as others
      from goodwill g where g.state = 'asked' and ${whose(ctx)}`),
  );
  const { open, others } = found.rows[0]!;
  return { open, toAnswer: may(ctx, "goodwill.answer") ? others : 0 };
}

/** What is ours alone of a ticket's goodwill, by its id: the manager's words and the limit. None for customers. */
export type OursOfGoodwill = ReadonlyMap<string, { words: string; limitCents: number | null }>;
export async function oursOfGoodwill(ctx: Ctx, ticketId: string): Promise<OursOfGoodwill> {
  if (ctx.actor.kind === "customer" || ctx.actor.kind === "anonymous") return new Map();
  const rows = await read(ctx, (tx) =>
    tx
      .select({ id: goodwills.id, words: goodwills.answer, limitCents: goodwills.limitCents })
      .from(goodwills)
      .where(eq(goodwills.ticketId, ticketId))
      .limit(200),
  );
  return new Map(rows.map(({ id, ...ours }) => [id, ours]));
}

export type UnitGoodwill = {
  goodwillId: string;
  ticketUnitId: string;
  state: "asked" | "granted";
  ref: string;
  askedByName: string;
  decisionId: string;
  remedy: Remedy;
  limitCents: number;
  /** The RMA that carries it out, unless that came to nothing. */
  usedBy: string | null;
};

/** Open asks and grants of a ticket, newest first. */
export async function goodwillOfTicket(ctx: Ctx, ticketId: string): Promise<UnitGoodwill[]> {
  if (ctx.actor.kind === "customer" || ctx.actor.kind === "anonymous") return [];
  const found = await read(ctx, (tx) =>
    tx.execute(sql`select g.id as "goodwillId", g.ticket_unit_id as "ticketUnitId", g.state::text as state,
        ${ref(sql`e.kind = case g.state when 'asked' then 'goodwill_asked' else 'goodwill_granted' end::entry_kind`)} as ref,
        g.asked_by_name as "askedByName", g.decision_id as "decisionId",
        coalesce(g.remedy, g.wanted_remedy)::text as remedy, coalesce(g.limit_cents, 0) as "limitCents",
        (select r.number from entry e join rma r on r.id = (e.data ->> 'rmaId')::uuid
          where e.ticket_id = g.ticket_id and e.kind = 'rma_authorized'
            and e.data -> 'goodwill' @> jsonb_build_array(jsonb_build_object('goodwillId', g.id))
            and r.state not in ('withdrawn', 'expired', 'declined') limit 1) as "usedBy"
      from goodwill g where g.ticket_id = ${ticketId} and g.state <> 'declined'
      order by coalesce(g.answered_at, g.asked_at) desc, g.id`),
  );
  return found.rows as UnitGoodwill[];
}
