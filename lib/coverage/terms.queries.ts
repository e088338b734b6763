import { and, asc, desc, eq, getTableColumns, inArray, isNotNull, isNull, lt, sql } from "drizzle-orm";
import { read, type Tx } from "@/db/client";
import { clauses, coverageDecisions, terms, termsPreviews, termsVersions } from "@/db/schema/coverage";
import { accounts, installations, saleLines, units } from "@/db/schema/ledger";
import { tickets, ticketUnits } from "@/db/schema/tickets";
import type { Ctx } from "@/lib/ctx";
import { saleFactsFor, type SaleUnits } from "./queries";
import type { PreviewAnswer, PreviewView } from "./previews";
import type { ClauseFact } from "./schema";

const { termsVersionId: _of, sort: _sort, ...clauseColumns } = getTableColumns(clauses);

/** The clauses of one issue in the order people cite them. */
export const clausesOf = (tx: Tx, versionId: string): Promise<ClauseFact[]> =>
  tx
    .select(clauseColumns)
    .from(clauses)
    .where(eq(clauses.termsVersionId, versionId))
    .orderBy(asc(clauses.sort), asc(clauses.number));

export type BoardIssue = {
  versionId: string;
  termsId: string;
  code: string;
  name: string;
  issue: number;
  effectiveOn: string;
  publishedAt: Date | null;
  note: string;
  madeByName: string;
  sold: number;
};

/** All terms, each with its draft first and its issues from the newest on. */
export async function termsBoard(ctx: Ctx): Promise<BoardIssue[]> {
  return read(ctx, async (tx) => {
    const issues = await tx
      .select({
        versionId: termsVersions.id,
        termsId: terms.id,
        code: terms.code,
        name: terms.name,
        issue: termsVersions.issue,
        effectiveOn: termsVersions.effectiveOn,
        publishedAt: termsVersions.publishedAt,
        note: termsVersions.note,
        madeByName: termsVersions.madeByName,
      })
      .from(termsVersions)
      .innerJoin(terms, eq(terms.id, termsVersions.termsId))
      .orderBy(
        asc(terms.code),
        sql`${termsVersions.publishedAt} is not null`,
        desc(termsVersions.effectiveOn),
        desc(termsVersions.issue),
      )
      .limit(500);
    const sold = new Map(
      (
        await tx
          .select({ id: saleLines.termsVersionId, n: sql<number>`count(*)::int` })
          .from(saleLines)
          .groupBy(saleLines.termsVersionId)
      ).map((s) => [s.id, s.n]),
    );
    return issues.map((i) => ({ ...i, sold: sold.get(i.versionId) ?? 0 }));
  });
}

/** The newest published issue of some terms, but for one that is named. */
export async function lastPublished(tx: Tx, termsId: string, below?: number) {
  const [row] = await tx
    .select({
      id: termsVersions.id,
      issue: termsVersions.issue,
      effectiveOn: termsVersions.effectiveOn,
    })
    .from(termsVersions)
    .where(
      and(
        eq(termsVersions.termsId, termsId),
        isNotNull(termsVersions.publishedAt),
        below === undefined ? undefined : lt(termsVersions.issue, below),
      ),
    )
    .orderBy(desc(termsVersions.issue))
    .limit(1);
  return row ?? null;
}

/** One issue or draft whole, with the published issue it follows. */
export async function termsIssue(ctx: Ctx, versionId: string) {
  return read(ctx, async (tx) => {
    const [version] = await tx
      .select({
        id: termsVersions.id,
        termsId: terms.id,
        code: terms.code,
        name: terms.name,
        issue: termsVersions.issue,
        effectiveOn: termsVersions.effectiveOn,
        publishedAt: termsVersions.publishedAt,
        note: termsVersions.note,
        version: termsVersions.version,
        madeByName: termsVersions.madeByName,
      })
      .from(termsVersions)
      .innerJoin(terms, eq(terms.id, termsVersions.termsId))
      .where(eq(termsVersions.id, versionId))
      .limit(1);
    if (!version) return null;
    const last = await lastPublished(tx, version.termsId, version.publishedAt ? version.issue : undefined);
    const siblings = await tx
      .select({
        id: termsVersions.id,
        issue: termsVersions.issue,
        effectiveOn: termsVersions.effectiveOn,
        publishedAt: termsVersions.publishedAt,
      })
      .from(termsVersions)
      .where(eq(termsVersions.termsId, version.termsId))
      .orderBy(desc(termsVersions.effectiveOn), desc(termsVersions.issue));
    const draft = siblings.find((s) => s.publishedAt === null) ?? null;
    return {
      ...version,
      clauses: await clausesOf(tx, version.id),
      before: last ? { ...last, clauses: await clausesOf(tx, last.id) } : null,
      draftId: draft?.id ?? null,
      published: siblings.filter((s) => s.publishedAt !== null),
    };
  });
}
export type TermsIssue = NonNullable<Awaited<ReturnType<typeof termsIssue>>>;

