"use server";
import { revalidatePath } from "next/cache";
import { action } from "@/app/_edge/action";
import { ok, type Result } from "@/lib/base/result";
import { answerGoodwill, askGoodwill } from "@/lib/tickets/goodwill.commands";

type Told = { done: string } | { first: string };

/**
 * Answered, the page says where that stands. Was somebody first, the ask is no longer there to say it
 * at: the page tells it on top. Was the unit decided again, the form comes back beside the newest decision.
 */
export const answer = action<Told>(
  async (ctx, input): Promise<Result<Told>> => {
    const result = await answerGoodwill(ctx, input as never);
    if (result.ok) return ok({ done: `${result.value.number}-${result.value.ref}` });
    if (result.refusal.code === "conflict") return ok({ first: String(input.goodwillId) });
    if (result.refusal.code === "stale") revalidatePath("/goodwill");
    return result;
  },
  (told) => `/goodwill?${new URLSearchParams(told)}`,
);

export const ask = action(
  async (ctx, input) => {
    const result = await askGoodwill(ctx, input as never);
    return result.ok ? ok({ number: Number(input.number), ref: result.value.ref }) : result;
  },
  (to) => `/desk/${to.number}?done=${to.ref}#${to.ref}`,
);
