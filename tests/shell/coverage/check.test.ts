import { sql } from "drizzle-orm";
import pg from "pg";
import { afterEach, beforeAll, describe, expect, it, vi } from "vitest";
import { must } from "@/lib/base/result";
import { checkSentence, checkSheet, readLines, type CheckAnswer } from "@/lib/coverage/check";
import { ALIKE_LINES, checkDay, checkSerials } from "@/lib/coverage/check.queries";
import { refreshCover } from "@/lib/coverage/commands";
import { coverFor } from "@/lib/coverage/queries";
import type { Ctx } from "@/lib/ctx";
import { endSale, swapPart } from "@/lib/ledger/commands";
import { authorizeRma } from "@/lib/rma/commands";
import { rmaById } from "@/lib/rma/queries";
import { startFromCheck } from "@/lib/tickets/check.commands";
import { ticketByNumber } from "@/lib/tickets/queries";
import { authorized } from "../../factories/returns";
import { as, at, count, job, rows, sell, seller, unitId, type Seller } from "../../factories/seller";
import { part, system, type Cells } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
const TODAY = "2026-06-03";
const LOWMERE: Cells = {
  "account code": "LOWMERE",
  "account name": "Lowmere Hosting",
  "contact name": "Dana Voss",
  "contact e-mail": "dana@lowmere.example",
};

const rack = system("OW2210-PIN02", { order: "ORD-7010" });
const gone = system("OW2210-GONE1", { order: "ORD-7011" });
const twice = system("OW2210-TWICE", { order: "ORD-7012" });
const soon = system("OW2210-SOON1", {
  order: "ORD-7014",
  "ship date": "2023-06-05",
  "delivery date": "2023-06-06",
});
const later = system("OW2210-LATER", {
  order: "ORD-7015",
  "ship date": "2026-07-01",
  "delivery date": "2026-07-03",
});

beforeAll(async () => {
  s = await seller();
  await sell([
    rack,
    ...["A", "B", "C", "D", "E", "F"].map((c, i) => part(`VS19-RCK0${c}`, rack, `Drive bay ${i + 1}`)),
  ]);
  await sell([gone]);
  await sell([twice]);
  await sell([soon]);
  await sell([later]);
  must(await endSale(job(), { unitId: await unitId("OW2210-GONE1"), onDay: "2026-05-01", reason: "refund" }));
  must(await endSale(job(), { unitId: await unitId("OW2210-TWICE"), onDay: "2026-03-02", reason: "refund" }));
  await sell([{ ...twice, ...LOWMERE, order: "ORD-7013", "ship date": "2026-04-08", "delivery date": "" }]);
  must(
    await swapPart(job(), {
      parentUnitId: await unitId("OW2210-PIN02"),
      slot: "Drive bay 6",
      outUnitId: await unitId("VS19-RCK0F"),
      inUnitId: await unitId("VS19-STOCK1"),
      onDay: "2026-05-04",
      reason: "field swap",
    }),
  );
  const [sale] = await rows<{ id: string }>(
    sql`select s.id from sale_line s join unit u on u.id = s.unit_id where u.serial = 'OW2210-PIN02'`,
  );
  must(await refreshCover(job(), [sale!.id]));
  await authorized(s, "VS19-PIN0B");
});

const check = async (ctx: Ctx, text: string, onDay = TODAY): Promise<CheckAnswer[]> =>
  must(await checkSerials(ctx, must(readLines(text)).lines, onDay));
const one = async (ctx: Ctx, serial: string, onDay = TODAY) => (await check(ctx, serial, onDay))[0]!;
const brief = (a: CheckAnswer) => [a.line, a.unit?.serial ?? null, a.state];

