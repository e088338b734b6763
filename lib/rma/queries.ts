import { and, asc, desc, eq, inArray, sql } from "drizzle-orm";
import { read, type Tx } from "@/db/client";
import { accounts, models, sites, units } from "@/db/schema/ledger";
import { feeNotices, rmaLines, rmas } from "@/db/schema/rma";
import { tickets, ticketUnits } from "@/db/schema/tickets";
import type { Ctx } from "@/lib/ctx";
import { parseRmaNumber } from "./rules";
import type { RmaLineView, RmaView } from "./schema";

const lineColumns = {
  id: rmaLines.id,
  rmaId: rmaLines.rmaId,
  ticketUnitId: rmaLines.ticketUnitId,
  unitId: rmaLines.unitId,
  serial: units.serial,
  modelCode: models.code,
  modelName: models.name,
  family: models.family,
  slot: ticketUnits.slot,
  systemUnitId: ticketUnits.systemUnitId,
  systemSerial: sql<string | null>`(select s.serial from unit s where s.id = ${ticketUnits.systemUnitId})`,
  remedy: rmaLines.remedy,
  faultWords: rmaLines.faultWords,
  state: rmaLines.state,
  decisionId: rmaLines.decisionId,
  weightKg: models.weightKg,
  dataBearing: models.dataBearing,
  battery: models.battery,
};

async function assemble(tx: Tx, where: ReturnType<typeof and>, limit: number): Promise<RmaView[]> {
  const heads = await tx
    .select({
      id: rmas.id,
      number: rmas.number,
      ticketId: rmas.ticketId,
      ticketNumber: tickets.number,
      accountId: rmas.accountId,
      accountName: accounts.name,
      personName: tickets.personName,
      personEmail: tickets.personEmail,
      faultWords: tickets.faultWords,
      state: rmas.state,
      remedy: rmas.remedy,
      authorizedAt: rmas.authorizedAt,
      authorizedByName: rmas.authorizedByName,
      expiresOn: rmas.expiresOn,
      dueBackOn: rmas.dueBackOn,
      battery: rmas.battery,
      siteName: sites.name,
      siteAddress: sites.addressLines,
      siteZone: sites.zone,
      version: rmas.version,
      createdAt: rmas.createdAt,
      settledAt: rmas.settledAt,
    })
    .from(rmas)
    .innerJoin(tickets, eq(tickets.id, rmas.ticketId))
    .innerJoin(accounts, eq(accounts.id, rmas.accountId))
    .innerJoin(sites, eq(sites.id, rmas.siteId))
    .where(where)
    .orderBy(desc(rmas.createdAt))
    .limit(limit);
  if (heads.length === 0) return [];
  const ids = heads.map((h) => h.id);
  const lines = await tx
    .select(lineColumns)
    .from(rmaLines)
    .innerJoin(units, eq(units.id, rmaLines.unitId))
    .innerJoin(models, eq(models.id, units.modelId))
    .innerJoin(ticketUnits, eq(ticketUnits.id, rmaLines.ticketUnitId))
    .where(inArray(rmaLines.rmaId, ids))
    .orderBy(asc(rmaLines.sort));
  const fees = await tx
    .select({
      lineId: feeNotices.rmaLineId,
      kind: feeNotices.kind,
      cents: feeNotices.cents,
      currency: feeNotices.currency,
      words: feeNotices.words,
    })
    .from(feeNotices)
    .where(
      inArray(
        feeNotices.rmaLineId,
        lines.map((l) => l.id),
      ),
    );
  return heads.map(({ siteName, siteAddress, siteZone, ...h }) => {
    const own: RmaLineView[] = lines.filter((l) => l.rmaId === h.id).map(({ rmaId: _, ...l }) => l);
    return {
      ...h,
      site: { name: siteName, addressLines: siteAddress, zone: siteZone },
      lines: own,
      fees: fees.filter((f) => own.some((l) => l.id === f.lineId)),
    };
  });
}

/** One RMA by its number, tolerant of case and dashes. Null: not there, or not theirs. */
export async function rmaByNumber(ctx: Ctx, text: string): Promise<RmaView | null> {
  const number = parseRmaNumber(text);
  if (!number.ok) return null;
  return read(ctx, async (tx) => (await assemble(tx, and(eq(rmas.number, number.value)), 1))[0] ?? null);
}

export async function rmaById(ctx: Ctx, id: string): Promise<RmaView | null> {
  return read(ctx, async (tx) => (await assemble(tx, and(eq(rmas.id, id)), 1))[0] ?? null);
}

export async function rmasOfTicket(ctx: Ctx, ticketId: string): Promise<RmaView[]> {
  return read(ctx, (tx) => assemble(tx, and(eq(rmas.ticketId, ticketId)), 50));
}

/** RMAs whose parcels may come: authorized or on their way, soonest first by their last day. */
export async function expectedRmas(ctx: Ctx, limit = 30): Promise<RmaView[]> {
  const list = await read(ctx, (tx) =>
    assemble(
      tx,
      and(
        inArray(rmas.state, ["authorized", "in_transit", "received"]),
        sql`exists (select from rma_line l where l.rma_id = ${rmas.id} and l.state = 'open')`,
      ),
      limit,
    ),
  );
  const rank = (r: RmaView) => (r.state === "in_transit" ? 0 : r.state === "received" ? 1 : 2);
  return list.sort((a, b) => rank(a) - rank(b) || (a.expiresOn ?? "").localeCompare(b.expiresOn ?? ""));
}

/** The open RMA line of a unit, if any: a unit has at most one. */
export async function openLineOf(
  ctx: Ctx,
  unitId: string,
): Promise<{ rmaId: string; rmaNumber: string; lineId: string; ticketNumber: number } | null> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({ rmaId: rmas.id, rmaNumber: rmas.number, lineId: rmaLines.id, ticketNumber: tickets.number })
      .from(rmaLines)
      .innerJoin(rmas, eq(rmas.id, rmaLines.rmaId))
      .innerJoin(tickets, eq(tickets.id, rmas.ticketId))
      .where(and(eq(rmaLines.unitId, unitId), inArray(rmaLines.state, ["open", "received", "tested"])))
      .limit(1),
  );
  return rows[0] ?? null;
}
