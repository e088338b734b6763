import { and, asc, desc, eq, gt, gte, inArray, isNull, lte, sql } from "drizzle-orm";
import { read, type Tx } from "@/db/client";
import { clauses, coverageDecisions, coverWindows, terms, termsVersions } from "@/db/schema/coverage";
import {
  accounts,
  coverPauses,
  installations,
  models,
  saleLines,
  saleTransfers,
  units,
} from "@/db/schema/ledger";
import { daysBetween } from "@/lib/base/civil";
import { showDayShort } from "@/lib/base/show";
import type { Ctx } from "@/lib/ctx";
import { defaultSite } from "@/lib/ledger/queries";
import type { Site } from "@/lib/ledger/schema";
import { differenceOf, type Difference } from "./difference";
import { readInputs } from "./rules";
import type {
  ClauseFact,
  CoverRow,
  CoverState,
  CoverView,
  DecideInput,
  Decision,
  PartFact,
  SaleFact,
  TreePart,
} from "./schema";
import { windowsFor } from "./windows";

const clauseColumns = {
  id: clauses.id,
  number: clauses.number,
  kind: clauses.kind,
  title: clauses.title,
  families: clauses.families,
  condition: clauses.condition,
  period: clauses.period,
  startBasis: clauses.startBasis,
  deliveryGraceDays: clauses.deliveryGraceDays,
  dayRule: clauses.dayRule,
  rolls: clauses.rolls,
  clockStops: clauses.clockStops,
  replacedRule: clauses.replacedRule,
  transferRule: clauses.transferRule,
  remedies: clauses.remedies,
  dueBackDays: clauses.dueBackDays,
  holdCents: clauses.holdCents,
  freight: clauses.freight,
  responseHours: clauses.responseHours,
  enduranceHours: clauses.enduranceHours,
  enduranceTb: clauses.enduranceTb,
  exclusion: clauses.exclusion,
  evidence: clauses.evidence,
  feeKind: clauses.feeKind,
  feeCents: clauses.feeCents,
  words: clauses.words,
};

/** A sale as the engine reads it, with the clauses it was made under. */
export type SaleFacts = { accountId: string; sale: SaleFact; swaps: string[]; clauses: ClauseFact[] };

export type SaleCase = {
  sale: SaleFact & {
    id: string;
    unitId: string;
    accountId: string;
    accountName: string;
    orderNumber: string;
    siteNote: string | null;
    termsVersionId: string;
    termsName: string;
    termsIssue: number;
    endedOn: string | null;
    swaps: string[];
  };
  unit: CoverView["unit"];
  clauses: ClauseFact[];
  tree: TreePart[];
  /** Sales that cover parts moved here from other systems, as far as the one who asks may see them. */
  origins: Map<string, SaleFacts>;
  site: Site;
};

/**
 * Everything the engine needs of one unit: its sale (or that of the system it stands in),
 * the clauses it was sold under and the tree with every swap. The newest sale of a serial decides.
 */
export async function saleCase(ctx: Ctx, unitId: string): Promise<SaleCase | null> {
  const site = await defaultSite(ctx);
  return read(ctx, async (tx) => {
    const own = await newestSale(tx, unitId);
    const sale = own && own.endedOn === null ? own : ((await newestSaleOfParent(tx, unitId)) ?? own);
    if (!sale) return null;
    const tree = await treeOfSale(tx, sale.id, sale.unitId);
    const elsewhere = tree.flatMap((p) => (p.coverSaleLineId ? [p.coverSaleLineId] : []));
    const facts = await factsOfSales(tx, [sale.id, ...elsewhere]);
    const { serial, modelCode, modelName, family, unitCondition, ...rest } = sale;
    const mine = facts.get(sale.id)!;
    return {
      sale: { ...rest, ...mine.sale, swaps: mine.swaps },
      unit: {
        id: sale.unitId,
        serial,
        modelCode,
        modelName,
        condition: rest.condition ?? unitCondition,
        family,
      },
      clauses: mine.clauses,
      tree,
      origins: facts,
      site,
    };
  });
}

