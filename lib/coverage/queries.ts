import { and, asc, desc, eq, inArray, isNull, sql } from "drizzle-orm";
import { read, type Tx } from "@/db/client";
import { clauses, coverageDecisions, coverWindows, terms, termsVersions } from "@/db/schema/coverage";
import { accounts, coverPauses, installations, models, saleLines, units } from "@/db/schema/ledger";
import { daysBetween } from "@/lib/base/civil";
import { showDayShort } from "@/lib/base/show";
import type { Ctx } from "@/lib/ctx";
import { defaultSite } from "@/lib/ledger/queries";
import type { Site } from "@/lib/ledger/schema";
import type { ClauseFact, CoverRow, CoverState, CoverView, Decision, SaleFact, TreePart } from "./schema";
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
  remedies: clauses.remedies,
  dueBackDays: clauses.dueBackDays,
  enduranceHours: clauses.enduranceHours,
  exclusion: clauses.exclusion,
  evidence: clauses.evidence,
  feeKind: clauses.feeKind,
  feeCents: clauses.feeCents,
  words: clauses.words,
};

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
  };
  unit: CoverView["unit"];
  clauses: ClauseFact[];
  tree: TreePart[];
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
    const [clauseRows, pauses, tree] = [
      await tx
        .select(clauseColumns)
        .from(clauses)
        .where(eq(clauses.termsVersionId, sale.termsVersionId))
        .orderBy(asc(clauses.sort)),
      await tx
        .select({ from: coverPauses.fromOn, to: coverPauses.toOn })
        .from(coverPauses)
        .where(eq(coverPauses.saleLineId, sale.id)),
      await treeOfSale(tx, sale.id, sale.unitId),
    ];
    const { serial, modelCode, modelName, family, unitCondition, ...rest } = sale;
    return {
      sale: { ...rest, pauses },
      unit: {
        id: sale.unitId,
        serial,
        modelCode,
        modelName,
        condition: rest.condition ?? unitCondition,
        family,
      },
      clauses: clauseRows,
      tree,
      site,
    };
  });
}

const saleColumns = {
  id: saleLines.id,
  unitId: saleLines.unitId,
  accountId: saleLines.accountId,
  accountName: accounts.name,
  orderNumber: saleLines.orderNumber,
  shippedOn: saleLines.shippedOn,
  deliveredOn: saleLines.deliveredOn,
  invoicedOn: saleLines.invoicedOn,
  condition: saleLines.condition,
  buyerKind: saleLines.buyerKind,
  country: saleLines.country,
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
  const push = (
    at: {
      unitId: string;
      serial: string;
      slot: string | null;
      family: string;
      modelName: string;
      depth: number;
    },
    swappedOn: string | null,
  ) => {
    for (const w of windowsFor(sale, found.clauses, { family: at.family, swappedOn }, site)) {
      rows.push({
        ...at,
        clauseNumber: w.clauseNumber,
        clauseTitle: w.clauseTitle,
        kind: w.kind,
        firstOn: w.firstOn,
        lastOn: w.lastOn,
        state: stateOf(w, onDay),
        words: coverWords(w, onDay),
        claimed: at.unitId === unitId,
      });
    }
  };
  push(
    {
      unitId: unit.id,
      serial: unit.serial,
      slot: null,
      family: unit.family,
      modelName: unit.modelName,
      depth: 0,
    },
    null,
  );
  for (const p of tree) push(p, p.source === "swap" ? p.fromOn : null);
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
    rows,
    tree,
  };
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

export async function termsList(ctx: Ctx) {
  return read(ctx, (tx) =>
    tx
      .select({
        versionId: termsVersions.id,
        code: terms.code,
        name: terms.name,
        issue: termsVersions.issue,
        effectiveOn: termsVersions.effectiveOn,
        publishedAt: termsVersions.publishedAt,
        note: termsVersions.note,
        sold: sql<number>`(select count(*)::int from sale_line s where s.terms_version_id = ${termsVersions.id})`,
      })
      .from(termsVersions)
      .innerJoin(terms, eq(terms.id, termsVersions.termsId))
      .orderBy(asc(terms.code), desc(termsVersions.issue))
      .limit(200),
  );
}

export async function termsVersion(ctx: Ctx, id: string) {
  return read(ctx, async (tx) => {
    const [version] = await tx
      .select({
        id: termsVersions.id,
        code: terms.code,
        name: terms.name,
        issue: termsVersions.issue,
        effectiveOn: termsVersions.effectiveOn,
        publishedAt: termsVersions.publishedAt,
        note: termsVersions.note,
      })
      .from(termsVersions)
      .innerJoin(terms, eq(terms.id, termsVersions.termsId))
      .where(eq(termsVersions.id, id))
      .limit(1);
    if (!version) return null;
    const list = await tx
      .select(clauseColumns)
      .from(clauses)
      .where(eq(clauses.termsVersionId, id))
      .orderBy(asc(clauses.sort));
    return { ...version, clauses: list };
  });
}
