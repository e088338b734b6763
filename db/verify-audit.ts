import { closePool } from "@/db/client";
import { verifyChain } from "@/lib/audit/queries";
import { jobCtx } from "@/lib/ctx";

/**
 * Says whether the audit chain is whole, or names the first bad row.
 *
 *   DATABASE_URL=… npm run audit:verify [-- <number>:<hash>]
 *
 * The number and hash that a run prints, noted elsewhere, let the next run find an end that was cut off.
 */
const noted = /^(\d+):([0-9a-f]{64})$/.exec(process.argv[2] ?? "");
if (process.argv[2] !== undefined && !noted) {
  console.error("Give what an earlier run printed, such as 1207:9f86d0…, or nothing.");
  process.exitCode = 2;
} else {
  try {
    const found = await verifyChain(
      jobCtx("audit-verify"),
      noted ? { chainNo: Number(noted[1]), hash: noted[2]! } : undefined,
    );
    if (found.whole) {
      console.log(`The audit chain is whole: ${found.rows} rows.`);
      if (found.head) console.log(`Note this elsewhere: ${found.head.chainNo}:${found.head.hash}`);
    } else {
      const row = [found.act, found.id].filter(Boolean).join(", ");
      console.log(
        `The audit chain is broken at ${found.chainNo ?? "an unchained row"}${row ? ` (${row})` : ""}. ${found.why}`,
      );
      process.exitCode = 1;
    }
  } finally {
    await closePool();
  }
}
