import { sql } from "drizzle-orm";
import { read } from "@/db/client";
import type { Ctx } from "@/lib/ctx";

export type ChainHead = { chainNo: number; hash: string };
export type ChainVerdict =
  | { whole: true; rows: number; head: ChainHead | null }
  | {
      whole: false;
      /** The first place where it does not hold, and the row that stands there. */
      chainNo: number | null;
      id: string | null;
      act: string | null;
      why: string;
    };

/**
 * Reckons the audit chain anew. A row altered, taken out, put in or moved breaks it at its place.
 *
 * A chain cut at its end is whole in itself; it is told by entries of the record that have lost their
 * audit row, and surely by `noted`: the head of an earlier run, kept where nobody reaches both.
 */
export async function verifyChain(ctx: Ctx, noted?: ChainHead): Promise<ChainVerdict> {
  return read(ctx, async (tx) => {
    const broken = await tx.execute<{
      chainNo: string | null;
      id: string;
      act: string;
      moved: boolean;
      cutOff: boolean;
      altered: boolean;
    }>(sql`
      select * from (
        select a.chain_no as "chainNo", a.id, a.act,
          a.chain_no is distinct from row_number() over w as moved,
          a.previous_hash is distinct from lag(a.hash) over w as "cutOff",
          a.hash is distinct from sha256(convert_to(mendbay_audit_text(a), 'UTF8')) as altered
        from audit_row a window w as (order by a.chain_no nulls last)
      ) c where moved or "cutOff" or altered order by "chainNo" nulls last limit 1`);
    const bad = broken.rows[0];
    if (bad)
      return {
        whole: false,
        chainNo: bad.chainNo === null ? null : Number(bad.chainNo),
        id: bad.id,
        act: bad.act,
        why:
          bad.chainNo === null
            ? "It was never chained."
            : bad.moved
              ? "Rows before it are missing, or it is not where it was written."
              : bad.altered
                ? "Its content is not what was written."
                : "It does not follow the row before it.",
      };
    const end = await tx.execute<{ chainNo: string; hash: string }>(
      sql`select chain_no as "chainNo", encode(hash, 'hex') as hash from audit_row order by chain_no desc limit 1`,
    );
    const last = end.rows[0];
    const head = last ? { chainNo: Number(last.chainNo), hash: last.hash } : null;
    if (noted) {
      const found = await tx.execute<{ hash: string }>(
        sql`select encode(hash, 'hex') as hash from audit_row where chain_no = ${noted.chainNo}`,
      );
      if (found.rows[0]?.hash !== noted.hash)
        return {
          whole: false,
          chainNo: noted.chainNo,
          id: null,
          act: null,
          why: found.rows[0]
            ? "It is not the row that was noted: the chain was written anew."
            : `The chain ends at ${head?.chainNo ?? 0}, before the row that was noted: its end was cut off.`,
        };
    }
    const lost = await tx.execute<{ id: string; ref: string }>(sql`
      select e.id, e.letter::text || e.number as ref from entry e where not exists (
        select from audit_row a where a.subject_type = 'ticket' and a.subject_id = e.ticket_id::text
          and a.act = 'entry.' || e.kind::text and a.after->>'ref' = e.letter::text || e.number)
      order by e.at, e.seq limit 1`);
    if (lost.rows[0])
      return {
        whole: false,
        chainNo: (head?.chainNo ?? 0) + 1,
        id: null,
        act: null,
        why: `The entry ${lost.rows[0].ref} (${lost.rows[0].id}) has no audit row: the end was cut off.`,
      };
    return { whole: true, rows: head?.chainNo ?? 0, head };
  });
}