describe("a list with everything wrong in it", () => {
  const text = [
    "ow2210 pin01",
    "",
    "%'; drop table unit; --",
    "VS19-PIN0A",
    "\uFFFD\u{1F4A5} ???",
    "S/N: VS19-PIN0B",
    "VS19-P1N0A",
    "vs19pin0a",
    "—",
    "A".repeat(500),
    "OW2210-GONE1",
    "VS19-RCK0F",
    "VS19-STOCK2",
    "VS19-LOW0A",
    "OW2210-LOW01",
  ].join("\n");

  it("answers every line once and in order; the bad ones block none", async () => {
    const answers = await check(as(s.agent), text);
    expect(answers.map(brief)).toEqual([
      [1, "OW2210-PIN01", "covered"],
      [3, null, "not_found"],
      [4, "VS19-PIN0A", "covered"],
      [5, null, "not_found"],
      [6, "VS19-PIN0B", "covered"],
      [7, null, "not_found"],
      [8, "VS19-PIN0A", "covered"],
      [9, null, "not_found"],
      [10, null, "not_found"],
      [11, "OW2210-GONE1", "ended"],
      [12, "VS19-RCK0F", "none"],
      [13, "VS19-STOCK2", "none"],
      [14, "VS19-LOW0A", "covered"],
      [15, "OW2210-LOW01", "covered"],
    ]);
    const alone = await Promise.all(["ow2210 pin01", "VS19-LOW0A"].map((t) => one(as(s.agent), t)));
    expect([answers[0], answers[12]].map((a) => [a!.lastOn, a!.clause, a!.firstOn])).toEqual(
      alone.map((a) => [a.lastOn, a.clause, a.firstOn]),
    );
  });

  it("says what is doubtful about each", async () => {
    const by = new Map((await check(as(s.agent), text)).map((a) => [a.line, a.doubts.join("; ")]));
    expect(by.get(1)).toBe("");
    expect(by.get(6)).toMatch(/^on RMA-\d{4}-\w already$/);
    expect(by.get(7)).toMatch(/looks like .*VS19-PIN0A/);
    expect(by.get(8)).toBe("named in line 4 already");
    expect(by.get(9)).toBe("no serial in this line");
    expect(by.get(11)).toBe("its sale under order ORD-7011 ended on 1 May 2026");
    expect(by.get(12)).toBe("left OW2210-PIN02 on 4 May 2026");
    expect(by.get(13)).toBe("never sold");
    expect(by.get(14)).toBe("bought by Lowmere Hosting, most lines by Pinnock Analytics");
  });

  it("tells system, slot and model of a part, and the RMA it is on", async () => {
    expect(await one(as(s.agent), "VS19-PIN0B")).toMatchObject({
      unit: { modelCode: "VS-19", systemSerial: "OW2210-PIN01", slot: "Drive bay 2", isPart: true },
      rma: { number: expect.stringMatching(/^RMA-/) as string, ticketNumber: expect.any(Number) as number },
      startable: false,
    });
    expect(await one(as(s.agent), "OW2210-PIN01")).toMatchObject({
      unit: { systemSerial: null, slot: null, isPart: false, accountName: "Pinnock Analytics" },
      startable: true,
    });
  });

  it("tells what depends on the day asked", async () => {
    expect(await one(as(s.agent), "OW2210-PIN01", "2026-01-20")).toMatchObject({
      state: "doa",
      clause: "2.1",
      doaUntil: "2026-02-06",
      lastOn: "2029-01-05",
    });
    expect(await one(as(s.agent), "OW2210-SOON1")).toMatchObject({
      state: "covered",
      doubts: ["cover ends 2 days later"],
    });
    expect((await one(as(s.agent), "OW2210-SOON1", "2026-06-05")).doubts).toEqual([
      "this is its last covered day",
    ]);
    expect(await one(as(s.agent), "OW2210-SOON1", "2026-06-06")).toMatchObject({
      state: "ended",
      doubts: [],
    });
    expect(await one(as(s.agent), "OW2210-LATER")).toMatchObject({
      state: "later",
      doubts: ["shipped on 1 July 2026, after the day asked"],
      startable: false,
    });
    expect(await one(as(s.agent), "OW2210-TWICE")).toMatchObject({
      state: "covered",
      unit: { accountName: "Lowmere Hosting" },
      doubts: ["sold 2 times; its newest sale counts"],
    });
  });

  it("takes today in the seller's zone, and no day that is none", () => {
    // 23:30 UTC in summer is the next day there.
    expect(checkDay(as(s.agent, at("2026-06-03T23:30:00Z")), "")).toEqual({ ok: true, value: "2026-06-04" });
    for (const day of ["2026-02-30", "tomorrow", "0001-01-01", "2026-6-3"])
      expect(checkDay(as(s.agent), day)).toMatchObject({ ok: false, refusal: { fields: { day: [/./] } } });
  });
});