/** Sales with their clauses, pauses and transfers, by sale line: four statements however many. */
export async function factsOfSales(tx: Tx, ids: readonly string[]): Promise<Map<string, SaleFacts>> {
  const of = [...new Set(ids)];
  if (of.length === 0) return new Map();
  const sales = await tx
    .select({
      id: saleLines.id,
      accountId: saleLines.accountId,
      shippedOn: saleLines.shippedOn,
      deliveredOn: saleLines.deliveredOn,
      invoicedOn: saleLines.invoicedOn,
      installedOn: saleLines.installedOn,
      condition: saleLines.condition,
      buyerKind: saleLines.buyerKind,
      country: saleLines.country,
      swaps: saleLines.swaps,
      termsVersionId: saleLines.termsVersionId,
    })
    .from(saleLines)
    .where(inArray(saleLines.id, of));
  const versions = [...new Set(sales.map((s) => s.termsVersionId))];
  const clauseRows =
    versions.length === 0
      ? []
      : await tx
          .select({ versionId: clauses.termsVersionId, ...clauseColumns })
          .from(clauses)
          .where(inArray(clauses.termsVersionId, versions))
          .orderBy(asc(clauses.sort));
  const byVersion = new Map(
    versions.map((v) => [
      v,
      clauseRows.filter((c) => c.versionId === v).map(({ versionId: _, ...c }): ClauseFact => c),
    ]),
  );
  const pauses = groupBy(
    await tx
      .select({ of: coverPauses.saleLineId, from: coverPauses.fromOn, to: coverPauses.toOn })
      .from(coverPauses)
      .where(inArray(coverPauses.saleLineId, of)),
  );
  const transfers = groupBy(
    await tx
      .select({ of: saleTransfers.saleLineId, on: saleTransfers.onDay, noticedOn: saleTransfers.noticedOn })
      .from(saleTransfers)
      .where(inArray(saleTransfers.saleLineId, of))
      .orderBy(asc(saleTransfers.onDay)),
  );
  return new Map(
    sales.map(({ id, accountId, swaps, termsVersionId, ...sale }) => [
      id,
      {
        accountId,
        swaps,
        clauses: byVersion.get(termsVersionId) ?? [],
        sale: { ...sale, pauses: pauses.get(id) ?? [], transfers: transfers.get(id) ?? [] },
      },
    ]),
  );
}

function groupBy<T extends { of: string }>(rows: T[]): Map<string, Omit<T, "of">[]> {
  const out = new Map<string, Omit<T, "of">[]>();
  for (const { of, ...rest } of rows) {
    const list = out.get(of);
    if (list) list.push(rest);
    else out.set(of, [rest]);
  }
  return out;
}

type Standing = Pick<TreePart, "family" | "swaps" | "coverSaleLineId" | "givenOn" | "noticedOn" | "fromOn">;
export type UnitFacts = { sale: SaleFact; clauses: ClauseFact[]; part: PartFact };

/**
 * Sale, clauses and part as the engine takes them: of the unit that was sold, or of a part that
 * stands in it. A part that was moved here keeps the terms it was sold under; where it came from
 * another customer, it was given on that day.
 */
export function unitFacts(
  holder: SaleFacts,
  family: string,
  standing: Standing | null,
  origins: ReadonlyMap<string, SaleFacts>,
): UnitFacts {
  if (!standing)
    return {
      sale: holder.sale,
      clauses: holder.clauses,
      part: { family, within: null, swaps: holder.swaps, originKnown: true },
    };
  const { coverSaleLineId, givenOn, noticedOn, fromOn } = standing;
  const part = { family: standing.family, within: "system" };
  if (coverSaleLineId === null)
    return {
      sale: holder.sale,
      clauses: holder.clauses,
      part: { ...part, swaps: [...holder.swaps, ...standing.swaps].sort(), originKnown: true },
    };
  const origin = origins.get(coverSaleLineId);
  if (!origin)
    return {
      sale: holder.sale,
      clauses: holder.clauses,
      part: { ...part, swaps: [], originKnown: false },
    };
  const given = givenOn === null ? [] : [{ on: givenOn, noticedOn }];
  return {
    sale: {
      ...origin.sale,
      buyerKind: holder.sale.buyerKind,
      country: holder.sale.country,
      // What became of its first system after it left is not about it; what becomes of this one is.
      pauses: origin.sale.pauses.filter((p) => p.from <= fromOn),
      transfers: [
        ...origin.sale.transfers.filter((t) => t.on <= fromOn),
        ...given,
        ...holder.sale.transfers.filter((t) => t.on >= fromOn),
      ],
    },
    clauses: origin.clauses,
    part: { ...part, swaps: [...origin.swaps, ...standing.swaps].sort(), originKnown: true },
  };
}

