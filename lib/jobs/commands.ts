import { sql } from "drizzle-orm";
import type { TxCtx } from "@/lib/ctx";
import { JOBS, type JobName, type JobPayload } from "./schema";

/**
 * Puts a job in, in the caller's transaction: rolled back, it never was.
 * A job with a `key` that waits already is replaced, not doubled.
 */
export async function enqueue<N extends JobName>(
  ctx: TxCtx,
  name: N,
  payload: JobPayload<N>,
  more: { key?: string; at?: Date } = {},
): Promise<void> {
  const body = JSON.stringify(JOBS[name].parse(payload));
  await ctx.tx.execute(
    sql`select mendbay_enqueue(${name}, ${body}::json, ${(more.at ?? ctx.now).toISOString()}::timestamptz, ${more.key ?? null})`,
  );
}
