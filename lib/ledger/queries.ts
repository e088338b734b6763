import { and, asc, desc, eq, gt, ilike, inArray, isNull, or, sql } from "drizzle-orm";
import { read, type Tx } from "@/db/client";
import {
  accounts,
  contacts,
  holidays,
  importBatches,
  installations,
  models,
  saleLines,
  sites,
  units,
} from "@/db/schema/ledger";
import { alikeKeys, rankAlike } from "@/lib/base/alike";
import { readings } from "@/lib/base/scan";
import { serialKey } from "@/lib/base/serial";
import type { Ctx } from "@/lib/ctx";
import type { ImportView, Site, UnitHit } from "./schema";

const parentUnit = sql`parent_unit`;

/** Selects units with the system they stand in and the account that holds them. */
function hits(tx: Tx, where: ReturnType<typeof and>, limit: number) {
  return tx
    .select({
      unitId: units.id,
      serial: units.serial,
      kind: models.kind,
      family: models.family,
      modelCode: models.code,
      modelName: models.name,
      condition: units.condition,
      whereabouts: units.whereabouts,
      place: units.place,
      slot: installations.slot,
      // The system sold, however deep the part stands in it.
      systemUnitId: sql<string | null>`parent_sale.unit_id`,
      systemSerial: sql<string | null>`${parentUnit}.serial`,
      accountId: sql<string | null>`coalesce(own_sale.account_id, parent_sale.account_id)`,
      orderNumber: sql<string | null>`coalesce(own_sale.order_number, parent_sale.order_number)`,
      accountName: accounts.name,
    })
    .from(units)
    .innerJoin(models, eq(models.id, units.modelId))
    .leftJoin(installations, and(eq(installations.unitId, units.id), isNull(installations.toOn)))
    .leftJoin(sql`sale_line as own_sale`, sql`own_sale.unit_id = ${units.id} and own_sale.ended_on is null`)
    .leftJoin(sql`sale_line as parent_sale`, sql`parent_sale.id = ${installations.saleLineId}`)
    .leftJoin(sql`unit as parent_unit`, sql`parent_unit.id = parent_sale.unit_id`)
    .leftJoin(accounts, sql`${accounts.id} = coalesce(own_sale.account_id, parent_sale.account_id)`)
    .where(where)
    .orderBy(asc(units.serial))
    .limit(limit);
}

/** The unit of a serial, as a person or a scanner gives it. One equality on the folded key. */
export async function unitBySerial(ctx: Ctx, serial: string): Promise<UnitHit | null> {
  const key = serialKey(serial);
  if (key === "") return null;
  return read(
    ctx,
    async (tx) => ((await hits(tx, and(eq(units.serialKey, key)), 1))[0] as UnitHit | undefined) ?? null,
  );
}

export async function unitsByIds(ctx: Ctx, ids: readonly string[]): Promise<UnitHit[]> {
  if (ids.length === 0) return [];
  return read(ctx, async (tx) => (await hits(tx, and(inArray(units.id, [...ids])), ids.length)) as UnitHit[]);
}

export async function unitsBySerials(ctx: Ctx, serials: readonly string[]): Promise<UnitHit[]> {
  const keys = [...new Set(serials.map(serialKey).filter(Boolean))].slice(0, 200);
  if (keys.length === 0) return [];
  return read(
    ctx,
    async (tx) => (await hits(tx, and(inArray(units.serialKey, keys)), keys.length)) as UnitHit[],
  );
}

/**
 * Units whose serial a scan may mean, the likeliest first: as it stands, without a data identifier, out of
 * an element string. More than one is a question for a person.
 */
export async function unitsByScan(ctx: Ctx, text: string): Promise<UnitHit[]> {
  const keys = readings(text)
    .filter((r) => r.firm)
    .map((r) => serialKey(r.serial));
  if (keys.length === 0) return [];
  const found = await unitsBySerials(ctx, keys);
  const rank = (u: UnitHit) => keys.indexOf(serialKey(u.serial));
  return found.sort((a, b) => rank(a) - rank(b));
}

/** More units of one loose key than this differ in look-alikes alone, and no ranking helps. */
const ALIKE_EACH = 50;

/**
 * Units whose serial looks like the one given, the nearest first: suggestions, never a silent
 * correction, and never the unit of exactly this serial. All keys are looked up in unit_by_loose at once.
 */
export async function lookAlikes(ctx: Ctx, serial: string, limit = 3): Promise<UnitHit[]> {
  const keys = alikeKeys(serial);
  if (keys.length === 0) return [];
  return read(ctx, async (tx) => {
    // A look-up a key: with `= any` the planner expects a hit for each and reads the whole table of a middling ledger.
    const near = await tx.execute<{ id: string; serial: string }>(sql`
      select alike.id, alike.serial
      from unnest(${sql.param(keys)}::text[]) as given(key)
      cross join lateral (
        select id, serial from unit
        where serial_loose = given.key and serial_key <> ${serialKey(serial)} limit ${ALIKE_EACH}
      ) as alike`);
    const best = rankAlike(serial, near.rows)
      .slice(0, limit)
      .map((u) => u.id);
    if (best.length === 0) return [];
    const found = (await hits(tx, and(inArray(units.id, best)), best.length)) as UnitHit[];
    return found.sort((a, b) => best.indexOf(a.unitId) - best.indexOf(b.unitId));
  });
}

