import { and, desc, eq, inArray, isNull, lte, ne } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { clauses, coverageDecisions, coverWindows, terms, termsVersions } from "@/db/schema/coverage";
import { tickets } from "@/db/schema/tickets";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { parsePeriod } from "@/lib/base/period";
import { ok, refuse, type Result } from "@/lib/base/result";
import { showDay } from "@/lib/base/show";
import { actorName, type Ctx, type TxCtx } from "@/lib/ctx";
import { defaultSite } from "@/lib/ledger/queries";
import { CONDITIONS, FAMILIES } from "@/lib/ledger/schema";
import { factsIn, saleCase, saleFactsFor } from "./queries";
import { decide, ENGINE, inherited } from "./rules";
import {
  CLAUSE_FEES,
  CLAUSE_KINDS,
  DAY_RULES,
  EXCLUSIONS,
  FAULT_CLASSES,
  FREIGHT_RULES,
  REMEDIES,
  REPLACED_RULES,
  START_BASES,
  TRANSFER_RULES,
  type DecideInput,
  type Decision,
} from "./schema";
import { checkTerms, clauseOf } from "./terms";
import { windowsFor } from "./windows";

const PeriodText = z.string().superRefine((text, at) => {
  const read = parsePeriod(text);
  if (!read.ok) at.addIssue({ code: "custom", message: read.refusal.message });
});

const ClauseInput = z.object({
  number: z.string().regex(/^\d+(\.\d+)*$/, "Number clauses like 3 or 3.1."),
  kind: z.enum(CLAUSE_KINDS),
  title: z.string().min(1),
  families: z.array(z.enum(FAMILIES)).default([]),
  condition: z.enum(CONDITIONS).nullish(),
  period: PeriodText.nullish(),
  startBasis: z.enum(START_BASES).nullish(),
  deliveryGraceDays: z.number().int().min(0).max(60).default(0),
  dayRule: z.enum(DAY_RULES).default("event_day_excluded"),
  rolls: z.boolean().default(true),
  clockStops: z.boolean().default(true),
  replacedRule: z.enum(REPLACED_RULES).default("later_of_both"),
  transferRule: z.enum(TRANSFER_RULES).nullish(),
  remedies: z.array(z.enum(REMEDIES)).default([]),
  dueBackDays: z.number().int().min(1).max(120).nullish(),
  holdCents: z.number().int().min(0).nullish(),
  freight: z.enum(FREIGHT_RULES).nullish(),
  responseHours: z.number().int().min(1).max(400).nullish(),
  enduranceHours: z.number().int().positive().nullish(),
  enduranceTb: z.number().int().positive().nullish(),
  exclusion: z.enum(EXCLUSIONS).nullish(),
  evidence: z.array(z.string()).default([]),
  feeKind: z.enum(CLAUSE_FEES).nullish(),
  feeCents: z.number().int().min(0).nullish(),
  words: z.string().default(""),
});
const PublishTerms = z.object({
  code: z.string().regex(/^[A-Z0-9-]+$/, "Use capitals, digits and dashes."),
  name: z.string().min(1),
  effectiveOn: z.iso.date(),
  note: z.string().default(""),
  clauses: z.array(ClauseInput).min(1),
});

