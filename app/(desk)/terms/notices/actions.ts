"use server";
import { action } from "@/app/_edge/action";
import { ok } from "@/lib/base/result";
import { keepLawNotice } from "@/lib/coverage/law.commands";

const text = (v: unknown): string => (typeof v === "string" ? v : "");

/** Keeps a notice; the page then shows it where it stands. */
export const keep = action(
  async (ctx, input) => {
    const kept = await keepLawNotice(ctx, {
      region: text(input.region) as never,
      forConsumers: text(input.buyer) !== "business",
      effectiveOn: text(input.effectiveOn),
      title: text(input.title),
      words: text(input.words),
      source: text(input.source),
    });
    return kept.ok ? ok({ kept: true }) : kept;
  },
  (_, input) => `/terms/notices?kept=${encodeURIComponent(text(input.region))}`,
);