/** The facts of the unit asked for within its case: the system itself, or a part that stands in it now. */
export function factsIn(found: SaleCase, unitId: string): UnitFacts | null {
  const holder = {
    accountId: found.sale.accountId,
    sale: found.sale,
    swaps: found.sale.swaps,
    clauses: found.clauses,
  };
  const pick = (f: UnitFacts): UnitFacts => ({ ...f, sale: onlySale(f.sale) });
  if (unitId === found.unit.id) return pick(unitFacts(holder, found.unit.family, null, found.origins));
  const standing = found.tree.find((p) => p.unitId === unitId);
  return standing ? pick(unitFacts(holder, standing.family, standing, found.origins)) : null;
}

/** What a decision keeps of a sale, and no more. */
const onlySale = (s: SaleFact): SaleFact => ({
  shippedOn: s.shippedOn,
  deliveredOn: s.deliveredOn,
  invoicedOn: s.invoicedOn,
  installedOn: s.installedOn,
  condition: s.condition,
  buyerKind: s.buyerKind,
  country: s.country,
  pauses: s.pauses,
  transfers: s.transfers,
});

export type SaleUnits = {
  saleLineId: string;
  accountId: string;
  unitId: string;
  units: { unitId: string; installationId: string | null; open: boolean; facts: UnitFacts }[];
};

/**
 * Sales with every unit that stands or stood under them, as the engine takes them. For work on many
 * at once: six statements however many sales.
 */
export async function saleFactsFor(ctx: Ctx, saleLineIds: readonly string[]): Promise<SaleUnits[]> {
  if (saleLineIds.length === 0) return [];
  return read(ctx, async (tx) => {
    const ids = [...saleLineIds];
    const roots = await tx
      .select({
        saleLineId: saleLines.id,
        accountId: saleLines.accountId,
        unitId: saleLines.unitId,
        family: models.family,
      })
      .from(saleLines)
      .innerJoin(units, eq(units.id, saleLines.unitId))
      .innerJoin(models, eq(models.id, units.modelId))
      .where(inArray(saleLines.id, ids));
    const standing = await tx
      .select({
        of: installations.saleLineId,
        id: installations.id,
        unitId: installations.unitId,
        family: models.family,
        fromOn: installations.fromOn,
        toOn: installations.toOn,
        swaps: installations.swaps,
        coverSaleLineId: installations.coverSaleLineId,
        givenOn: installations.givenOn,
        noticedOn: installations.noticedOn,
      })
      .from(installations)
      .innerJoin(units, eq(units.id, installations.unitId))
      .innerJoin(models, eq(models.id, units.modelId))
      .where(inArray(installations.saleLineId, ids));
    const elsewhere = standing.flatMap((p) => (p.coverSaleLineId ? [p.coverSaleLineId] : []));
    const facts = await factsOfSales(tx, [...ids, ...elsewhere]);
    const under = groupBy(standing.flatMap((p) => (p.of ? [{ ...p, of: p.of }] : [])));
    return roots.map((r) => {
      const holder = facts.get(r.saleLineId)!;
      return {
        saleLineId: r.saleLineId,
        accountId: r.accountId,
        unitId: r.unitId,
        units: [
          {
            unitId: r.unitId,
            installationId: null,
            open: true,
            facts: unitFacts(holder, r.family, null, facts),
          },
          ...(under.get(r.saleLineId) ?? []).map((p) => ({
            unitId: p.unitId,
            installationId: p.id,
            open: p.toOn === null,
            facts: unitFacts(holder, r.family, p, facts),
          })),
        ],
      };
    });
  });
}

const saleColumns = {
  id: saleLines.id,
  unitId: saleLines.unitId,
  accountId: saleLines.accountId,
  accountName: accounts.name,
  orderNumber: saleLines.orderNumber,
  condition: saleLines.condition,
  siteNote: saleLines.siteNote,
  termsVersionId: saleLines.termsVersionId,
  termsName: terms.name,
  termsIssue: termsVersions.issue,
  endedOn: saleLines.endedOn,
  serial: units.serial,
  modelCode: models.code,
  modelName: models.name,
  family: models.family,
  unitCondition: units.condition,
};