/** Publishes an issue of terms. From then on it never changes; a correction is the next issue. */
export async function publishTerms(
  ctx: Ctx,
  raw: z.input<typeof PublishTerms>,
): Promise<Result<{ versionId: string; issue: number }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(PublishTerms, raw);
  if (!input.ok) return input;
  const v = input.value;
  const wrong = checkTerms(v.clauses.map(clauseOf))[0];
  if (wrong) return refuse("invalid", `${wrong.number ? `Clause ${wrong.number}: ` : ""}${wrong.message}`);
  return transact(ctx, async (ctx) => {
    await ctx.tx.insert(terms).values({ id: ctx.newId(), code: v.code, name: v.name }).onConflictDoNothing();
    const [of] = await ctx.tx
      .select({ id: terms.id })
      .from(terms)
      .where(eq(terms.code, v.code))
      .for("update");
    const [last] = await ctx.tx
      .select({ issue: termsVersions.issue })
      .from(termsVersions)
      .where(eq(termsVersions.termsId, of!.id))
      .orderBy(desc(termsVersions.issue))
      .limit(1);
    const [draft] = await ctx.tx
      .select({ issue: termsVersions.issue })
      .from(termsVersions)
      .where(and(eq(termsVersions.termsId, of!.id), isNull(termsVersions.publishedAt)));
    if (draft)
      return refuse("conflict", `A draft of issue ${draft.issue} is open. Publish or discard that first.`);
    const versionId = ctx.newId();
    const issue = (last?.issue ?? 0) + 1;
    await ctx.tx.insert(termsVersions).values({
      id: versionId,
      termsId: of!.id,
      issue,
      effectiveOn: v.effectiveOn,
      note: v.note,
      createdAt: ctx.now,
    });
    await ctx.tx
      .insert(clauses)
      .values(v.clauses.map((c, sort) => ({ id: ctx.newId(), termsVersionId: versionId, ...c, sort })));
    await ctx.tx.update(termsVersions).set({ publishedAt: ctx.now }).where(eq(termsVersions.id, versionId));
    await audit(ctx, {
      act: "terms.publish",
      subject: ["terms_version", versionId],
      after: { code: v.code, issue, effectiveOn: v.effectiveOn },
    });
    return ok({ versionId, issue });
  });
}

const StoreDecision = z.object({
  ticketId: z.uuid(),
  ticketUnitId: z.uuid(),
  unitId: z.uuid(),
  claimOn: z.iso.date(),
  faultClass: z.enum(FAULT_CLASSES),
  what: z.string().min(1),
  evidence: z.object({ photos: z.number().int().min(0), logs: z.number().int().min(0) }),
  established: z.array(z.string()).default([]),
  ruledOut: z.array(z.string()).default([]),
  readings: z
    .object({
      powerOnHours: z.number().optional(),
      bytesWritten: z.number().optional(),
      serial: z.string().optional(),
      serialMatches: z.boolean().optional(),
    })
    .default({}),
  openRma: z.string().nullable().default(null),
});

/**
 * Takes the decision for one unit of a ticket and stores it with its inputs, as made.
 * The record's entry is the caller's: the ticket's module writes it in the same transaction.
 */
export async function storeDecision(
  ctx: Ctx,
  raw: z.input<typeof StoreDecision>,
): Promise<Result<{ decisionId: string; decision: Decision; previousId: string | null }>> {
  const may = permit(ctx, "cover.decide");
  if (!may.ok) return may;
  const input = parse(StoreDecision, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const found = await saleCase(ctx, v.unitId);
    if (!found)
      return refuse(
        "not_found",
        "This unit has no sale in the ledger, so there is nothing to decide by. Check the serial.",
      );
    const [ticket] = await ctx.tx
      .select({ accountId: tickets.accountId })
      .from(tickets)
      .where(eq(tickets.id, v.ticketId));
    if (ticket?.accountId && ticket.accountId !== found.sale.accountId)
      return refuse(
        "rule",
        `${found.unit.serial} is held by another customer now, so this ticket cannot decide about it.`,
      );
    const of = factsIn(found, v.unitId);
    // Without these two, a part that was replaced would be judged by its system's clause, and a unit
    // that was credited or taken back by a sale that is over.
    if (!of)
      return refuse(
        "rule",
        `This part left ${found.unit.serial} some time ago. Decide about what stands in its slot now.`,
      );
    if (found.sale.endedOn !== null)
      return refuse(
        "rule",
        `Its sale under order ${found.sale.orderNumber} ended on ${showDay(found.sale.endedOn)}, so no terms apply to it any more.`,
      );
    const earlier = await ctx.tx
      .selectDistinctOn([coverageDecisions.ticketId], {
        ticket: tickets.number,
        on: coverageDecisions.claimOn,
        outcome: coverageDecisions.outcome,
      })
      .from(coverageDecisions)
      .innerJoin(tickets, eq(tickets.id, coverageDecisions.ticketId))
      .where(
        and(
          eq(coverageDecisions.unitId, v.unitId),
          eq(coverageDecisions.saleLineId, found.sale.id),
          eq(coverageDecisions.accountId, found.sale.accountId),
          ne(coverageDecisions.ticketId, v.ticketId),
          lte(coverageDecisions.claimOn, v.claimOn),
        ),
      )
      .orderBy(coverageDecisions.ticketId, desc(coverageDecisions.madeAt))
      .limit(20);
    const facts: DecideInput = {
      ...of,
      what: v.what,
      faultClass: v.faultClass,
      claimOn: v.claimOn,
      evidence: v.evidence,
      established: v.established,
      ruledOut: v.ruledOut,
      readings: v.readings,
      earlier: earlier.sort((a, b) => (a.on < b.on ? -1 : a.on > b.on ? 1 : a.ticket - b.ticket)),
      openRma: v.openRma,
      week: { workdays: found.site.workdays, holidays: found.site.holidays },
    };
    const decision = decide(facts);
    const [previous] = await ctx.tx
      .select({ id: coverageDecisions.id })
      .from(coverageDecisions)
      .where(and(eq(coverageDecisions.ticketId, v.ticketId), eq(coverageDecisions.unitId, v.unitId)))
      .orderBy(desc(coverageDecisions.madeAt))
      .limit(1);
    const decisionId = ctx.newId();
    await ctx.tx.insert(coverageDecisions).values({
      id: decisionId,
      ticketId: v.ticketId,
      ticketUnitId: v.ticketUnitId,
      accountId: found.sale.accountId,
      unitId: v.unitId,
      saleLineId: found.sale.id,
      engine: decision.engine,
      inputs: facts,
      outcome: decision.outcome,
      answer: decision,
      remedies: decision.remedies,
      claimOn: v.claimOn,
      lastCoveredOn: decision.lastCoveredOn,
      previousId: previous?.id ?? null,
      madeBy: ctx.actor.kind === "staff" ? ctx.actor.userId : null,
      madeByName: ctx.actor.kind === "customer" ? "Mendbay" : actorName(ctx.actor),
      madeAt: ctx.now,
    });
    await audit(ctx, {
      act: "cover.decide",
      subject: ["coverage_decision", decisionId],
      after: { outcome: decision.outcome, unitId: v.unitId, claimOn: v.claimOn },
    });
    return ok({ decisionId, decision, previousId: previous?.id ?? null });
  });
}

