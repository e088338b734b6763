import fc from "fast-check";
import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { addPeriod } from "@/lib/base/civil";
import { must } from "@/lib/base/result";
import { refreshCover } from "@/lib/coverage/commands";
import { coverFor } from "@/lib/coverage/queries";
import { decide, ENGINE } from "@/lib/coverage/rules";
import type { DecideInput } from "@/lib/coverage/schema";
import { endSale, swapPart } from "@/lib/ledger/commands";
import { takeDecision } from "@/lib/tickets/commands";
import { decided } from "../../factories/returns";
import { as, at, job, rows, sell, seller, unitId, type Seller } from "../../factories/seller";
import { part, system } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
beforeAll(async () => {
  s = await seller();
});

const saleOf = async (serial: string) =>
  (
    await rows<{ id: string }>(
      sql`select s.id from sale_line s join unit u on u.id = s.unit_id where u.serial = ${serial} and s.ended_on is null`,
    )
  )[0]!.id;
const kept = (saleLineId: string) =>
  rows(
    sql`select u.serial, w.kind::text, w.first_on::text as "firstOn", w.last_on::text as "lastOn" from cover_window w
      join unit u on u.id = w.unit_id left join installation i on i.id = w.installation_id
      where w.sale_line_id = ${saleLineId} and i.to_on is null order by 1, 2`,
  );
const told = async (serial: string) =>
  (await coverFor(job(), await unitId(serial), "2026-06-03"))!.rows
    .map(({ serial, kind, firstOn, lastOn }) => ({ serial, kind, firstOn, lastOn }))
    .sort((a, b) => (`${a.serial} ${a.kind}` < `${b.serial} ${b.kind}` ? -1 : 1));

describe("a stored decision", () => {
  it("gives its answer again from its stored inputs", async () => {
    await decided(s, "VS19-PIN0A");
    await decided(s, "VS19-PIN0B", { fault: "physical_damage" });
    await decided(s, "VS19-PIN0B", { fault: "physical_damage", established: ["physical_damage"] });
    await decided(s, "OW2210-PIN01", { fault: "no_power", receivedAt: at("2029-03-01T10:00:00Z") });
    await decided(s, "OW2210-PIN01", { fault: "no_power", receivedAt: at("2026-01-20T10:00:00Z") });
    const stored = await rows<{ engine: string; inputs: DecideInput; answer: unknown; outcome: string }>(
      sql`select engine, inputs, answer, outcome::text from coverage_decision order by made_at`,
    );
    expect(stored.map((d) => d.outcome).sort()).toEqual([
      "covered",
      "covered_doa",
      "needs_person",
      // Said to be shown, with no photo on record: that is not enough.
      "needs_person",
      "not_covered",
    ]);
    for (const d of stored) {
      expect(d.engine).toBe(ENGINE);
      expect(JSON.parse(JSON.stringify(decide(d.inputs)))).toEqual(d.answer);
    }
  });

  it("names the one before it, and leaves that as it was", async () => {
    const first = await decided(s, "VS19-PIN0A");
    const before = await rows(sql`select * from coverage_decision where id = ${first.decisionId}`);
    const second = must(
      await takeDecision(as(s.agent), {
        ticketId: first.ticketId,
        ticketUnitId: first.ticketUnitId,
        faultClass: "physical_damage",
      }),
    );
    expect(second.decision.outcome).toBe("needs_person");
    expect(
      await rows(sql`select previous_id from coverage_decision where id = ${second.decisionId}`),
    ).toEqual([{ previous_id: first.decisionId }]);
    expect(await rows(sql`select * from coverage_decision where id = ${first.decisionId}`)).toEqual(before);
  });

  it("goes by the day of receipt in the seller's zone", async () => {
    const last = { receivedAt: at("2029-01-07T23:30:00Z") };
    expect((await decided(s, "VS19-PIN0A", last)).decision.outcome).toBe("covered");
    const newYork = { receivedAt: at("2029-01-07T23:30:00-05:00") };
    expect((await decided(s, "VS19-PIN0A", newYork)).decision.outcome).toBe("not_covered");
  });
});

describe("kept windows", () => {
  it("are what the engine says, for each sale and part", async () => {
    for (const serial of ["OW2210-PIN01", "OW2210-LOW01"]) {
      const windows = await kept(await saleOf(serial));
      expect(windows.length).toBeGreaterThan(2);
      expect(windows).toEqual(await told(serial));
    }
  });

  it("are so after a swap and a pause too, however often they are made anew", async () => {
    const saleLineId = await saleOf("OW2210-PIN01");
    const [parent, out, into] = [
      await unitId("OW2210-PIN01"),
      await unitId("VS19-PIN0B"),
      await unitId("VS19-STOCK2"),
    ];
    must(
      await swapPart(job(), {
        parentUnitId: parent,
        slot: "Drive bay 2",
        outUnitId: out,
        inUnitId: into,
        onDay: "2026-05-04",
        reason: "field swap",
      }),
    );
    await rows(
      sql`insert into cover_pause (id, sale_line_id, from_on, to_on, reason)
        values (gen_random_uuid(), ${saleLineId}, '2026-03-01', '2026-03-10', 'at our bench') returning id`,
    );
    expect(await kept(saleLineId)).not.toEqual(await told("OW2210-PIN01"));
    must(await refreshCover(job(), [saleLineId]));
    const once = await kept(saleLineId);
    must(await refreshCover(job(), [saleLineId]));
    expect(await kept(saleLineId)).toEqual(once);
    expect(once).toEqual(await told("OW2210-PIN01"));
    expect(once.find((w) => w.serial === "VS19-STOCK2")).toMatchObject({
      kind: "cover",
      firstOn: "2026-05-04",
      lastOn: "2029-01-17",
    });
  });
});

