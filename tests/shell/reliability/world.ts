import { rawDb } from "@/db/client";
import { clauses, coverWindows, terms, termsVersions } from "@/db/schema/coverage";
import { benchTests } from "@/db/schema/dock";
import {
  accounts,
  installations,
  lots,
  models,
  saleLines,
  sites,
  suppliers,
  units,
} from "@/db/schema/ledger";
import { rmaLines, rmas } from "@/db/schema/rma";
import { tickets, ticketUnits } from "@/db/schema/tickets";
import type { TestOutcome } from "@/lib/dock/schema";
import type { Condition, Family } from "@/lib/ledger/schema";

const at = new Date("2026-11-12T09:00:00Z");
const id = () => crypto.randomUUID();
let count = 0;

export type World = Awaited<ReturnType<typeof makeWorld>>;

/**
 * A ledger of one seller, written straight into the tables: these tests are about what is read, so
 * every day must be of their own choosing.
 */
export async function makeWorld() {
  const db = rawDb();
  const [accountId, siteId, termsId, versionId, clauseId] = [id(), id(), id(), id(), id()];
  await db.insert(accounts).values({
    id: accountId,
    code: "LOWMERE",
    name: "Lowmere Hosting",
    buyerKind: "business",
    country: "GB",
    createdAt: at,
  });
  await db.insert(sites).values({
    id: siteId,
    code: "OST",
    name: "Ostwick",
    zone: "Europe/London",
    addressLines: ["1 Bay Road"],
    country: "GB",
    workdays: [1, 2, 3, 4, 5],
    opensAt: "08:00",
    closesAt: "17:00",
    isDefault: true,
  });
  await db.insert(terms).values({ id: termsId, code: "OSW-B", name: "Business terms" });
  await db.insert(termsVersions).values({
    id: versionId,
    termsId,
    issue: 1,
    effectiveOn: "2020-01-01",
    createdAt: at,
  });
  await db
    .insert(clauses)
    .values({ id: clauseId, termsVersionId: versionId, number: "3", kind: "cover", title: "Cover", sort: 1 });
  const seen = new Map<string, string>();

  async function model(code: string, family: Family): Promise<string> {
    const known = seen.get(code);
    if (known) return known;
    const made = id();
    seen.set(code, made);
    const kind = family === "system" ? ("system" as const) : ("part" as const);
    await db.insert(models).values({ id: made, code, name: `${family} ${code}`, kind, family });
    return made;
  }
  async function unit(
    modelCode: string,
    family: Family,
    condition: Condition = "new",
    lotId: string | null = null,
  ) {
    const made = id();
    const serial = `T${String(++count).padStart(6, "0")}`;
    await db.insert(units).values({
      id: made,
      serial,
      serialKey: serial,
      serialLoose: serial,
      modelId: await model(modelCode, family),
      lotId,
      condition,
      whereabouts: "customer",
      createdAt: at,
    });
    return made;
  }
  async function lot(code: string): Promise<string> {
    const [supplierId, made] = [id(), id()];
    await db.insert(suppliers).values({ id: supplierId, code: `S-${code}`, name: "Vantry Storage" });
    await db.insert(lots).values({ id: made, code, supplierId });
    return made;
  }
  async function sale(input: {
    unitId: string;
    shippedOn: string;
    coverEnd?: string;
    doaEnd?: string;
    endedOn?: string;
    condition?: Condition;
  }): Promise<string> {
    const made = id();
    await db.insert(saleLines).values({
      id: made,
      unitId: input.unitId,
      accountId,
      orderNumber: `O-${++count}`,
      lineKey: made,
      shippedOn: input.shippedOn,
      termsVersionId: versionId,
      condition: input.condition ?? "new",
      buyerKind: "business",
      country: "GB",
      endedOn: input.endedOn ?? null,
      createdAt: at,
    });
    await windows(made, input.unitId, null, input.shippedOn, input.coverEnd, input.doaEnd);
    return made;
  }
  async function windows(
    saleLineId: string,
    unitId: string,
    installationId: string | null,
    firstOn: string,
    coverEnd?: string,
    doaEnd?: string,
  ) {
    for (const [kind, lastOn] of [["cover", coverEnd] as const, ["doa", doaEnd] as const])
      if (lastOn)
        await db.insert(coverWindows).values({
          id: id(),
          saleLineId,
          accountId,
          unitId,
          installationId,
          clauseId,
          kind,
          firstOn,
          lastOn,
          engine: "test",
        });
  }
  async function place(input: {
    unitId: string;
    parentUnitId: string;
    saleLineId: string;
    fromOn: string;
    toOn?: string;
    coverEnd?: string;
    doaEnd?: string;
    source?: "as_built" | "swap";
  }): Promise<void> {
    const made = id();
    await db.insert(installations).values({
      id: made,
      parentUnitId: input.parentUnitId,
      unitId: input.unitId,
      slot: `S${++count}`,
      saleLineId: input.saleLineId,
      source: input.source ?? "as_built",
      fromOn: input.fromOn,
      toOn: input.toOn ?? null,
      createdAt: at,
    });
    await windows(input.saleLineId, input.unitId, made, input.fromOn, input.coverEnd, input.doaEnd);
  }
  /** A return of a unit, claimed on a day; with `outcome` the bench has judged it. */
  async function returned(input: {
    unitId: string;
    claimOn: string;
    outcome?: TestOutcome;
    rmaState?: "authorized" | "withdrawn" | "settled";
    lineState?: "open" | "received" | "cancelled" | "settled";
  }): Promise<void> {
    const [ticketId, ticketUnitId, rmaId, lineId] = [id(), id(), id(), id()];
    const receivedAt = new Date(`${input.claimOn}T09:00:00Z`);
    await db.insert(tickets).values({
      id: ticketId,
      number: ++count,
      accountId,
      personName: "Ilse Tarn",
      personEmail: "ilse@lowmere.example",
      channel: "portal",
      subject: "A fault",
      faultWords: "It fails.",
      receivedAt,
      claimOn: input.claimOn,
      waitingOn: "bench",
      waitingFor: "the test",
      lastEntryAt: receivedAt,
      lastEntryLine: "reported",
      createdAt: receivedAt,
    });
    await db
      .insert(ticketUnits)
      .values({ id: ticketUnitId, ticketId, accountId, unitId: input.unitId, state: "tied", createdAt: at });
    await db.insert(rmas).values({
      id: rmaId,
      number: `RMA-${++count}`,
      ticketId,
      accountId,
      state: input.rmaState ?? "authorized",
      remedy: "advance_replacement",
      siteId,
      createdAt: receivedAt,
    });
    await db.insert(rmaLines).values({
      id: lineId,
      rmaId,
      accountId,
      ticketUnitId,
      unitId: input.unitId,
      remedy: "advance_replacement",
      faultWords: "It fails.",
      state: input.lineState ?? (input.outcome ? "settled" : "received"),
      sort: 0,
    });
    if (input.outcome)
      await db.insert(benchTests).values({
        id: id(),
        rmaLineId: lineId,
        accountId,
        unitId: input.unitId,
        sheet: "drive",
        sheetIssue: 1,
        startedAt: at,
        startedByName: "Ro",
        scanIn: "x",
        outcome: input.outcome,
        closedAt: at,
        closedByName: "Ro",
      });
  }
  return { unit, lot, sale, place, returned };
}
