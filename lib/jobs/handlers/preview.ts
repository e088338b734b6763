import { must } from "@/lib/base/result";
import { failPreview, stepPreview } from "@/lib/coverage/preview.commands";
import type { Ctx } from "@/lib/ctx";
import type { JobPayload } from "../schema";

/**
 * Reckons a preview step by step. Each step is its own transaction and keeps its place: a worker that
 * is killed leaves it running, and the next run goes on from there.
 */
export async function handle(ctx: Ctx, payload: JobPayload<"terms.preview">): Promise<void> {
  try {
    while (!must(await stepPreview({ ...ctx, now: new Date() }, payload)).ended);
  } catch (thrown) {
    must(await failPreview({ ...ctx, now: new Date() }, payload));
    throw thrown;
  }
}