describe("a customer", () => {
  it("finds only their own, and no word of what is not", async () => {
    const answers = await check(
      as(s.sam),
      "OW2210-PIN01\nOW2210-LOW01\nVS19-LOW0A\nOW2210-L0W01\nOW2210-STK01",
    );
    expect(answers.map(brief)).toEqual([
      [1, "OW2210-PIN01", "covered"],
      ...[2, 3, 4, 5].map((n) => [n, null, "not_found"]),
    ]);
    // Theirs and nobody's are told alike, letter for letter.
    const nobodys = await one(as(s.sam), "OW2210-XXXXX");
    for (const a of answers.slice(1))
      expect({ ...a, line: 1, given: "", key: "" }).toEqual({ ...nobodys, given: "", key: "" });
    const sheet = checkSheet(answers);
    for (const word of ["Lowmere", "ORD-7002"] as const) expect(sheet).not.toContain(word);
  });

  it("is told of a unit that was theirs by their own sale alone", async () => {
    const mine = await one(as(s.sam), "OW2210-TWICE");
    expect(mine).toMatchObject({
      state: "ended",
      unit: { accountName: "Pinnock Analytics" },
      doubts: ["its sale under order ORD-7012 ended on 2 March 2026"],
    });
    expect(await one(as(s.dana), "OW2210-TWICE")).toMatchObject({ state: "covered", doubts: [] });
  });

  it("reads it in a sentence", async () => {
    const answers = await check(as(s.sam), "OW2210-PIN01\nOW2210-LOW01\nVS19-PIN0B");
    expect(checkSentence(answers, TODAY, "among your equipment")).toBe(
      "Two of three are covered on 3 June 2026; one is not among your equipment; one is on an RMA already.",
    );
  });
});

describe("the kept windows answer as the engine does", () => {
  it("for every unit sold, on days before, in and after its cover", async () => {
    const all = (await rows<{ serial: string }>(sql`select serial from unit order by serial`)).map(
      (r) => r.serial,
    );
    let compared = 0;
    for (const day of [
      "2026-01-20",
      "2026-05-04",
      TODAY,
      "2028-12-31",
      "2029-01-05",
      "2029-01-06",
      "2031-01-01",
    ]) {
      const answers = await check(as(s.agent), all.join("\n"), day);
      expect(answers.map((a) => a.unit?.serial)).toEqual(all);
      for (const a of answers) {
        const view = await coverFor(job(), a.unit!.unitId, day);
        const told = view?.rows.filter((r) => r.claimed) ?? [];
        if (told.length === 0) expect(a.state, a.given).toBe("none");
        const ended = a.doubts.some((d) => d.includes("its sale under order"));
        if (told.length === 0 || ended || a.state === "later") continue;
        const open = (kind: string) => told.find((r) => r.kind === kind && r.state !== "ended");
        expect([a.given, a.state, a.lastOn, a.firstOn]).toEqual([
          a.given,
          open("doa") ? "doa" : open("cover") ? "covered" : "ended",
          told
            .map((r) => r.lastOn)
            .sort()
            .at(-1),
          told.map((r) => r.firstOn).sort()[0],
        ]);
        expect(told.map((r) => r.clauseNumber)).toContain(a.clause);
        compared++;
      }
    }
    expect(compared).toBeGreaterThan(80);
  });
});