/** Sales made under an issue; and those shipped from a day on under any issue of its terms. */
export async function salesUnder(ctx: Ctx, at: { versionId: string; termsId: string; fromOn: string }) {
  return read(ctx, async (tx) => {
    const [row] = await tx
      .select({
        under: sql<number>`(count(*) filter (where ${saleLines.termsVersionId} = ${at.versionId}))::int`,
        ofTerms: sql<number>`count(*)::int`,
        shippedSince: sql<number>`(count(*) filter (where ${saleLines.shippedOn} >= ${at.fromOn}))::int`,
      })
      .from(saleLines)
      .innerJoin(termsVersions, eq(termsVersions.id, saleLines.termsVersionId))
      .where(eq(termsVersions.termsId, at.termsId));
    return row ?? { under: 0, ofTerms: 0, shippedSince: 0 };
  });
}

const previewColumns = {
  id: termsPreviews.id,
  versionId: termsPreviews.termsVersionId,
  ofVersion: termsPreviews.ofVersion,
  state: termsPreviews.state,
  total: termsPreviews.total,
  done: termsPreviews.done,
  answer: termsPreviews.answer,
  error: termsPreviews.error,
  createdByName: termsPreviews.createdByName,
  createdAt: termsPreviews.createdAt,
  finishedAt: termsPreviews.finishedAt,
};

/** The newest preview of a draft. */
export async function newestPreview(ctx: Ctx, versionId: string): Promise<PreviewView | null> {
  const [row] = await read(ctx, (tx) =>
    tx
      .select(previewColumns)
      .from(termsPreviews)
      .where(eq(termsPreviews.termsVersionId, versionId))
      .orderBy(desc(termsPreviews.createdAt), desc(termsPreviews.id))
      .limit(1),
  );
  return row ? { ...row, answer: row.answer as PreviewAnswer } : null;
}

const issuesOf = (tx: Tx, termsId: string) =>
  tx.select({ id: termsVersions.id }).from(termsVersions).where(eq(termsVersions.termsId, termsId));

/** Open sales under any issue of some terms; open tickets with a decision by one of them. */
export async function previewTotals(tx: Tx, termsId: string): Promise<{ sales: number; tickets: number }> {
  const [sales] = await tx
    .select({ n: sql<number>`count(*)::int` })
    .from(saleLines)
    .where(and(inArray(saleLines.termsVersionId, issuesOf(tx, termsId)), isNull(saleLines.endedOn)));
  const [open] = await tx
    .select({ n: sql<number>`count(distinct ${tickets.id})::int` })
    .from(tickets)
    .innerJoin(coverageDecisions, eq(coverageDecisions.ticketId, tickets.id))
    .innerJoin(saleLines, eq(saleLines.id, coverageDecisions.saleLineId))
    .where(and(isNull(tickets.closedAt), inArray(saleLines.termsVersionId, issuesOf(tx, termsId))));
  return { sales: sales?.n ?? 0, tickets: open?.n ?? 0 };
}

