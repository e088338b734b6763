import { must } from "@/lib/base/result";
import { refreshCover } from "@/lib/coverage/commands";
import type { Ctx } from "@/lib/ctx";
import { applyImportChunk, loadImport } from "@/lib/ledger/import.commands";
import type { JobPayload } from "../schema";

/**
 * Adds an import chunk by chunk, each in its own transaction with its cover windows after it.
 * Broken off, the next run goes on at the counter; what is there already is left as it is.
 */
export async function handle(ctx: Ctx, payload: JobPayload<"ledger.apply_import">): Promise<void> {
  const groups = must(await loadImport(ctx, payload.importId));
  for (;;) {
    const step = must(await applyImportChunk({ ...ctx, now: new Date() }, payload.importId, groups));
    must(await refreshCover(ctx, step.saleLineIds));
    if (step.done) return;
  }
}