describe("two thousand lines", () => {
  afterEach(() => vi.restoreAllMocks());
  const counted = async <T>(run: () => Promise<T>): Promise<[T, number]> => {
    const spy = vi.spyOn(pg.Client.prototype, "query");
    spy.mockClear();
    const value = await run();
    return [value, spy.mock.calls.length];
  };

  it("take as many statements as two, when they are found", async () => {
    await rows(sql`
      insert into unit select (jsonb_populate_record(u, jsonb_build_object('id', gen_random_uuid(), 'serial', 'OW2210-B' || n,
        'serial_key', 'OW2210B' || n, 'serial_loose', '00221 08' || n))).* from unit u, generate_series(10001, 12000) n
      where u.serial = 'OW2210-PIN01'`);
    await rows(sql`
      insert into sale_line select (jsonb_populate_record(s, jsonb_build_object('id', gen_random_uuid(), 'unit_id', u.id,
        'line_key', 'B' || u.serial_key))).* from sale_line s, unit u, unit p
      where p.serial = 'OW2210-PIN01' and s.unit_id = p.id and u.serial like 'OW2210-B1%'`);
    const sales = await rows<{ id: string }>(
      sql`select s.id from sale_line s join unit u on u.id = s.unit_id where u.serial like 'OW2210-B1%'`,
    );
    expect(sales).toHaveLength(2000);
    must(
      await refreshCover(
        job(),
        sales.map((r) => r.id),
      ),
    );
    const list = Array.from({ length: 2000 }, (_, i) => `ow2210-b${10001 + i}`);
    const few = await counted(() => check(as(s.agent), list.slice(0, 2).join("\n")));
    const many = await counted(() => check(as(s.agent), list.join("\n")));
    expect(many[0].filter((a) => a.state === "covered")).toHaveLength(2000);
    expect(many[1]).toBe(few[1]);
    expect(many[1]).toBeLessThanOrEqual(8);
    const theirs = await counted(() => check(as(s.sam), list.join("\n")));
    expect(theirs[0].filter((a) => a.state === "covered")).toHaveLength(2000);
    expect(theirs[1]).toBe(few[1]);
  });

  it("take a bounded number when none is found", async () => {
    const list = Array.from({ length: 4000 }, (_, i) => `ZZ99-${100_000 + i}`);
    const half = await counted(() => check(as(s.agent), list.slice(0, 2000).join("\n")));
    const all = await counted(() => check(as(s.agent), list.join("\n")));
    expect(all[0]).toHaveLength(4000);
    expect(all[1]).toBe(half[1]);
    expect(all[1]).toBeLessThanOrEqual(8 + 2 * ALIKE_LINES);
  });
});

