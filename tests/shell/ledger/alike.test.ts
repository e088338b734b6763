import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { read, rawDb } from "@/db/client";
import { serialKey, serialLoose } from "@/lib/base/serial";
import type { Ctx } from "@/lib/ctx";
import { lookAlikes, unitBySerial, unitsByScan } from "@/lib/ledger/queries";
import { find } from "@/lib/tickets/queries";
import { as, rows, seller, stock, unitId, type Seller } from "../../factories/seller";
import { seeded, sparseSerials, withOneError } from "../../factories/serials";
import { freshDb } from "../db";

await freshDb();
const random = seeded(20_260_603);
/** Enough that reading the whole table would be dearer than 600 keys in the index. */
const ledger = sparseSerials(random, 50_000);
let s: Seller;

beforeAll(async () => {
  s = await seller();
  await rows(sql`
    insert into unit (id, serial, serial_key, serial_loose, model_id, condition, whereabouts, created_at)
    select gen_random_uuid(), given.serial, given.key, given.loose, (select id from model where code = 'VS-19'), 'new', 'customer', now()
    from unnest(${sql.param(ledger)}::text[], ${sql.param(ledger.map(serialKey))}::text[],
      ${sql.param(ledger.map(serialLoose))}::text[]) as given(serial, key, loose) returning id`);
  await rawDb().execute(sql`analyze unit`);
});

/** How the table of units was read by a question: counted by the server before and after, in one transaction. */
async function readBy(ctx: Ctx, ask: (ctx: Ctx) => Promise<unknown>) {
  return read(ctx, async (tx) => {
    const counted = async () =>
      (
        await tx.execute<{ whole: number; indexed: number }>(
          sql`select seq_scan::int as whole, idx_scan::int as indexed from pg_stat_xact_user_tables where relname = 'unit'`,
        )
      ).rows[0]!;
    const before = await counted();
    await ask({ ...ctx, tx });
    const after = await counted();
    return { whole: after.whole - before.whole, indexed: after.indexed - before.indexed };
  });
}

describe("one character wrong", () => {
  it("has the unit meant among the first three, 200 times of 200", async () => {
    const missed: string[] = [];
    for (let n = 0; n < 200; n++) {
      const meant = ledger[Math.floor(random() * ledger.length)]!;
      const given = withOneError(random, meant);
      const found = (await lookAlikes(as(s.agent), given)).map((u) => u.serial);
      expect(found.length).toBeLessThanOrEqual(3);
      if (!found.includes(meant)) missed.push(`${given} for ${meant}: ${found.join(", ")}`);
    }
    expect(missed).toEqual([]);
  });
  it("is looked for in the index of loose keys, for us and for a customer", async () => {
    const given = withOneError(random, ledger[77]!);
    for (const ctx of [as(s.agent), as(s.sam)]) {
      const by = await readBy(ctx, (inTx) => lookAlikes(inTx, given));
      expect(by.whole).toBe(0);
      expect(by.indexed).toBeGreaterThan(0);
    }
    // The question is asked of the right counter: a search through all of them is seen.
    const all = await readBy(as(s.agent), ({ tx }) =>
      tx!.execute(sql`select count(*) from unit where serial like '%7'`),
    );
    expect(all.whole).toBeGreaterThan(0);
  });
  it("is never corrected in silence, and the unit of exactly this serial is no suggestion", async () => {
    const given = withOneError(random, ledger[78]!);
    expect(await unitBySerial(as(s.agent), given)).toBeNull();
    expect(await unitsByScan(as(s.agent), given)).toEqual([]);
    expect((await find(as(s.agent), given)).exact).toBeNull();
    const exact = await lookAlikes(as(s.agent), ledger[78]!);
    expect(exact.map((u) => u.serial)).not.toContain(ledger[78]);
  });
  it("finds for customers their own alone", async () => {
    const serials = async (ctx: Ctx, given: string) => (await lookAlikes(ctx, given)).map((u) => u.serial);
    expect(await serials(as(s.sam), "VS19-P1NOA")).toEqual(["VS19-PIN0A", "VS19-PIN0B"]);
    expect(await serials(as(s.dana), "VS19-P1NOA")).toEqual([]);
    expect(await serials(as(s.sam), withOneError(random, ledger[79]!))).toEqual([]);
  });
  it("takes whatever is typed", async () => {
    for (const odd of [
      "",
      "\u0000\u0000\u0000\u0000\u0000",
      "AB\u0000CDE12",
      "\ud800ABCDE",
      "'; drop table unit --",
      "V".repeat(5000),
    ])
      expect(await lookAlikes(as(s.agent), odd)).toBeInstanceOf(Array);
  });
});

describe("a scan with more than the serial", () => {
  const labels = (list: { serial: string }[]) => list.map((u) => u.serial);

  it("opens the unit behind a data identifier and within an element string", async () => {
    for (const scan of [
      "SVS19-PIN0A",
      "]C1010200000000001521VS19-PIN0A",
      "(01)02000000000015(21)VS19-PIN0A(10)L77",
    ])
      expect((await find(as(s.agent), scan)).exact).toBe("/ledger/VS19-PIN0A");
  });
  it("asks where the ledger knows the serial with and without the prefix", async () => {
    await stock("SVS19-PIN0A");
    expect(labels(await unitsByScan(as(s.agent), "SVS19-PIN0A"))).toEqual(["SVS19-PIN0A", "VS19-PIN0A"]);
    const found = await find(as(s.agent), "SVS19-PIN0A");
    expect(found.exact).toBeNull();
    expect(found.hits.map((h) => h.label)).toEqual(["SVS19-PIN0A", "VS19-PIN0A"]);
    // A customer who holds one of them is asked nothing.
    expect(labels(await unitsByScan(as(s.sam), "SVS19-PIN0A"))).toEqual(["VS19-PIN0A"]);
  });
  it("suggests both of two that ran together, and opens neither", async () => {
    for (const scan of ["VS19-PIN0AVS19-LOW0A", "VS19-PIN0A\r\nVS19-LOW0A"]) {
      const found = await find(as(s.agent), scan);
      expect(found.exact).toBeNull();
      expect(labels(found.alike).sort()).toEqual(["VS19-LOW0A", "VS19-PIN0A"]);
    }
    expect(labels(await lookAlikes(as(s.sam), "VS19-PIN0AVS19-LOW0A"))).toEqual(["VS19-PIN0A"]);
  });
  it("leaves the ledger as it was", async () => {
    const id = await unitId("VS19-PIN0A");
    const [row] = await rows<{ serial: string; key: string }>(
      sql`select serial, serial_key as key from unit where id = ${id}`,
    );
    expect(row).toEqual({ serial: "VS19-PIN0A", key: "VS19PIN0A" });
  });
});
