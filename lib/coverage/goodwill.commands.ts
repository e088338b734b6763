import { and, eq } from "drizzle-orm";
import { transact } from "@/db/client";
import { goodwills } from "@/db/schema/coverage";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { ok, refuse, type Result } from "@/lib/base/result";
import { actorName, type Ctx } from "@/lib/ctx";
import type { Remedy } from "./schema";

const noPerson = () => refuse("forbidden", "Goodwill is asked for and answered by people, under their name.");

/** Keeps an ask. What may be asked is the ticket's module to say, and so is the entry. */
export async function storeAsk(
  ctx: Ctx,
  ask: {
    ticketId: string;
    ticketUnitId: string;
    accountId: string | null;
    unitId: string;
    decisionId: string;
    reason: string;
    remedy: Remedy;
  },
): Promise<Result<{ goodwillId: string }>> {
  const may = permit(ctx, "goodwill.ask");
  if (!may.ok) return may;
  const { actor } = ctx;
  if (actor.kind !== "staff") return noPerson();
  return transact(ctx, async (ctx) => {
    const goodwillId = ctx.newId();
    const { remedy: wantedRemedy, ...of } = ask;
    await ctx.tx.insert(goodwills).values({
      id: goodwillId,
      ...of,
      wantedRemedy,
      state: "asked",
      askedBy: actor.userId,
      askedByName: actorName(actor),
      askedAt: ctx.now,
    });
    await audit(ctx, {
      act: "goodwill.ask",
      subject: ["goodwill", goodwillId],
      after: { unitId: ask.unitId, decisionId: ask.decisionId, remedy: ask.remedy, reason: ask.reason },
    });
    return ok({ goodwillId });
  });
}

/** Keeps the answer, with the decision it was given on. The database refuses a second one, and one's own. */
export async function storeAnswer(
  ctx: Ctx,
  given: {
    goodwillId: string;
    decisionId: string;
    words: string;
    grant: { remedy: Remedy; limitCents: number } | null;
  },
): Promise<Result<undefined>> {
  const may = permit(ctx, "goodwill.answer");
  if (!may.ok) return may;
  const { actor } = ctx;
  if (actor.kind !== "staff") return noPerson();
  return transact(ctx, async (ctx) => {
    const state = given.grant ? "granted" : "declined";
    const kept = await ctx.tx
      .update(goodwills)
      .set({
        state,
        decisionId: given.decisionId,
        answeredBy: actor.userId,
        answeredByName: actorName(actor),
        answeredAt: ctx.now,
        answer: given.words,
        remedy: given.grant?.remedy ?? null,
        limitCents: given.grant?.limitCents ?? null,
      })
      .where(and(eq(goodwills.id, given.goodwillId), eq(goodwills.state, "asked")))
      .returning({ id: goodwills.id });
    if (kept.length === 0) return refuse("conflict", "Somebody was first: it has been answered.");
    await audit(ctx, {
      act: "goodwill.answer",
      subject: ["goodwill", given.goodwillId],
      before: { state: "asked" },
      after: { state, decisionId: given.decisionId, ...given.grant, words: given.words },
    });
    return ok();
  });
}