/** Rebuilds the kept windows of sales. Equal, always, to what the engine says now. */
export async function refreshCover(
  ctx: Ctx,
  saleLineIds: readonly string[],
): Promise<Result<{ windows: number }>> {
  const may = permit(ctx, "cover.refresh");
  if (!may.ok) return may;
  if (saleLineIds.length === 0) return ok({ windows: 0 });
  return transact(ctx, async (ctx) => {
    const rows = await windowRows(ctx, [...saleLineIds]);
    await ctx.tx.delete(coverWindows).where(inArray(coverWindows.saleLineId, [...saleLineIds]));
    for (let i = 0; i < rows.length; i += 2000)
      await ctx.tx.insert(coverWindows).values(rows.slice(i, i + 2000));
    await audit(ctx, {
      act: "cover.refresh",
      subject: ["sale_line", saleLineIds[0]!],
      after: { sales: saleLineIds.length, windows: rows.length },
    });
    return ok({ windows: rows.length });
  });
}

async function windowRows(ctx: TxCtx, ids: string[]): Promise<(typeof coverWindows.$inferInsert)[]> {
  const site = await defaultSite(ctx);
  const out: (typeof coverWindows.$inferInsert)[] = [];
  for (const sale of await saleFactsFor(ctx, ids))
    for (const { unitId, installationId, facts } of sale.units)
      for (const w of windowsFor(facts.sale, facts.clauses, facts.part, site))
        out.push({
          id: ctx.newId(),
          saleLineId: sale.saleLineId,
          accountId: sale.accountId,
          unitId,
          installationId,
          clauseId: w.clauseId,
          kind: w.kind,
          firstOn: w.firstOn,
          lastOn: w.lastOn,
          byFloor: w.byFloor ? 1 : 0,
          engine: ENGINE,
        });
  return out;
}

/** The cover that a replacement would take over if it went in on a day. Writes nothing. */
export async function inheritedCover(ctx: Ctx, ask: { replacedUnitId: string; onDay: string }) {
  const found = await saleCase(ctx, ask.replacedUnitId);
  if (!found) return null;
  const of = factsIn(found, ask.replacedUnitId);
  return of && inherited({ ...of, week: found.site, swapOn: ask.onDay });
}