describe("starting a report from the list", () => {
  const ids = (serials: string[]) => Promise.all(serials.map(unitId));
  const form = async (serials: string[], more = {}) => ({
    formId: crypto.randomUUID(),
    unitIds: await ids(serials),
    faultClass: "failed_drive" as const,
    words: "They drop out of the array.",
    battery: "none" as const,
    data: "cleared" as const,
    ...more,
  });

  it("opens one ticket with every unit tied, one entry of the fault and a decision for each", async () => {
    const serials = ["VS19-RCK0A", "VS19-RCK0B", "VS19-RCK0C"];
    const before = await count("ticket");
    const started = must(await startFromCheck(as(s.sam), await form(serials)));
    expect(await count("ticket")).toBe(before + 1);
    expect(started).toMatchObject({ again: false, leftOut: [] });
    const ticket = (await ticketByNumber(as(s.sam), started.number))!;
    expect(ticket).toMatchObject({
      channel: "portal",
      personEmail: "sam@pinnock.example",
      waitingOn: "customer",
      waitingFor: "choose a remedy",
    });
    expect(ticket.units.map((u) => [u.serial, u.state, u.faultClass]).sort()).toEqual(
      serials.map((serial) => [serial, "tied", "failed_drive"]),
    );
    expect(ticket.entries.map((e) => e.kind)).toEqual(["fault_reported", ...serials.map(() => "decision")]);
    expect(
      await rows(sql`select count(*)::int as n, count(distinct unit_id)::int as units, min(outcome::text) as outcome
        from coverage_decision where ticket_id = ${started.ticketId}`),
    ).toEqual([{ n: 3, units: 3, outcome: "covered" }]);
    // And it goes on there with all lines in one RMA.
    const rma = must(
      await authorizeRma(as(s.sam), {
        ticketId: started.ticketId,
        lines: ticket.units.map((u) => ({ ticketUnitId: u.id })),
        remedy: "replacement_on_receipt",
        battery: { present: false, damaged: false },
      }),
    );
    expect((await rmaById(job(), rma.rmaId))!.lines.map((l) => l.serial).sort()).toEqual(serials);
    expect((await check(as(s.sam), serials.join("\n"))).map((a) => a.startable)).toEqual([
      false,
      false,
      false,
    ]);
  });

  it("leaves out what got an RMA in between, and says so where the others go on", async () => {
    const list = await form(["VS19-RCK0D", "VS19-RCK0C", "OW2210-GONE1"]);
    const started = must(await startFromCheck(as(s.sam), list));
    expect(started.leftOut.map((l) => l.serial)).toEqual(["VS19-RCK0C", "OW2210-GONE1"]);
    const ticket = (await ticketByNumber(as(s.sam), started.number))!;
    expect(ticket.units.map((u) => u.serial)).toEqual(["VS19-RCK0D"]);
    expect(ticket.entries[0]!.line).toMatch(
      /Left out: VS19-RCK0C, on RMA-\S+ already; OW2210-GONE1, its sale/,
    );
    const none = await startFromCheck(as(s.sam), await form(["VS19-RCK0C"]));
    expect(none).toMatchObject({ ok: false, refusal: { code: "conflict", message: /on RMA-/ as unknown } });
  });

  it("sent twice, one after the other or at once, starts one", async () => {
    const twice = await form(["VS19-RCK0E", "VS19-STOCK1"]);
    const before = await count("ticket");
    const both = await Promise.all([startFromCheck(as(s.sam), twice), startFromCheck(as(s.sam), twice)]);
    const third = must(await startFromCheck(as(s.sam), twice));
    expect(new Set([...both.map((r) => must(r).number), third.number]).size).toBe(1);
    expect(both.map((r) => must(r).again).sort()).toEqual([false, true]);
    expect(await count("ticket")).toBe(before + 1);
    const other = must(await startFromCheck(as(s.sam), { ...twice, unitIds: twice.unitIds.slice(0, 1) }));
    expect(other.number).not.toBe(third.number);
  });

  it("puts what a person must decide last, so that it is us the ticket waits on", async () => {
    const started = must(
      await startFromCheck(
        as(s.sam),
        await form(["OW2210-PIN01", "VS19-PIN0A"], { faultClass: "physical_damage" }),
      ),
    );
    expect(await ticketByNumber(job(), started.number)).toMatchObject({
      waitingOn: "us",
      waitingFor: "decide",
    });
  });

  it("is for the customer's own units alone", async () => {
    const none = await startFromCheck(as(s.sam), await form(["OW2210-LOW01", "OW2210-STK01"]));
    expect(none).toMatchObject({ ok: false, refusal: { code: "not_found" } });
    const some = must(await startFromCheck(as(s.sam), await form(["OW2210-LOW01", "OW2210-PIN02"])));
    expect((await ticketByNumber(as(s.sam), some.number))!.units.map((u) => u.serial)).toEqual([
      "OW2210-PIN02",
    ]);
    expect(some.leftOut).toEqual([]);
  });

  it("by an agent answers to the account's contact, or to whom the agent names", async () => {
    const first = must(await startFromCheck(as(s.agent), await form(["OW2210-LOW01", "VS19-LOW0A"])));
    expect(await ticketByNumber(job(), first.number)).toMatchObject({
      channel: "staff",
      accountName: "Lowmere Hosting",
      personEmail: "dana@lowmere.example",
      personName: "Dana Voss",
    });
    const named = { personName: "Night shift", personEmail: "night@lowmere.example" };
    const second = must(await startFromCheck(as(s.agent), await form(["OW2210-LOW01"], named)));
    expect(await ticketByNumber(job(), second.number)).toMatchObject(named);
    const foreign = await startFromCheck(
      as(s.agent),
      await form(["OW2210-LOW01"], { personEmail: "sam@pinnock.example" }),
    );
    expect(foreign).toMatchObject({
      ok: false,
      refusal: { fields: { personEmail: [/Pinnock/ as unknown] } },
    });
  });

  it("is about one customer's units, and refuses before anything is written", async () => {
    const before = [await count("ticket"), await count("entry"), await count("ticket_unit")];
    const mixed = await startFromCheck(as(s.agent), await form(["OW2210-LOW01", "OW2210-PIN02"]));
    expect(mixed).toMatchObject({ ok: false, refusal: { code: "rule", message: /one customer/ as unknown } });
    const harmed = await startFromCheck(as(s.sam), await form(["OW2210-PIN02"], { battery: "damaged" }));
    expect(harmed).toMatchObject({
      ok: false,
      refusal: {
        code: "rule",
        message: /must not be shipped. Isolate/ as unknown,
        fields: { battery: [/./] },
      },
    });
    for (const wrong of [
      { unitIds: [] },
      { words: " " },
      { faultClass: "melted" },
      { battery: undefined },
      { data: undefined },
    ])
      expect(
        await startFromCheck(as(s.sam), { ...(await form(["OW2210-PIN02"])), ...(wrong as object) }),
      ).toMatchObject({ ok: false, refusal: { code: "invalid" } });
    const warehouse = await startFromCheck(as(s.dock), await form(["OW2210-PIN02"]));
    expect(warehouse).toMatchObject({ ok: false, refusal: { code: "forbidden" } });
    expect([await count("ticket"), await count("entry"), await count("ticket_unit")]).toEqual(before);
  });
});
