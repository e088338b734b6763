import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { must } from "@/lib/base/result";
import { handle as applyImport } from "@/lib/jobs/handlers/applyImport";
import { runDueJobs } from "@/lib/jobs/worker.io";
import { cancelImport, previewImport, startImport } from "@/lib/ledger/commands";
import { applyImportChunk, loadImport } from "@/lib/ledger/import.commands";
import { as, count, job, rows, seller, type Seller } from "../../factories/seller";
import { bytesOf, csv, part, system, type Cells } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
beforeAll(async () => {
  s = await seller();
});

const TABLES = [
  "account",
  "contact",
  "model",
  "supplier",
  "lot",
  "unit",
  "sale_line",
  "installation",
  "cover_window",
];
const counts = async () =>
  Object.fromEntries(await Promise.all(TABLES.map(async (t) => [t, await count(t)] as const)));
const preview = async (list: Cells[]) =>
  must(await previewImport(as(s.admin), { fileName: "q.csv", bytes: bytesOf(csv(list)) }));
const batch = async (id: string) =>
  (
    await rows<Record<string, unknown>>(
      sql`select state::text, rows_total, rows_good, rows_done, problems, problems_total, added from import_batch where id = ${id}`,
    )
  )[0]!;
/** Sold systems that have no windows: there must never be one. */
const bare = () =>
  rows(
    sql`select s.id from sale_line s where not exists (select from cover_window w where w.sale_line_id = s.id)`,
  );
const fleet = (order: string, n: number): Cells[] =>
  Array.from({ length: n }, (_, i) => {
    const of = system(`OW2210-${order}${String(i).padStart(4, "0")}`, { order: `ORD-${order}` });
    return [of, part(`VS19-${order}${String(i).padStart(4, "0")}`, of, "Drive bay 1")];
  }).flat();

describe("an import", () => {
  it("adds what the preview promised, by the worker, and the same file again adds nothing", async () => {
    const list = fleet("A", 3);
    const before = await counts();
    const first = await preview(list);
    expect(first.again).toBe(false);
    expect(await counts()).toEqual(before);
    must(await startImport(as(s.admin), first.importId));
    must(await startImport(as(s.admin), first.importId));
    await runDueJobs();
    expect(await batch(first.importId)).toMatchObject({
      state: "applied",
      rows_done: 6,
      problems_total: 0,
      added: { systems: 3, parts: 3, sales: 3, accounts: 0 },
    });
    const after = await counts();
    expect(after).toMatchObject({ unit: before.unit! + 6, sale_line: before.sale_line! + 3 });
    const second = await preview(list);
    expect(second.again).toBe(true);
    must(await startImport(as(s.admin), second.importId));
    await runDueJobs();
    expect(await batch(second.importId)).toMatchObject({
      state: "applied",
      added: { systems: 0, parts: 0, sales: 0 },
    });
    expect(await counts()).toEqual(after);
  });

  it("keeps the good rows of a file with bad ones, and leaves nothing of the bad", async () => {
    const good = system("OW2210-B001", { order: "ORD-B" });
    const unknown = system("OW2210-B002", { order: "ORD-B", terms: "NOBODYS" });
    const early = system("OW2210-B003", { order: "ORD-B", "ship date": "2019-06-01", "delivery date": "" });
    const list = [good, unknown, early, system("OW2210-B004", { order: "ORD-B", country: "Eire" })];
    const { importId } = await preview(list);
    expect(await batch(importId)).toMatchObject({ rows_total: 4, rows_good: 1, problems_total: 3 });
    must(await startImport(as(s.admin), importId));
    await runDueJobs();
    const done = await batch(importId);
    expect(done).toMatchObject({ state: "applied", rows_done: 1, problems_total: 3 });
    expect(JSON.stringify(done.problems)).toContain("No published terms NOBODYS are in force on 2026-01-05.");
    expect(await rows(sql`select serial from unit where serial like 'OW2210-B%'`)).toEqual([
      { serial: "OW2210-B001" },
    ]);
  });

  it("does not sell a unit twice at once", async () => {
    const again = system("OW2210-PIN01", { order: "ORD-ELSE", "account code": "LOWMERE" });
    const before = await counts();
    const { importId } = await preview([again]);
    must(await startImport(as(s.admin), importId));
    await runDueJobs();
    expect(JSON.stringify((await batch(importId)).problems)).toContain("still sold under order ORD-7001");
    expect(await counts()).toEqual(before);
  });

  it("is an admin's, and is refused before anything is kept when it cannot be read", async () => {
    const n = await count("import_batch");
    const bytes = bytesOf(csv(fleet("C", 1)));
    expect(await previewImport(as(s.agent), { fileName: "c.csv", bytes })).toMatchObject({
      ok: false,
      refusal: { code: "forbidden" },
    });
    expect(await previewImport(as(s.sam), { fileName: "c.csv", bytes })).toMatchObject({
      ok: false,
      refusal: { code: "forbidden" },
    });
    expect(await previewImport(as(s.admin), { fileName: "c.csv", bytes: bytesOf("a,b\n1,2") })).toMatchObject(
      {
        ok: false,
        refusal: { code: "invalid" },
      },
    );
    expect(await count("import_batch")).toBe(n);
    const none = await preview([system("OW2210-C9", { terms: "NOBODYS" })]);
    expect(await startImport(as(s.admin), none.importId)).toMatchObject({
      ok: false,
      refusal: { code: "rule" },
    });
  });
});

