import { transact } from "@/db/client";
import { must, ok } from "@/lib/base/result";
import { refreshCover } from "@/lib/coverage/commands";
import type { Ctx } from "@/lib/ctx";
import { applyImportChunk, loadImport } from "@/lib/ledger/import.commands";
import type { JobPayload } from "../schema";

/**
 * Adds an import chunk by chunk. A chunk and its cover windows are one transaction: broken off, the
 * next run goes on at the counter, and no sale is left behind without its windows.
 */
export async function handle(ctx: Ctx, payload: JobPayload<"ledger.apply_import">): Promise<void> {
  const groups = must(await loadImport(ctx, payload.importId));
  for (;;) {
    const step = must(
      await transact({ ...ctx, now: new Date() }, async (ctx) => {
        const added = await applyImportChunk(ctx, payload.importId, groups);
        if (!added.ok) return added;
        const refreshed = await refreshCover(ctx, added.value.saleLineIds);
        return refreshed.ok ? ok(added.value) : refreshed;
      }),
    );
    if (step.done) return;
  }
}
