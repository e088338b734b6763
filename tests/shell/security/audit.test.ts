import { createHash } from "node:crypto";
import { execFile } from "node:child_process";
import { promisify } from "node:util";
import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { rawDb, type Tx } from "@/db/client";
import { verifyChain, type ChainHead, type ChainVerdict } from "@/lib/audit/queries";
import { authorized } from "../../factories/returns";
import { job, rows, seller } from "../../factories/seller";
import { freshDb } from "../db";

await freshDb();
beforeAll(async () => {
  const s = await seller();
  await authorized(s, "VS19-PIN0A");
});

class Undo extends Error {}
/** Does what nobody may, looks, and takes it back. */
async function after(harm: (tx: Tx) => Promise<unknown>, noted?: ChainHead): Promise<ChainVerdict> {
  let found: ChainVerdict | undefined;
  await rawDb()
    .transaction(async (tx) => {
      await harm(tx);
      found = await verifyChain({ ...job(), tx }, noted);
      throw new Undo();
    })
    .catch((thrown: unknown) => {
      if (!(thrown instanceof Undo)) throw thrown;
    });
  return found!;
}
const whole = async () => {
  const found = await verifyChain(job());
  if (!found.whole) throw new Error(found.why);
  return found;
};

describe("the audit chain", () => {
  it("is whole, every hash reckoned apart from the database", async () => {
    const chain = await rows<Record<string, string | null>>(
      sql`select chain_no::text, encode(previous_hash, 'hex') as previous, encode(hash, 'hex') as hash, id, at::text,
        (extract(epoch from at) * 1000)::bigint::text as ms, actor_kind, actor_id, actor_name, act, subject_type, subject_id,
        before::text, after::text, request_id from audit_row a order by a.chain_no`,
    );
    expect(chain.length).toBeGreaterThan(20);
    let previous = "";
    chain.forEach((r, i) => {
      expect(Number(r.chain_no)).toBe(i + 1);
      expect(r.previous ?? "").toBe(previous);
      const text = [r.chain_no, previous, r.id, r.ms, r.actor_kind, r.actor_id ?? "-", r.actor_name, r.act];
      text.push(r.subject_type!, r.subject_id!, r.before ?? "-", r.after ?? "-", r.request_id!);
      previous = createHash("sha256").update(text.join("|")).digest("hex");
      expect(r.hash).toBe(previous);
    });
    expect(await whole()).toEqual({
      whole: true,
      rows: chain.length,
      head: { chainNo: chain.length, hash: previous },
    });
  });

  it.each([
    ["who did it", sql`update audit_row set actor_name = 'nobody' where chain_no = 7`, 7],
    ["when", sql`update audit_row set at = at + interval '1 hour' where chain_no = 9`, 9],
    ["what it became", sql`update audit_row set after = '{"ref":"C9"}' where chain_no = 11`, 11],
    ["a row taken out", sql`delete from audit_row where chain_no = 5`, 6],
    ["the first row taken out", sql`delete from audit_row where chain_no = 1`, 2],
    [
      "two rows changed in place",
      sql`update audit_row a set act = b.act, subject_id = b.subject_id from audit_row b
        where (a.chain_no, b.chain_no) in ((12, 14), (14, 12))`,
      12,
    ],
  ])("tells %s", async (_what, harm, chainNo) => {
    const { rows: n } = await whole();
    expect(await after((tx) => tx.execute(harm))).toMatchObject({ whole: false, chainNo });
    // Taken back: nothing of the harm is left for the next case.
    expect((await whole()).rows).toBe(n);
  });

  it("tells a row altered whose hash was made to fit, by the row after it", async () => {
    const found = await after(async (tx) => {
      await tx.execute(sql`update audit_row set actor_name = 'nobody' where chain_no = 7`);
      await tx.execute(
        sql`update audit_row a set hash = sha256(convert_to(mendbay_audit_text(a), 'UTF8')) where chain_no = 7`,
      );
    });
    expect(found).toMatchObject({ whole: false, chainNo: 8, why: "It does not follow the row before it." });
  });

  it("tells a row put in between", async () => {
    const found = await after(async (tx) => {
      await tx.execute(
        sql`insert into audit_row (id, at, actor_kind, actor_name, act, subject_type, subject_id, request_id)
          values (gen_random_uuid(), now(), 'job', 'job forged', 'ledger.move', 'unit', 'x', 'r')`,
      );
    });
    // Not chained yet: the chain is closed at commit, and this one never commits.
    expect(found).toMatchObject({ whole: false, chainNo: null, why: "It was never chained." });
  });

  it("tells an end that was cut off: by the record, and by a head noted elsewhere", async () => {
    const { head } = await whole();
    const last = sql`(select max(chain_no) from audit_row where act like 'entry.%')`;
    const byRecord = await after((tx) => tx.execute(sql`delete from audit_row where chain_no >= ${last}`));
    expect(byRecord).toMatchObject({ whole: false, why: expect.stringContaining("cut off") as string });
    const one = (tx: Tx) => tx.execute(sql`delete from audit_row where chain_no = ${head!.chainNo}`);
    expect(await after(one, head!)).toMatchObject({ whole: false, chainNo: head!.chainNo });
    expect(await after(async () => undefined, head!)).toMatchObject({ whole: true });
  });

  it("is told by a command, with the first bad row and an exit code", async () => {
    const run = async (...more: string[]) => {
      const args = ["--import", "tsx", "db/verify-audit.ts", ...more];
      const env = { ...process.env, TSX_TSCONFIG_PATH: "tsconfig.node.json" };
      return promisify(execFile)(process.execPath, args, { env }).then(
        ({ stdout }) => ({ code: 0, said: stdout }),
        (failed: { code: number; stdout: string; stderr: string }) => ({
          code: failed.code,
          said: failed.stdout + failed.stderr,
        }),
      );
    };
    const { head } = await whole();
    const good = await run(`${head!.chainNo}:${head!.hash}`);
    expect(good).toMatchObject({
      code: 0,
      said: expect.stringContaining(`whole: ${head!.chainNo} rows`) as string,
    });
    expect((await run("what")).code).toBe(2);
    await rawDb().execute(sql`update audit_row set actor_name = 'nobody' where chain_no = 7`);
    const bad = await run();
    expect(bad.code).toBe(1);
    expect(bad.said).toMatch(/broken at 7 \(.+\)\. Its content is not what was written\./);
  });
});