describe("an import that breaks off", () => {
  class Gone extends Error {}
  /** A run that is gone at its n-th new id, as a killed worker is. */
  async function broken(importId: string, n: number): Promise<boolean> {
    let left = n;
    const newId = () => {
      if (--left < 0) throw new Gone();
      return crypto.randomUUID();
    };
    return applyImport({ ...job(), newId }, { importId }).then(
      () => false,
      (thrown: unknown) => {
        for (let at = thrown; at instanceof Error; at = at.cause) if (at instanceof Gone) return true;
        throw thrown;
      },
    );
  }

  it("goes on where it was, wherever it broke: nothing twice, no sale without its windows", async () => {
    const list = fleet("D", 1000);
    const before = await counts();
    const { importId } = await preview(list);
    must(await startImport(as(s.admin), importId));
    // Early in the first step's units; among windows, or some steps on; and far on, where it may be done.
    expect(await broken(importId, 50)).toBe(true);
    expect(await batch(importId)).toMatchObject({ state: "applying", rows_done: 0 });
    expect(await counts()).toEqual(before);
    for (const n of [3500, 6500]) {
      const gone = await broken(importId, n);
      const { rows_done: done } = await batch(importId);
      if (n === 3500) expect(gone).toBe(true);
      expect((await counts()).unit).toBe(before.unit! + Number(done));
      expect(await bare()).toEqual([]);
    }
    await runDueJobs();
    expect(await batch(importId)).toMatchObject({
      state: "applied",
      rows_done: 2000,
      added: { systems: 1000, parts: 1000, sales: 1000 },
    });
    const after = await counts();
    expect(after).toMatchObject({
      unit: before.unit! + 2000,
      sale_line: before.sale_line! + 1000,
      installation: before.installation! + 1000,
    });
    expect(await bare()).toEqual([]);
  });

  it("stops between two steps when it is cancelled, keeps what was added, and tells it", async () => {
    const { importId } = await preview(fleet("E", 900));
    must(await startImport(as(s.admin), importId));
    const groups = must(await loadImport(job(), importId));
    expect(must(await applyImportChunk(job(), importId, groups)).done).toBe(false);
    must(await cancelImport(as(s.admin), importId));
    const stopped = await counts();
    await runDueJobs();
    expect(await counts()).toEqual(stopped);
    const cut = await batch(importId);
    const done = Number(cut.rows_done) / 2;
    expect(done).toBeGreaterThan(0);
    expect(done).toBeLessThan(900);
    expect(cut).toMatchObject({ state: "cancelled", added: { systems: done } });
    expect(await startImport(as(s.admin), importId)).toMatchObject({
      ok: false,
      refusal: { code: "rule", message: "This import was stopped. Send the file again." },
    });
    expect(await cancelImport(as(s.admin), importId)).toMatchObject({ ok: false, refusal: { code: "rule" } });
    // Sent again, the rest comes in and the first part is left as it is.
    const again = await preview(fleet("E", 900));
    must(await startImport(as(s.admin), again.importId));
    await runDueJobs();
    expect(await batch(again.importId)).toMatchObject({
      state: "applied",
      added: { systems: 900 - done, sales: 900 - done },
    });
  });
});
