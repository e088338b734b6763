import { addDays } from "@/lib/base/civil";
import { must } from "@/lib/base/result";
import { refreshCover } from "@/lib/coverage/commands";
import { salesEndingAbout } from "@/lib/coverage/queries";
import type { Ctx } from "@/lib/ctx";
import type { JobPayload } from "../schema";

const STEP = 300;
/** A limit rolls over holidays and weekends in a row; further it never goes in practice. */
const ROLL_DAYS = 21;

/** Working days changed: kept DOA windows that end about them are made anew, some hundreds of sales at a time. */
export async function handle(ctx: Ctx, { from, to }: JobPayload<"cover.follow_days">): Promise<void> {
  let after: string | null = null;
  for (;;) {
    const ids: string[] = await salesEndingAbout(ctx, {
      from: addDays(from, -ROLL_DAYS),
      to: addDays(to, ROLL_DAYS),
      after,
      limit: STEP,
    });
    if (ids.length === 0) return;
    must(await refreshCover(ctx, ids));
    after = ids.at(-1)!;
  }
}
