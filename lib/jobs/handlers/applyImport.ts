import { transact } from "@/db/client";
import { must } from "@/lib/base/result";
import { refreshCover } from "@/lib/coverage/commands";
import type { Ctx } from "@/lib/ctx";
import { applyImportChunk, loadImport } from "@/lib/ledger/import.commands";
import type { JobPayload } from "../schema";

/**
 * Adds an import chunk by chunk. A chunk, its counter and its cover windows are one transaction:
 * broken off anywhere, the next run goes on at the counter and no sale is left without its windows.
 */
export async function handle(ctx: Ctx, payload: JobPayload<"ledger.apply_import">): Promise<void> {
  const groups = must(await loadImport(ctx, payload.importId));
  for (;;) {
    const step = await transact({ ...ctx, now: new Date() }, async (ctx) => {
      const added = await applyImportChunk(ctx, payload.importId, groups);
      if (!added.ok) return added;
      const windows = await refreshCover(ctx, added.value.saleLineIds);
      return windows.ok ? added : windows;
    });
    if (must(step).done) return;
  }
}
