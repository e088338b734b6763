import { and, eq } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { termsPreviews, termsVersions } from "@/db/schema/coverage";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { actorName, type Ctx, type TxCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { enqueue } from "@/lib/jobs/commands";
import { defaultSite } from "@/lib/ledger/queries";
import {
  count,
  daysMoved,
  decisionDifference,
  emptyAnswer,
  EXAMPLES_OF,
  TICKET_EXAMPLES,
  unitDifference,
  type PreviewAnswer,
  type PreviewChange,
  type UnitDifference,
} from "./previews";
import { readInputs } from "./rules";
import type { ClauseFact } from "./schema";
import { clausesOf, namesOf, nextSales, nextTickets, previewTotals } from "./terms.queries";

/** Sales, or tickets, of one step: one transaction, after which it may be stopped or broken off. */
export const STEP = 400;

const Start = z.object({ versionId: z.uuid() });

/**
 * Begins to reckon what a draft would do to what was sold. One that runs for the same state of the
 * draft is put to the worker again: it goes on where it was.
 */
export async function startPreview(ctx: Ctx, raw: unknown): Promise<Result<{ previewId: string }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(Start, raw);
  if (!input.ok) return input;
  const { versionId } = input.value;
  return transact(ctx, async (ctx) => {
    const [draft] = await ctx.tx
      .select()
      .from(termsVersions)
      .where(eq(termsVersions.id, versionId))
      .for("update");
    if (!draft) return refuse("not_found", "This draft is not there. It may have been thrown away.");
    if (draft.publishedAt)
      return refuse(
        "rule",
        `Issue ${draft.issue} is published: sales are made under it, there is nothing to preview.`,
      );
    const running = await ctx.tx
      .select({ id: termsPreviews.id, ofVersion: termsPreviews.ofVersion })
      .from(termsPreviews)
      .where(and(eq(termsPreviews.termsVersionId, versionId), eq(termsPreviews.state, "running")));
    const same = running.find((p) => p.ofVersion === draft.version);
    const previewId = same?.id ?? ctx.newId();
    if (!same) {
      await ctx.tx
        .update(termsPreviews)
        .set({ state: "cancelled", error: CHANGED, finishedAt: ctx.now })
        .where(and(eq(termsPreviews.termsVersionId, versionId), eq(termsPreviews.state, "running")));
      const totals = await previewTotals(ctx.tx, draft.termsId);
      await ctx.tx.insert(termsPreviews).values({
        id: previewId,
        termsVersionId: versionId,
        ofVersion: draft.version,
        state: "running",
        total: totals.sales + totals.tickets,
        answer: emptyAnswer(civilDayIn(ctx.now, env().MENDBAY_ZONE), ctx.now.toISOString()),
        createdByName: actorName(ctx.actor),
        createdAt: ctx.now,
      });
    }
    await audit(ctx, {
      act: "terms.preview.start",
      subject: ["terms_preview", previewId],
      after: { versionId, ofVersion: draft.version, again: Boolean(same) },
    });
    await enqueue(ctx, "terms.preview", { previewId }, { key: `terms.preview:${previewId}` });
    return ok({ previewId });
  });
}

const CHANGED = "The draft was changed meanwhile. Reckon it again.";
const OnePreview = z.object({ previewId: z.uuid() });

/** Stops one that runs; what was counted so far stays to be read. */
export async function cancelPreview(ctx: Ctx, raw: unknown): Promise<Result<{ versionId: string }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(OnePreview, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    const preview = await locked(ctx, input.value.previewId);
    if (!preview) return refuse("not_found", "This preview is not there.");
    if (preview.state !== "running") return ok({ versionId: preview.termsVersionId });
    await ctx.tx
      .update(termsPreviews)
      .set({ state: "cancelled", finishedAt: ctx.now })
      .where(eq(termsPreviews.id, preview.id));
    await audit(ctx, {
      act: "terms.preview.cancel",
      subject: ["terms_preview", preview.id],
      before: { state: preview.state },
      after: { state: "cancelled", done: preview.done },
    });
    return ok({ versionId: preview.termsVersionId });
  });
}

/** Marks one whose step threw, so that its page does not wait for ever. */
export async function failPreview(ctx: Ctx, raw: unknown): Promise<Result<undefined>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(OnePreview, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    const preview = await locked(ctx, input.value.previewId);
    if (!preview || preview.state !== "running") return ok();
    const error = "It broke off, and has been written down. Reckon it again.";
    await ctx.tx
      .update(termsPreviews)
      .set({ state: "failed", error, finishedAt: ctx.now })
      .where(eq(termsPreviews.id, preview.id));
    await audit(ctx, {
      act: "terms.preview.fail",
      subject: ["terms_preview", preview.id],
      after: { done: preview.done },
    });
    return ok();
  });
}

async function locked(ctx: TxCtx, previewId: string) {
  const [row] = await ctx.tx
    .select()
    .from(termsPreviews)
    .where(eq(termsPreviews.id, previewId))
    .for("update");
  return row;
}