async function newestSale(tx: Tx, unitId: string) {
  const rows = await tx
    .select(saleColumns)
    .from(saleLines)
    .innerJoin(accounts, eq(accounts.id, saleLines.accountId))
    .innerJoin(units, eq(units.id, saleLines.unitId))
    .innerJoin(models, eq(models.id, units.modelId))
    .innerJoin(termsVersions, eq(termsVersions.id, saleLines.termsVersionId))
    .innerJoin(terms, eq(terms.id, termsVersions.termsId))
    .where(eq(saleLines.unitId, unitId))
    .orderBy(sql`${saleLines.endedOn} is not null`, desc(saleLines.shippedOn), desc(saleLines.createdAt))
    .limit(1);
  return rows[0] ?? null;
}

async function newestSaleOfParent(tx: Tx, unitId: string) {
  const rows = await tx
    .select({ saleLineId: installations.saleLineId, root: saleLines.unitId })
    .from(installations)
    .innerJoin(saleLines, eq(saleLines.id, installations.saleLineId))
    .where(eq(installations.unitId, unitId))
    .orderBy(sql`${installations.toOn} is not null`, desc(installations.fromOn))
    .limit(1);
  return rows[0] ? newestSale(tx, rows[0].root) : null;
}

/** The tree as it stands under a sale, parents first, with what stood in each slot before. */
async function treeOfSale(tx: Tx, saleLineId: string, rootId: string): Promise<TreePart[]> {
  const rows = await tx
    .select({
      unitId: units.id,
      installationId: installations.id,
      parentUnitId: installations.parentUnitId,
      serial: units.serial,
      slot: installations.slot,
      family: models.family,
      modelCode: models.code,
      modelName: models.name,
      fromOn: installations.fromOn,
      toOn: installations.toOn,
      removedReason: installations.removedReason,
      source: installations.source,
      swaps: installations.swaps,
      coverSaleLineId: installations.coverSaleLineId,
      givenOn: installations.givenOn,
      noticedOn: installations.noticedOn,
    })
    .from(installations)
    .innerJoin(units, eq(units.id, installations.unitId))
    .innerJoin(models, eq(models.id, units.modelId))
    .where(eq(installations.saleLineId, saleLineId))
    .orderBy(asc(installations.slot), asc(installations.fromOn));
  const natural = new Intl.Collator("en", { numeric: true });
  const open = rows.filter((r) => r.toOn === null).sort((a, b) => natural.compare(a.slot, b.slot));
  const out: TreePart[] = [];
  const walk = (parent: string, depth: number) => {
    for (const r of open.filter((o) => o.parentUnitId === parent)) {
      out.push({
        unitId: r.unitId,
        installationId: r.installationId,
        parentUnitId: r.parentUnitId,
        serial: r.serial,
        slot: r.slot,
        family: r.family,
        modelCode: r.modelCode,
        modelName: r.modelName,
        depth,
        fromOn: r.fromOn,
        source: r.source,
        swaps: r.swaps,
        coverSaleLineId: r.coverSaleLineId,
        givenOn: r.givenOn,
        noticedOn: r.noticedOn,
        was: rows
          .filter((w) => w.toOn !== null && w.parentUnitId === r.parentUnitId && w.slot === r.slot)
          .map((w) => ({ serial: w.serial, toOn: w.toOn!, reason: w.removedReason })),
      });
      if (depth < 6) walk(r.unitId, depth + 1);
    }
  };
  walk(rootId, 1);
  return out;
}

export function coverWords(w: { kind: "doa" | "cover"; lastOn: string }, onDay: string): string {
  const left = daysBetween(onDay, w.lastOn);
  if (left < 0)
    return w.kind === "doa" ? `ended ${showDayShort(w.lastOn)}` : `cover ended ${showDayShort(w.lastOn)}`;
  if (left <= 120)
    return `to ${showDayShort(w.lastOn)}, ${left === 0 ? "last day today" : left === 1 ? "1 day left" : `${left} days left`}`;
  return `to ${showDayShort(w.lastOn)}`;
}

/** Cover in words, with why it ends when it does where that is no plain period. */
function rowWords(
  w: { kind: "doa" | "cover"; lastOn: string; byFloor: boolean; cutOn: string | null },
  onDay: string,
): string {
  const words = coverWords(w, onDay);
  if (w.cutOn) return `${words}, when it was given on`;
  return w.byFloor ? `${words}, by the floor of a part we fitted` : words;
}

const stateOf = (w: { kind: "doa" | "cover"; firstOn: string; lastOn: string }, onDay: string): CoverState =>
  w.lastOn < onDay ? "ended" : w.kind === "doa" ? "doa" : "covered";

