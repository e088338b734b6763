"use server";
import { revalidatePath } from "next/cache";
import { action } from "@/app/_edge/action";
import { ok } from "@/lib/base/result";
import {
  closeBench,
  keepReading,
  sendBack,
  settleByMoney,
  shipReplacement,
  startBench,
} from "@/lib/dock/bench.commands";

const text = (v: unknown): string => (typeof v === "string" ? v : "");
const here = (lineId: string, done: string) => `/bench/${lineId}?done=${done}`;

export const scanIn = action(
  async (ctx, input) => {
    const done = await startBench(ctx, { lineId: text(input.lineId), scan: text(input.scan) });
    return done.ok ? ok({ lineId: text(input.lineId) }) : done;
  },
  ({ lineId }) => here(lineId, "in"),
);

export const keep = action(
  async (ctx, input) => {
    const verdict = text(input.verdict);
    const done = await keepReading(ctx, {
      testId: text(input.testId),
      step: Number(input.step),
      value: text(input.value),
      note: text(input.note),
      verdict: verdict === "pass" || verdict === "fail" || verdict === "not_run" ? verdict : null,
    });
    if (!done.ok) return done;
    revalidatePath(`/bench/${text(input.lineId)}`);
    return ok({ lineId: text(input.lineId), step: Number(input.step) });
  },
  ({ lineId, step }) => `/bench/${lineId}?at=${step + 1}#step-${step + 1}`,
);

export const closeTest = action(
  async (ctx, input) => {
    const method = text(input["method"]);
    const done = await closeBench(ctx, {
      testId: text(input.testId),
      scan: text(input.scan),
      outcome: text(input.outcome) as never,
      disposition: text(input.disposition) as never,
      finding: text(input.finding),
      secondPerson: text(input.secondPerson),
      sanitization: method
        ? {
            method: method as never,
            technique: text(input.technique),
            tool: text(input.tool),
            verification: text(input.verification),
          }
        : null,
    });
    return done.ok ? ok({ lineId: text(input.lineId) }) : done;
  },
  ({ lineId }) => here(lineId, "closed"),
);

export const shipOut = action(
  async (ctx, input) => {
    const done = await shipReplacement(ctx, {
      lineId: text(input.lineId),
      serial: text(input.serial),
      carrier: text(input.carrier),
      tracking: text(input.tracking),
      acceptWarnings: input.acceptWarnings === "1",
    });
    return done.ok ? ok({ lineId: text(input.lineId) }) : done;
  },
  ({ lineId }) => here(lineId, "shipped"),
);

export const back = action(
  async (ctx, input) => {
    const done = await sendBack(ctx, {
      lineId: text(input.lineId),
      carrier: text(input.carrier),
      tracking: text(input.tracking),
    });
    return done.ok ? ok({ lineId: text(input.lineId) }) : done;
  },
  ({ lineId }) => here(lineId, "sent"),
);

export const money = action(
  async (ctx, input) => {
    const done = await settleByMoney(ctx, { lineId: text(input.lineId) });
    return done.ok ? ok({ lineId: text(input.lineId) }) : done;
  },
  ({ lineId }) => here(lineId, "settled"),
);