describe("a serial that has been here before", () => {
  const first = system("OW2210-TWICE", { order: "ORD-8001" });
  const second = {
    ...first,
    order: "ORD-8002",
    "account code": "LOWMERE",
    "account name": "Lowmere Hosting",
    "contact name": "Dana Voss",
    "contact e-mail": "dana@lowmere.example",
    condition: "refurbished",
    "ship date": "2026-04-08",
    "delivery date": "2026-04-10",
  };
  it("is decided by its newest sale, refurbished, to its newest customer", async () => {
    await sell([first, part("VS19-TWICE", first, "Drive bay 1")]);
    must(
      await endSale(job(), { unitId: await unitId("OW2210-TWICE"), onDay: "2026-03-02", reason: "refund" }),
    );
    await sell([second, part("VS19-TWICE", second, "Drive bay 1")]);
    const cover = (await coverFor(job(), await unitId("VS19-TWICE"), "2026-06-03"))!;
    expect(cover).toMatchObject({
      accountName: "Lowmere Hosting",
      orderNumber: "ORD-8002",
      shippedOn: "2026-04-08",
      unit: { condition: "refurbished" },
    });
    const { decision } = await decided(s, "VS19-TWICE", { from: s.dana });
    expect(decision.lastCoveredOn).toBe("2029-04-10");
  });

  it("has nothing to decide by once its sale has ended", async () => {
    const gone = system("OW2210-GONE1", { order: "ORD-8003" });
    await sell([gone]);
    const d = await decided(s, "OW2210-GONE1", { fault: "no_power" });
    must(
      await endSale(job(), { unitId: await unitId("OW2210-GONE1"), onDay: "2026-06-03", reason: "refund" }),
    );
    const again = await takeDecision(as(s.agent), {
      ticketId: d.ticketId,
      ticketUnitId: d.ticketUnitId,
      faultClass: "no_power",
    });
    expect(again).toMatchObject({
      ok: false,
      refusal: { code: "rule", message: expect.stringContaining("ORD-8003 ended on 3 June 2026") as string },
    });
  });

  it("is not judged by its system's clause once it has been swapped out", async () => {
    const of = system("OW2210-SWAP1", { order: "ORD-8004" });
    await sell([of, part("VS19-SWAP1", of, "Drive bay 1")]);
    await sell([
      { ...system("VS19-SWAP2", { order: "ORD-8005" }), model: "VS-19", kind: "part", family: "drive" },
    ]);
    const d = await decided(s, "VS19-SWAP1");
    expect(d.decision.clauseNumber).toBe("3.2");
    must(
      await swapPart(job(), {
        parentUnitId: await unitId("OW2210-SWAP1"),
        slot: "Drive bay 1",
        outUnitId: await unitId("VS19-SWAP1"),
        inUnitId: await unitId("VS19-SWAP2"),
        onDay: "2026-06-03",
        reason: "replaced",
      }),
    );
    const again = await takeDecision(as(s.agent), {
      ticketId: d.ticketId,
      ticketUnitId: d.ticketUnitId,
      faultClass: "failed_drive",
    });
    expect(again).toMatchObject({
      ok: false,
      refusal: { code: "rule", message: expect.stringContaining("left OW2210-SWAP1") as string },
    });
  });
});

describe("day arithmetic", () => {
  it("agrees with PostgreSQL's date + interval on 10,000 random starts and periods", async () => {
    const two = (n: number) => String(n).padStart(2, "0");
    const start = fc
      .tuple(
        fc.integer({ min: 1990, max: 2090 }),
        fc.integer({ min: 1, max: 12 }),
        fc.integer({ min: 1, max: 31 }),
      )
      .filter(([y, m, d]) => d <= new Date(Date.UTC(y, m, 0)).getUTCDate())
      .map(([y, m, d]) => `${y}-${two(m)}-${two(d)}`);
    const part = (letter: string, max: number) =>
      fc.integer({ min: 0, max }).map((n) => (n === 0 ? "" : `${n}${letter}`));
    const period = fc
      .tuple(part("Y", 12), part("M", 72), part("D", 500))
      .map((p) => `P${p.join("")}`)
      .filter((p) => p !== "P");
    const cases = fc.sample(fc.tuple(start, period), { numRuns: 10_000, seed: 20_260_603 });
    const answers = await rows<{ day: string }>(
      sql`select (c.start::date + c.period::interval)::date::text as day
        from unnest(${sql.param(cases.map((c) => c[0]))}::text[], ${sql.param(cases.map((c) => c[1]))}::text[])
        with ordinality as c(start, period, n) order by c.n`,
    );
    expect(answers).toHaveLength(10_000);
    const differ = cases.filter(([day, p], i) => addPeriod(day, p) !== answers[i]!.day);
    expect(differ).toEqual([]);
  });
});