/** The next open sales of some terms after a place, by id. */
export async function nextSales(
  ctx: Ctx,
  at: { termsId: string; afterId: string | null; limit: number },
): Promise<{ ids: string[]; sales: SaleUnits[]; ours: Set<string> }> {
  return read(ctx, async (tx) => {
    const found = await tx
      .select({ id: saleLines.id })
      .from(saleLines)
      .where(
        and(
          inArray(saleLines.termsVersionId, issuesOf(tx, at.termsId)),
          isNull(saleLines.endedOn),
          at.afterId === null ? undefined : sql`${saleLines.id} > ${at.afterId}`,
        ),
      )
      .orderBy(asc(saleLines.id))
      .limit(at.limit);
    const ids = found.map((f) => f.id);
    const ours = await tx
      .select({ id: clauses.id })
      .from(clauses)
      .where(inArray(clauses.termsVersionId, issuesOf(tx, at.termsId)));
    const loaded = new Map((await saleFactsFor({ ...ctx, tx }, ids)).map((s) => [s.saleLineId, s] as const));
    return {
      ids,
      sales: ids.flatMap((id) => loaded.get(id) ?? []),
      ours: new Set(ours.map((c) => c.id)),
    };
  });
}

/** What people call some units: serial, system, slot, order and customer. */
export async function namesOf(tx: Tx, of: readonly { saleLineId: string; installationId: string | null }[]) {
  const saleIds = [...new Set(of.map((o) => o.saleLineId))];
  const placeIds = of.flatMap((o) => (o.installationId ? [o.installationId] : []));
  if (saleIds.length === 0) return { sales: new Map(), places: new Map() };
  const sales = await tx
    .select({
      id: saleLines.id,
      serial: units.serial,
      orderNumber: saleLines.orderNumber,
      accountName: accounts.name,
    })
    .from(saleLines)
    .innerJoin(units, eq(units.id, saleLines.unitId))
    .innerJoin(accounts, eq(accounts.id, saleLines.accountId))
    .where(inArray(saleLines.id, saleIds));
  const places =
    placeIds.length === 0
      ? []
      : await tx
          .select({ id: installations.id, serial: units.serial, slot: installations.slot })
          .from(installations)
          .innerJoin(units, eq(units.id, installations.unitId))
          .where(inArray(installations.id, placeIds));
  return { sales: new Map(sales.map((s) => [s.id, s])), places: new Map(places.map((p) => [p.id, p])) };
}

/** The next open tickets that have a decision by some terms, with the newest decision of each unit. */
export async function nextTickets(
  tx: Tx,
  at: { termsId: string; afterId: string | null; limit: number },
): Promise<{ id: string; number: number; decisions: { inputs: unknown; serial: string | null }[] }[]> {
  const open = await tx
    .selectDistinct({ id: tickets.id, number: tickets.number })
    .from(tickets)
    .innerJoin(coverageDecisions, eq(coverageDecisions.ticketId, tickets.id))
    .innerJoin(saleLines, eq(saleLines.id, coverageDecisions.saleLineId))
    .where(
      and(
        isNull(tickets.closedAt),
        inArray(saleLines.termsVersionId, issuesOf(tx, at.termsId)),
        at.afterId === null ? undefined : sql`${tickets.id} > ${at.afterId}`,
      ),
    )
    .orderBy(asc(tickets.id))
    .limit(at.limit);
  if (open.length === 0) return [];
  const newest = await tx
    .selectDistinctOn([coverageDecisions.ticketId, coverageDecisions.unitId], {
      ticketId: coverageDecisions.ticketId,
      inputs: coverageDecisions.inputs,
      serial: units.serial,
      versionId: saleLines.termsVersionId,
      tie: ticketUnits.state,
    })
    .from(coverageDecisions)
    .innerJoin(saleLines, eq(saleLines.id, coverageDecisions.saleLineId))
    .leftJoin(units, eq(units.id, coverageDecisions.unitId))
    .leftJoin(ticketUnits, eq(ticketUnits.id, coverageDecisions.ticketUnitId))
    .where(
      inArray(
        coverageDecisions.ticketId,
        open.map((t) => t.id),
      ),
    )
    .orderBy(coverageDecisions.ticketId, coverageDecisions.unitId, desc(coverageDecisions.madeAt));
  const issues = new Set((await issuesOf(tx, at.termsId)).map((v) => v.id));
  return open.map((t) => ({
    ...t,
    decisions: newest.filter((d) => d.ticketId === t.id && d.tie !== "dismissed" && issues.has(d.versionId)),
  }));
}