/** Units whose serial begins with, whose order equals or whose customer's name contains the text. */
export async function findUnits(ctx: Ctx, text: string, limit = 25): Promise<UnitHit[]> {
  const q = text.trim();
  const key = serialKey(q);
  return read(ctx, async (tx) => {
    if (q === "") return (await hits(tx, and(eq(models.kind, "system")), limit)) as UnitHit[];
    const where = or(
      key.length >= 3 ? sql`${units.serialKey} ^@ ${key}` : undefined,
      sql`own_sale.order_number = ${q.toUpperCase()}`,
      and(
        eq(models.kind, "system"),
        q.length >= 3 ? ilike(accounts.name, `%${q.replace(/[%_\\]/g, "\\$&")}%`) : sql`false`,
      ),
    );
    return (await hits(tx, and(where), limit)) as UnitHit[];
  });
}

export type LedgerRow = UnitHit & { shippedOn: string | null };

/** Systems by serial, keyset paged: the ledger's list. */
export async function ledgerPage(
  ctx: Ctx,
  ask: { q: string; after: string | null; limit: number },
): Promise<{ rows: UnitHit[]; next: string | null }> {
  const q = ask.q.trim();
  const key = serialKey(q);
  const rows = await read(ctx, async (tx) => {
    const match =
      q === ""
        ? eq(models.kind, "system")
        : or(
            key.length >= 3 ? sql`${units.serialKey} ^@ ${key}` : undefined,
            sql`own_sale.order_number = ${q.toUpperCase()}`,
            and(eq(models.kind, "system"), ilike(accounts.name, `%${q.replace(/[%_\\]/g, "\\$&")}%`)),
          );
    return (await hits(
      tx,
      and(match, ask.after ? gt(units.serial, ask.after) : undefined),
      ask.limit + 1,
    )) as UnitHit[];
  });
  const page = rows.slice(0, ask.limit);
  return { rows: page, next: rows.length > ask.limit ? (page.at(-1)?.serial ?? null) : null };
}

export type SaleRow = {
  saleLineId: string;
  orderNumber: string;
  accountName: string;
  shippedOn: string;
  deliveredOn: string | null;
  endedOn: string | null;
  endedReason: string | null;
  condition: string;
};

/** Every sale of a unit, newest first: a refurbished unit is sold again under its serial. */
export async function salesOf(ctx: Ctx, unitId: string): Promise<SaleRow[]> {
  return read(ctx, (tx) =>
    tx
      .select({
        saleLineId: saleLines.id,
        orderNumber: saleLines.orderNumber,
        accountName: accounts.name,
        shippedOn: saleLines.shippedOn,
        deliveredOn: saleLines.deliveredOn,
        endedOn: saleLines.endedOn,
        endedReason: saleLines.endedReason,
        condition: saleLines.condition,
      })
      .from(saleLines)
      .innerJoin(accounts, eq(accounts.id, saleLines.accountId))
      .where(eq(saleLines.unitId, unitId))
      .orderBy(desc(saleLines.shippedOn))
      .limit(50),
  );
}

export type EquipmentRow = {
  unitId: string;
  saleLineId: string;
  serial: string;
  modelCode: string;
  modelName: string;
  condition: string;
  siteNote: string | null;
  orderNumber: string;
  shippedOn: string;
};

/** A customer's own systems and separately sold parts, newest first, keyset paged. */
export async function equipment(
  ctx: Ctx,
  ask: { q?: string; after?: string | null; limit: number },
): Promise<{ rows: EquipmentRow[]; next: string | null }> {
  const key = serialKey(ask.q ?? "");
  const [afterDay, afterId] = (ask.after ?? "").split("~");
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        unitId: units.id,
        saleLineId: saleLines.id,
        serial: units.serial,
        modelCode: models.code,
        modelName: models.name,
        condition: saleLines.condition,
        siteNote: saleLines.siteNote,
        orderNumber: saleLines.orderNumber,
        shippedOn: saleLines.shippedOn,
      })
      .from(saleLines)
      .innerJoin(units, eq(units.id, saleLines.unitId))
      .innerJoin(models, eq(models.id, units.modelId))
      .where(
        and(
          isNull(saleLines.endedOn),
          key
            ? or(
                sql`${units.serialKey} ^@ ${key}`,
                eq(saleLines.orderNumber, (ask.q ?? "").trim().toUpperCase()),
              )
            : undefined,
          afterDay && afterId
            ? sql`(${saleLines.shippedOn}, ${saleLines.id}) < (${afterDay}::date, ${afterId}::uuid)`
            : undefined,
        ),
      )
      .orderBy(desc(saleLines.shippedOn), desc(saleLines.id))
      .limit(ask.limit + 1),
  );
  const page = rows.slice(0, ask.limit);
  const last = page.at(-1);
  return {
    rows: page,
    next: rows.length > ask.limit && last ? `${last.shippedOn}~${last.saleLineId}` : null,
  };
}

