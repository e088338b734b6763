"use server";
import { redirect } from "next/navigation";
import { action } from "@/app/_edge/action";
import { currentCtx } from "@/app/_edge/ctx";
import { ok } from "@/lib/base/result";
import { cancelPreview, startPreview } from "@/lib/coverage/preview.commands";
import {
  discardDraft,
  dropClause,
  keepClause,
  keepDraftHead,
  publishDraft,
  startDraft,
} from "@/lib/coverage/terms.commands";
import { clauseInput } from "./input";

const text = (v: unknown): string => (typeof v === "string" ? v : "");
const at = (input: Record<string, unknown>) => `/terms/${encodeURIComponent(text(input.versionId))}`;

/** Begins the next issue; where somebody has begun it already, leads there. */
export async function next(form: FormData): Promise<void> {
  const begun = await startDraft(await currentCtx(), { termsId: form.get("termsId") });
  const versionId = begun.ok ? begun.value.versionId : begun.refusal.details?.versionId;
  redirect(versionId ? `/terms/${versionId}` : "/terms");
}

export const begin = action(
  (ctx, { code, name }) => startDraft(ctx, { code: text(code).trim().toUpperCase(), name: text(name) }),
  ({ versionId }) => `/terms/${versionId}`,
);

export const keep = action(
  (ctx, input) => keepClause(ctx, clauseInput(input)),
  ({ clauseId }, input) => `${at(input)}#c-${clauseId}`,
);

export const drop = action(
  (ctx, input) => dropClause(ctx, input),
  (_, input) => at(input),
);

export const keepHead = action(
  (ctx, input) => keepDraftHead(ctx, input),
  (_, input) => at(input),
);

export const discard = action(
  (ctx, input) => discardDraft(ctx, input),
  () => "/terms",
);

export const publish = action(
  (ctx, input) => publishDraft(ctx, input),
  ({ versionId }) => `/terms/${versionId}`,
);

export const preview = action(
  async (ctx, input) => {
    const begun = await startPreview(ctx, input);
    return begun.ok ? ok({ versionId: text(input.versionId) }) : begun;
  },
  ({ versionId }) => `/terms/${versionId}#preview`,
);

export const stop = action(
  (ctx, input) => cancelPreview(ctx, input),
  ({ versionId }) => `/terms/${versionId}#preview`,
);