/**
 * The next step of a preview. The counts and the place it goes on at are one transaction, so that a
 * step broken off never counted, and one that was done is never counted twice.
 */
export async function stepPreview(ctx: Ctx, raw: unknown, limit = STEP): Promise<Result<{ ended: boolean }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(OnePreview, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    const preview = await locked(ctx, input.value.previewId);
    if (!preview || preview.state !== "running") return ok({ ended: true });
    const [draft] = await ctx.tx
      .select()
      .from(termsVersions)
      .where(eq(termsVersions.id, preview.termsVersionId));
    const answer = preview.answer as PreviewAnswer;
    const at = { termsId: draft!.termsId, afterId: preview.afterId, limit };
    let next: Partial<typeof termsPreviews.$inferInsert>;
    if (draft!.publishedAt || draft!.version !== preview.ofVersion) {
      next = { state: "cancelled", error: CHANGED, finishedAt: ctx.now };
    } else {
      const list = await clausesOf(ctx.tx, draft!.id);
      const ids =
        answer.phase === "sales"
          ? await stepSales(ctx, answer, list, at)
          : await stepTickets(ctx, answer, list, at);
      answer.steppedAt = ctx.now.toISOString();
      const done = preview.done + ids.length;
      // A sale or a ticket that came meanwhile is counted too: the share never runs past its whole.
      next = { answer, done, total: Math.max(preview.total, done), afterId: ids.at(-1) ?? preview.afterId };
      if (ids.length < limit) {
        next.afterId = null;
        if (answer.phase === "sales") answer.phase = "tickets";
        else next = { ...next, total: done, state: "done", finishedAt: ctx.now };
      }
    }
    await ctx.tx.update(termsPreviews).set(next).where(eq(termsPreviews.id, preview.id));
    await audit(ctx, {
      act: "terms.preview.step",
      subject: ["terms_preview", preview.id],
      after: { state: next.state ?? "running", done: next.done ?? preview.done },
    });
    return ok({ ended: next.state !== undefined });
  });
}

type At = { termsId: string; afterId: string | null; limit: number };

async function stepSales(ctx: TxCtx, answer: PreviewAnswer, draft: ClauseFact[], at: At): Promise<string[]> {
  const week = await defaultSite(ctx);
  const { ids, sales, ours } = await nextSales(ctx, at);
  // Many parts of one sale, and many sales of one day, are alike to the engine: each is asked once.
  const known = new Map<string, UnitDifference>();
  const left = { ...EXAMPLES_OF };
  for (const e of answer.examples) left[e.change]--;
  type Shown = {
    change: PreviewChange;
    d: UnitDifference;
    saleLineId: string;
    installationId: string | null;
    unitId: string;
  };
  const shown: Shown[] = [];
  answer.sales += sales.length;
  for (const sale of sales)
    for (const unit of sale.units) {
      // What was swapped out has no cover any more; what came from another sale may have other terms.
      if (!unit.open || unit.facts.clauses.some((c) => !ours.has(c.id))) continue;
      const key = `${unit.facts.clauses[0]?.id} ${JSON.stringify([unit.facts.part, unit.facts.sale])}`;
      const d = known.get(key) ?? unitDifference(unit.facts, draft, week, answer.onDay);
      known.set(key, d);
      const change = count(answer, d);
      if (change && left[change] > 0) {
        left[change]--;
        shown.push({
          change,
          d,
          saleLineId: sale.saleLineId,
          installationId: unit.installationId,
          unitId: unit.unitId,
        });
      }
    }
  const names = await namesOf(ctx.tx, shown);
  for (const { change, d, saleLineId, installationId, unitId } of shown) {
    const sale = names.sales.get(saleLineId)!;
    const place = installationId ? names.places.get(installationId) : undefined;
    answer.examples.push({
      change,
      unitId,
      serial: place?.serial ?? sale.serial,
      systemSerial: place ? sale.serial : null,
      slot: place?.slot ?? null,
      orderNumber: sale.orderNumber,
      accountName: sale.accountName,
      was: d.was?.lastOn ?? null,
      now: d.now?.lastOn ?? null,
      wasClause: d.was?.clause ?? null,
      nowClause: d.now?.clause ?? null,
      days: daysMoved(d),
    });
  }
  return ids;
}

async function stepTickets(
  ctx: TxCtx,
  answer: PreviewAnswer,
  draft: ClauseFact[],
  at: At,
): Promise<string[]> {
  const found = await nextTickets(ctx.tx, at);
  for (const ticket of found) {
    if (ticket.decisions.length > 0) answer.tickets++;
    let differs = false;
    for (const { inputs, serial } of ticket.decisions) {
      const d = decisionDifference(readInputs(inputs), draft);
      if (d.differs.length === 0) continue;
      differs = true;
      if (answer.ticketExamples.length < TICKET_EXAMPLES)
        answer.ticketExamples.push({ number: ticket.number, serial, ...d });
    }
    if (differs) answer.ticketsDiffer++;
  }
  return found.map((t) => t.id);
}