export type StockUnit = {
  unitId: string;
  serial: string;
  modelId: string;
  modelCode: string;
  modelName: string;
  family: string;
  facts: Record<string, string | number>;
  condition: string;
  place: string | null;
};

/** Units in stock of one family, to choose a replacement from. */
export async function stockOf(ctx: Ctx, family: string, limit = 60): Promise<StockUnit[]> {
  return read(ctx, (tx) =>
    tx
      .select({
        unitId: units.id,
        serial: units.serial,
        modelId: models.id,
        modelCode: models.code,
        modelName: models.name,
        family: models.family,
        facts: models.facts,
        condition: units.condition,
        place: units.place,
      })
      .from(units)
      .innerJoin(models, eq(models.id, units.modelId))
      .where(and(eq(units.whereabouts, "stock"), sql`${models.family} = ${family}`))
      .orderBy(asc(models.code), asc(units.serial))
      .limit(limit),
  );
}

export type ModelFacts = {
  modelId: string;
  code: string;
  name: string;
  family: string;
  kind: string;
  facts: Record<string, string | number>;
  weightKg: number | null;
  dataBearing: boolean;
  battery: "none" | "coin" | "ion" | "lead";
};

/** What the model of each unit says: weight, battery, data, and the facts a replacement is compared by. */
export async function modelsOf(ctx: Ctx, unitIds: readonly string[]): Promise<Map<string, ModelFacts>> {
  if (unitIds.length === 0) return new Map();
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        unitId: units.id,
        modelId: models.id,
        code: models.code,
        name: models.name,
        family: models.family,
        kind: models.kind,
        facts: models.facts,
        weightKg: models.weightKg,
        dataBearing: models.dataBearing,
        battery: models.battery,
      })
      .from(units)
      .innerJoin(models, eq(models.id, units.modelId))
      .where(inArray(units.id, [...unitIds])),
  );
  return new Map(rows.map(({ unitId, ...m }) => [unitId, m]));
}

/** Our default site with its working week and holidays. @throws Error when none is set up. */
export async function defaultSite(ctx: Ctx): Promise<Site> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({ site: sites, day: holidays.day })
      .from(sites)
      .leftJoin(holidays, eq(holidays.siteId, sites.id))
      .where(eq(sites.isDefault, true)),
  );
  const first = rows[0]?.site;
  if (!first) throw new Error("No default site: set one up before the desk opens.");
  return {
    id: first.id,
    code: first.code,
    name: first.name,
    zone: first.zone,
    addressLines: first.addressLines,
    workdays: first.workdays,
    opensAt: first.opensAt,
    closesAt: first.closesAt,
    holidays: rows.flatMap((r) => (r.day ? [r.day] : [])),
  };
}

/** Holidays of a site with their names, in order. */
export async function holidaysOf(ctx: Ctx, siteId: string): Promise<{ day: string; name: string }[]> {
  return read(ctx, (tx) =>
    tx
      .select({ day: holidays.day, name: holidays.name })
      .from(holidays)
      .where(eq(holidays.siteId, siteId))
      .orderBy(asc(holidays.day))
      .limit(2000),
  );
}

export async function contactByEmail(
  ctx: Ctx,
  email: string,
): Promise<{ accountId: string; accountName: string; contactId: string; name: string } | null> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        accountId: contacts.accountId,
        accountName: accounts.name,
        contactId: contacts.id,
        name: contacts.name,
      })
      .from(contacts)
      .innerJoin(accounts, eq(accounts.id, contacts.accountId))
      .where(eq(contacts.email, email.trim().toLowerCase()))
      .limit(1),
  );
  return rows[0] ?? null;
}

export async function accountById(ctx: Ctx, id: string) {
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        id: accounts.id,
        name: accounts.name,
        buyerKind: accounts.buyerKind,
        country: accounts.country,
        zone: accounts.zone,
      })
      .from(accounts)
      .where(eq(accounts.id, id))
      .limit(1),
  );
  return rows[0] ?? null;
}

const importColumns = {
  id: importBatches.id,
  fileName: importBatches.fileName,
  state: importBatches.state,
  rowsTotal: importBatches.rowsTotal,
  rowsGood: importBatches.rowsGood,
  rowsDone: importBatches.rowsDone,
  added: importBatches.added,
  problems: importBatches.problems,
  problemsTotal: importBatches.problemsTotal,
  error: importBatches.error,
  createdAt: importBatches.createdAt,
  finishedAt: importBatches.finishedAt,
};

export async function importBatch(ctx: Ctx, id: string): Promise<ImportView | null> {
  const rows = await read(ctx, (tx) =>
    tx.select(importColumns).from(importBatches).where(eq(importBatches.id, id)).limit(1),
  );
  return rows[0] ?? null;
}

export async function recentImports(ctx: Ctx, limit = 10): Promise<ImportView[]> {
  return read(ctx, (tx) =>
    tx.select(importColumns).from(importBatches).orderBy(desc(importBatches.createdAt)).limit(limit),
  );
}