/**
 * Cover of a unit on a day, clause by clause and part by part. A part is shown within its system,
 * its own rows marked as claimed. Null when it was never sold, or not to this customer.
 */
export async function coverFor(ctx: Ctx, unitId: string, onDay: string): Promise<CoverView | null> {
  const found = await saleCase(ctx, unitId);
  if (!found) return null;
  const { sale, unit, tree, site } = found;
  const rows: CoverRow[] = [];
  const unread: string[] = [];
  const push = (at: {
    unitId: string;
    serial: string;
    slot: string | null;
    family: string;
    modelName: string;
    depth: number;
  }) => {
    const facts = factsIn(found, at.unitId)!;
    const windows = windowsFor(facts.sale, facts.clauses, facts.part, site);
    if (windows.length === 0) unread.push(at.unitId);
    for (const w of windows) {
      rows.push({
        ...at,
        clauseNumber: w.clauseNumber,
        clauseTitle: w.clauseTitle,
        kind: w.kind,
        firstOn: w.firstOn,
        lastOn: w.lastOn,
        state: stateOf(w, onDay),
        words: rowWords(w, onDay),
        claimed: at.unitId === unitId,
      });
    }
  };
  push({
    unitId: unit.id,
    serial: unit.serial,
    slot: null,
    family: unit.family,
    modelName: unit.modelName,
    depth: 0,
  });
  for (const p of tree) push(p);
  return {
    unit,
    claimedUnitId: unitId,
    saleLineId: sale.id,
    accountId: sale.accountId,
    accountName: sale.accountName,
    orderNumber: sale.orderNumber,
    buyerKind: sale.buyerKind,
    country: sale.country,
    shippedOn: sale.shippedOn,
    deliveredOn: sale.deliveredOn,
    siteNote: sale.siteNote,
    termsVersionId: sale.termsVersionId,
    termsName: sale.termsName,
    termsIssue: sale.termsIssue,
    onDay,
    pauses: sale.pauses,
    transfers: sale.transfers,
    rows,
    unread,
    tree,
  };
}

/** Sales with a DOA window that ends about some days: those a changed holiday may move. A page at a time. */
export async function salesEndingAbout(
  ctx: Ctx,
  ask: { from: string; to: string; after: string | null; limit: number },
): Promise<string[]> {
  const rows = await read(ctx, (tx) =>
    tx
      .selectDistinct({ id: coverWindows.saleLineId })
      .from(coverWindows)
      .where(
        and(
          eq(coverWindows.kind, "doa"),
          gte(coverWindows.lastOn, ask.from),
          lte(coverWindows.lastOn, ask.to),
          ask.after ? gt(coverWindows.saleLineId, ask.after) : undefined,
        ),
      )
      .orderBy(asc(coverWindows.saleLineId))
      .limit(ask.limit),
  );
  return rows.map((r) => r.id);
}

export type CoverSummary = {
  state: "covered" | "doa" | "part" | "ended" | "none";
  firstOn: string | null;
  lastOn: string | null;
  doaUntil: string | null;
};

/**
 * State of cover for lists, from the kept windows: one statement for a whole page.
 * `part` when the system's own cover has ended but a part's runs on, or the other way round.
 */
export async function coverSummaries(
  ctx: Ctx,
  unitIds: readonly string[],
  onDay: string,
): Promise<Map<string, CoverSummary>> {
  if (unitIds.length === 0) return new Map();
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        unitId: saleLines.unitId,
        partOf: coverWindows.unitId,
        kind: coverWindows.kind,
        firstOn: sql<string>`min(${coverWindows.firstOn})::text`,
        lastOn: sql<string>`max(${coverWindows.lastOn})::text`,
        minLast: sql<string>`min(${coverWindows.lastOn})::text`,
      })
      .from(coverWindows)
      .innerJoin(saleLines, eq(saleLines.id, coverWindows.saleLineId))
      .leftJoin(installations, eq(installations.id, coverWindows.installationId))
      .where(
        and(inArray(saleLines.unitId, [...unitIds]), isNull(saleLines.endedOn), isNull(installations.toOn)),
      )
      .groupBy(saleLines.unitId, coverWindows.unitId, coverWindows.kind),
  );
  const out = new Map<string, CoverSummary>();
  for (const unitId of unitIds) {
    const mine = rows.filter((r) => r.unitId === unitId);
    if (mine.length === 0) continue;
    const own =
      mine.find((r) => r.partOf === unitId && r.kind === "cover") ?? mine.find((r) => r.kind === "cover");
    const doa = mine.find((r) => r.partOf === unitId && r.kind === "doa");
    const covers = mine.filter((r) => r.kind === "cover");
    const running = covers.filter((r) => r.lastOn >= onDay).length;
    const state =
      doa && doa.lastOn >= onDay
        ? "doa"
        : running === 0
          ? "ended"
          : running < covers.length
            ? "part"
            : "covered";
    out.set(unitId, {
      state,
      firstOn: own?.firstOn ?? null,
      lastOn: own?.lastOn ?? null,
      doaUntil: doa?.lastOn ?? null,
    });
  }
  return out;
}

/** Inputs and answer of a ticket's decisions, each with the one before it for the same unit: to tell what changed. */
export async function differencesOf(ctx: Ctx, ticketId: string): Promise<Map<string, Difference>> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        id: coverageDecisions.id,
        previousId: coverageDecisions.previousId,
        inputs: coverageDecisions.inputs,
        answer: coverageDecisions.answer,
      })
      .from(coverageDecisions)
      .where(eq(coverageDecisions.ticketId, ticketId))
      .orderBy(asc(coverageDecisions.madeAt))
      .limit(200),
  );
  const stored = new Map(
    rows.map((r) => [r.id, { inputs: readInputs(r.inputs), answer: r.answer as Decision }]),
  );
  return new Map(
    rows.flatMap((r) => {
      const before = r.previousId ? stored.get(r.previousId) : undefined;
      return before ? [[r.id, differenceOf(before, stored.get(r.id)!)] as const] : [];
    }),
  );
}

/** What a decision about this unit would be taken on, were it claimed on a day: for trying facts, not for the record. */
export async function freshInputs(
  ctx: Ctx,
  unitId: string,
  ask: Pick<DecideInput, "what" | "claimOn" | "faultClass">,
): Promise<DecideInput | null> {
  const found = await saleCase(ctx, unitId);
  const of = found && factsIn(found, unitId);
  if (!found || !of || found.sale.endedOn !== null) return null;
  return {
    ...of,
    ...ask,
    evidence: { photos: 0, logs: 0 },
    established: [],
    ruledOut: [],
    readings: {},
    earlier: [],
    openRma: null,
    week: { workdays: found.site.workdays, holidays: found.site.holidays },
  };
}

/** The inputs of one stored decision, in today's shape: what a person may try other facts on. */
export async function decisionInputs(ctx: Ctx, decisionId: string): Promise<DecideInput | null> {
  const [row] = await read(ctx, (tx) =>
    tx
      .select({ inputs: coverageDecisions.inputs })
      .from(coverageDecisions)
      .where(eq(coverageDecisions.id, decisionId))
      .limit(1),
  );
  return row ? readInputs(row.inputs) : null;
}

export type DecisionView = {
  id: string;
  ticketId: string;
  unitId: string | null;
  answer: Decision;
  claimOn: string;
  madeByName: string;
  madeAt: Date;
  engine: string;
  ticketUnitId: string | null;
};
const decisionColumns = {
  id: coverageDecisions.id,
  ticketId: coverageDecisions.ticketId,
  ticketUnitId: coverageDecisions.ticketUnitId,
  unitId: coverageDecisions.unitId,
  answer: coverageDecisions.answer,
  claimOn: coverageDecisions.claimOn,
  madeByName: coverageDecisions.madeByName,
  madeAt: coverageDecisions.madeAt,
  engine: coverageDecisions.engine,
};

export async function decisionsOf(ctx: Ctx, ticketId: string): Promise<DecisionView[]> {
  const rows = await read(ctx, (tx) =>
    tx
      .select(decisionColumns)
      .from(coverageDecisions)
      .where(eq(coverageDecisions.ticketId, ticketId))
      .orderBy(asc(coverageDecisions.madeAt))
      .limit(200),
  );
  return rows.map((r) => ({ ...r, answer: r.answer as Decision }));
}

export async function decisionById(ctx: Ctx, id: string): Promise<DecisionView | null> {
  const rows = await read(ctx, (tx) =>
    tx.select(decisionColumns).from(coverageDecisions).where(eq(coverageDecisions.id, id)).limit(1),
  );
  return rows[0] ? { ...rows[0], answer: rows[0].answer as Decision } : null;
}
