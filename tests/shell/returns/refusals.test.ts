import { eq, sql } from "drizzle-orm";
import { beforeAll, beforeEach, describe, expect, it } from "vitest";
import { rawDb } from "@/db/client";
import { files } from "@/db/schema/files";
import { must } from "@/lib/base/result";
import { closeBench, keepReading, sendBack, shipReplacement, startBench } from "@/lib/dock/bench.commands";
import { receiveLine, setAside } from "@/lib/dock/commands";
import { authorizeRma, declineClaim, withdrawRma } from "@/lib/rma/commands";
import { rmaById } from "@/lib/rma/queries";
import { askEvidence, tieUnit } from "@/lib/tickets/commands";
import {
  authorized,
  confirmed,
  decided,
  mailTicket,
  photo,
  received,
  stateOf,
  tested,
} from "../../factories/returns";
import { as, at, count, job, rows, sell, seller, stock, unitId, type Seller } from "../../factories/seller";
import { part, system } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
let n = 0;
/** A drive in a system of its own, so that no case stands on another's. */
let drive: string;
beforeAll(async () => {
  s = await seller();
});
beforeEach(async () => {
  const of = system(`OW2210-R${String(++n).padStart(3, "0")}`, { order: `ORD-R${n}` });
  drive = `VS19-R${String(n).padStart(3, "0")}A`;
  await sell([of, part(drive, of, "Drive bay 1")]);
});

const refused = (code: string, words: RegExp) => ({
  ok: false,
  refusal: expect.objectContaining({ code, message: expect.stringMatching(words) as string }) as object,
});

describe("two people at once", () => {
  it("gives one serial to one RMA, and tells the other its number", async () => {
    const [a, b] = [await decided(s, drive), await decided(s, drive)];
    const ask = (d: typeof a, who: Seller["agent"]) =>
      authorizeRma(as(who), {
        ticketId: d.ticketId,
        lines: [{ ticketUnitId: d.ticketUnitId }],
        remedy: "advance_replacement",
      });
    const before = await count("outbox");
    const both = await Promise.all([ask(a, s.agent), ask(b, s.second)]);
    const won = both.filter((r) => r.ok);
    const lost = both.find((r) => !r.ok)!;
    expect(won).toHaveLength(1);
    const number = won[0]!.ok ? won[0]!.value.number : "";
    expect(lost).toMatchObject({ refusal: { code: "conflict", details: { rmaNumber: number } } });
    expect(await count("outbox")).toBe(before + 1);
    expect(
      await rows(
        sql`select count(*)::int as n from rma_line l join unit u on u.id = l.unit_id where u.serial = ${drive}`,
      ),
    ).toEqual([{ n: 1 }]);
  });

  it("books a double click on authorize once", async () => {
    const d = await decided(s, drive);
    const ask = () =>
      authorizeRma(as(s.agent), {
        ticketId: d.ticketId,
        lines: [{ ticketUnitId: d.ticketUnitId }],
        remedy: "advance_replacement",
      });
    const both = await Promise.all([ask(), ask()]);
    expect(both.filter((r) => r.ok)).toHaveLength(1);
    expect(both.find((r) => !r.ok)).toMatchObject({ refusal: { code: "conflict" } });
    expect(await rows(sql`select count(*)::int as n from rma where ticket_id = ${d.ticketId}`)).toEqual([
      { n: 1 },
    ]);
  });

  it("takes one parcel in once, whoever scans it first", async () => {
    const rma = await authorized(s, drive);
    for (const slot of ["label", "arrived"] as const) await photo(s, "receipt_line", rma.lineId, slot);
    const scan = (clientId: string, who: Seller["dock"]) =>
      receiveLine(as(who), { lineId: rma.lineId, scanned: drive, place: "A-12", clientId });
    const [one, two] = [crypto.randomUUID(), crypto.randomUUID()];
    const both = await Promise.all([scan(one, s.dock), scan(two, s.bench)]);
    expect(both.filter((r) => r.ok)).toHaveLength(1);
    expect(both.find((r) => !r.ok)).toMatchObject(refused("conflict", /taken in already by .+, at A-12/));
    expect(
      await rows(sql`select count(*)::int as n from receipt_line where rma_line_id = ${rma.lineId}`),
    ).toEqual([{ n: 1 }]);
    // The network lost the answer: the station sends the same scan again and gets its first receipt.
    const mine = both[0]!.ok ? one : two;
    const first = both.find((r) => r.ok)!;
    const again = must(await scan(mine, s.dock));
    expect(again).toMatchObject({ again: true, receiptId: first.ok ? first.value.receiptId : "" });
    expect(
      await rows(
        sql`select count(*)::int as n from entry where ticket_id = ${rma.ticketId} and kind = 'dock_received'`,
      ),
    ).toEqual([{ n: 1 }]);
  });
});

describe("at the dock", () => {
  it("books nothing for a wrong serial, even one character away", async () => {
    const rma = await authorized(s, drive);
    for (const slot of ["label", "arrived"] as const) await photo(s, "receipt_line", rma.lineId, slot);
    const wrong = `${drive.slice(0, -1)}B`;
    const [audits, entries] = [await count("audit_row"), await count("entry")];
    const stop = await receiveLine(as(s.dock), {
      lineId: rma.lineId,
      scanned: wrong,
      place: "A-12",
      clientId: crypto.randomUUID(),
    });
    expect(stop).toMatchObject(refused("rule", /^Stop\. One character differs.*Nothing was booked/));
    expect([await count("audit_row"), await count("entry")]).toEqual([audits, entries]);
    expect(await stateOf(rma.rmaId)).toBe("authorized");
    const unit = await rows(sql`select whereabouts::text from unit where serial = ${drive}`);
    expect(unit).toEqual([{ whereabouts: "customer" }]);

    const clientId = crypto.randomUUID();
    const aside = {
      scanned: wrong,
      rmaId: rma.rmaId,
      expected: drive,
      kind: "wrong_unit" as const,
      clientId,
    };
    expect(must(await setAside(as(s.dock), aside)).again).toBe(false);
    expect(must(await setAside(as(s.dock), aside)).again).toBe(true);
    expect(
      await rows(
        sql`select t.waiting_on::text, (select count(*)::int from entry e where e.ticket_id = t.id and e.kind = 'dock_stopped') as n from ticket t where id = ${rma.ticketId}`,
      ),
    ).toEqual([{ waiting_on: "us", n: 1 }]);
  });

  it("does not take 0 for O", async () => {
    const of = system("OW2210-ZERO1", { order: "ORD-ZERO" });
    await sell([of, part("VS19-ZEROO", of, "Drive bay 1")]);
    const rma = await authorized(s, "VS19-ZEROO");
    const stop = await receiveLine(as(s.dock), {
      lineId: rma.lineId,
      scanned: "VS19-ZERO0",
      place: "A-12",
      clientId: crypto.randomUUID(),
    });
    expect(stop).toMatchObject(refused("rule", /^Stop\. One character differs/));
  });

  it("wants each photo before it moves, and one that the check threw out is none", async () => {
    const rma = await authorized(s, drive);
    const scan = () =>
      receiveLine(as(s.dock), {
        lineId: rma.lineId,
        scanned: drive,
        place: "A-12",
        clientId: crypto.randomUUID(),
      });
    expect(await scan()).toMatchObject(refused("rule", /serial label, as it arrived/));
    await photo(s, "receipt_line", rma.lineId, "label");
    const bad = await photo(s, "receipt_line", rma.lineId, "arrived");
    await rawDb().update(files).set({ state: "rejected", reason: "no picture" }).where(eq(files.id, bad));
    expect(await scan()).toMatchObject(refused("rule", /missing before it moves: as it arrived\.$/));
    await photo(s, "receipt_line", rma.lineId, "arrived");
    expect(await scan()).toMatchObject({ ok: true });
  });

  it("expects nothing of a withdrawn RMA, and the serial is free for the next", async () => {
    const rma = await authorized(s, drive);
    must(await withdrawRma(as(s.agent), { rmaId: rma.rmaId }));
    const scan = await receiveLine(as(s.dock), {
      lineId: rma.lineId,
      scanned: drive,
      place: "A-12",
      clientId: crypto.randomUUID(),
    });
    expect(scan).toMatchObject(refused("conflict", /not expected any more/));
    expect((await authorized(s, drive)).number).not.toBe(rma.number);
  });
});

describe("at the bench", () => {
  it("tests only what was taken in, under its own serial", async () => {
    const rma = await authorized(s, drive);
    expect(await startBench(as(s.bench), { lineId: rma.lineId, scan: drive })).toMatchObject(
      refused("rule", /Only a unit that the dock has taken in/),
    );
    const other = system(`OW2210-B${n}`, { order: `ORD-B${n}` });
    await sell([other, part(`VS19-B${n}00`, other, "Drive bay 1")]);
    const here = await received(s, `VS19-B${n}00`);
    expect(await startBench(as(s.bench), { lineId: here.lineId, scan: drive })).toMatchObject(
      refused("rule", /^Stop: /),
    );
  });

  it("refuses a disposition that the outcome forbids, and keeps the test open", async () => {
    const t = await tested(s, drive);
    const close = (more: object) =>
      closeBench(as(s.bench), {
        testId: t.testId,
        scan: drive,
        outcome: "fault_confirmed",
        disposition: "return_to_supplier",
        finding: "Blocks cannot be read.",
        ...more,
      });
    expect(await close({ disposition: "restock" })).toMatchObject(
      refused("rule", /repair or return to supplier or scrap, not to restock/),
    );
    expect(await close({ outcome: "no_fault_found", disposition: "restock" })).toMatchObject(
      refused("rule", /bears data/),
    );
    expect(
      await close({ outcome: "damage_not_covered", disposition: "send_back", secondPerson: "Piotr Lund" }),
    ).toMatchObject(refused("rule", /photo of it first/));
    expect(await close({ scan: "VS19-STOCK1" })).toMatchObject(refused("rule", /^Stop: /));
    expect(await rows(sql`select closed_at from bench_test where id = ${t.testId}`)).toEqual([
      { closed_at: null },
    ]);
    must(await close({}));
    expect(await close({})).toMatchObject(refused("conflict", /closed already/));
    const late = await keepReading(as(s.bench), { testId: t.testId, step: 2, verdict: "pass" });
    expect(late).toMatchObject(refused("rule", /readings stay as they are/));
  });

  it("lets damage not covered pass only with a photo and a second person", async () => {
    const t = await tested(s, drive);
    await photo(s, "bench_test", t.testId, "finding");
    const close = (secondPerson: string) =>
      closeBench(as(s.bench), {
        testId: t.testId,
        scan: drive,
        outcome: "damage_not_covered",
        disposition: "send_back",
        finding: "The connector is broken off.",
        secondPerson,
      });
    expect(await close("")).toMatchObject(refused("rule", /second pair of eyes/));
    expect(await close("mei okafor")).toMatchObject(refused("rule", /somebody else's/));
    must(await close("Piotr Lund"));
    const back = must(await sendBack(as(s.bench), { lineId: t.lineId, carrier: "Parcel Line" }));
    expect(back.settled).toBe(true);
    expect(await stateOf(t.rmaId)).toBe("settled");
  });

  it("needs a manager to restock what came back a second time without a fault", async () => {
    const nff = {
      scan: drive,
      outcome: "no_fault_found" as const,
      finding: "It reads and writes as it should.",
    };
    const first = await tested(s, drive, "replacement_on_receipt");
    must(await closeBench(as(s.bench), { testId: first.testId, disposition: "send_back", ...nff }));
    must(await sendBack(as(s.bench), { lineId: first.lineId, carrier: "Parcel Line" }));
    const second = await tested(s, drive, "replacement_on_receipt");
    const restock = {
      testId: second.testId,
      disposition: "restock" as const,
      sanitization: {
        method: "clear" as const,
        technique: "block erase",
        tool: "erase tool 2.1",
        verification: "full",
      },
      ...nff,
    };
    expect(await closeBench(as(s.bench), restock)).toMatchObject(refused("rule", /A manager decides/));
    must(await closeBench(as(s.manager), restock));
    expect(await rows(sql`select whereabouts::text from unit where serial = ${drive}`)).toEqual([
      { whereabouts: "stock" },
    ]);
  });
});

describe("what goes out", () => {
  it("must be known, in stock and fit; nothing of a refused one is left", async () => {
    const t = await confirmed(s, drive);
    const ship = (serial: string) =>
      shipReplacement(as(s.bench), { lineId: t.lineId, serial, carrier: "Parcel Line" });
    expect(await ship("VS19-NOWHERE")).toMatchObject(refused("not_found", /not in the ledger/));
    expect(await ship("VS19-LOW0A")).toMatchObject(refused("rule", /not in stock/));
    await stock("VS09-SMALL", {
      code: "VS-09",
      name: "Vantry 0.9 TB drive",
      kind: "part",
      family: "drive",
      facts: { interface: "two-lane", form: "2.5 inch", media: "flash", gb: 960 },
    });
    expect(await ship("VS09-SMALL")).toMatchObject(refused("rule", /does not fit\. Less capacity: 960/));
    expect(await rows(sql`select whereabouts::text from unit where serial = 'VS09-SMALL'`)).toEqual([
      { whereabouts: "stock" },
    ]);
    const good = `VS19-OUT${n}`;
    await stock(good);
    must(await ship(good));
    expect(await ship(good)).toMatchObject(refused("conflict", /went out for it already/));
  });

  it("replaces a whole system under its first days", async () => {
    const serial = `OW2210-R${String(n).padStart(3, "0")}`;
    const d = await decided(s, serial, { fault: "no_power" });
    const rma = must(
      await authorizeRma(as(s.agent), {
        ticketId: d.ticketId,
        lines: [{ ticketUnitId: d.ticketUnitId }],
        remedy: "advance_replacement",
      }),
    );
    const lineId = (await rmaById(job(), rma.rmaId))!.lines[0]!.id;
    for (const slot of ["label", "arrived", "socket"] as const) await photo(s, "receipt_line", lineId, slot);
    must(
      await receiveLine(as(s.dock), { lineId, scanned: serial, place: "A-3", clientId: crypto.randomUUID() }),
    );
    const { testId } = must(await startBench(as(s.bench), { lineId, scan: serial }));
    must(
      await closeBench(as(s.bench), {
        testId,
        scan: serial,
        outcome: "fault_confirmed",
        disposition: "repair",
        finding: "The board does not start.",
      }),
    );
    must(await shipReplacement(as(s.bench), { lineId, serial: "OW2210-STK01", carrier: "Parcel Line" }));
    const sales = await rows(
      sql`select u.serial, s.shipped_on::text as shipped, s.ended_on is not null as ended, s.order_number
        from sale_line s join unit u on u.id = s.unit_id where s.order_number = ${`ORD-R${n}`} order by ended`,
    );
    expect(sales).toEqual([
      { serial: "OW2210-STK01", shipped: "2026-01-05", ended: false, order_number: `ORD-R${n}` },
      { serial, shipped: "2026-01-05", ended: true, order_number: `ORD-R${n}` },
    ]);
    const kept = await rows(
      sql`select kind::text, last_on::text from cover_window w join unit u on u.id = w.unit_id where u.serial = 'OW2210-STK01' order by kind::text`,
    );
    expect(kept.find((w) => w.kind === "cover")).toEqual({ kind: "cover", last_on: "2029-01-05" });
  });
});

describe("at the desk", () => {
  it("authorizes nothing without a tied unit, a decision, or with a damaged battery", async () => {
    const { ticketId } = await mailTicket(s.sam);
    const { ticketUnitId } = must(await tieUnit(as(s.agent), { ticketId, unitId: await unitId(drive) }));
    const ask = (more = {}) =>
      authorizeRma(as(s.agent), {
        ticketId,
        lines: [{ ticketUnitId }],
        remedy: "advance_replacement",
        ...more,
      });
    expect(await ask()).toMatchObject(refused("rule", /Take the coverage decision/));
    expect(await ask({ battery: { present: true, damaged: true } })).toMatchObject(
      refused("rule", /must not be shipped/),
    );
    expect(await ask({ lines: [] })).toMatchObject(refused("invalid", /./));
    expect(
      await authorizeRma(as(s.dock), { ticketId, lines: [{ ticketUnitId }], remedy: "repair" }),
    ).toMatchObject(refused("forbidden", /role/));
  });

  it("ties no unit of another customer to a customer's ticket", async () => {
    const { ticketId } = await mailTicket(s.sam);
    expect(await tieUnit(as(s.agent), { ticketId, unitId: await unitId("VS19-LOW0A") })).toMatchObject(
      refused("rule", /sold to Lowmere Hosting/),
    );
  });

  it("declines only what is not covered, and cites the clause", async () => {
    const late = await decided(s, drive, { receivedAt: at("2029-02-01T10:00:00Z") });
    expect(late.decision.outcome).toBe("not_covered");
    must(
      await declineClaim(as(s.agent), {
        ticketId: late.ticketId,
        ticketUnitId: late.ticketUnitId,
        reason: "It is past its cover.",
      }),
    );
    const [mail] = await rows<{ props: { why: string[] } }>(
      sql`select props from outbox where ticket_id = ${late.ticketId} and template = 'rma_declined'`,
    );
    expect(mail!.props.why.join(" ")).toMatch(/7 January 2029 \(clause 3\.2/);
    const fine = await decided(s, drive);
    expect(
      await declineClaim(as(s.agent), {
        ticketId: fine.ticketId,
        ticketUnitId: fine.ticketUnitId,
        reason: "We would rather not.",
      }),
    ).toMatchObject(refused("rule", /decision says covered/));
  });

  it("asks for evidence and waits on the customer, with a day to remind", async () => {
    const { ticketId } = await mailTicket(s.sam);
    must(await askEvidence(as(s.agent), { ticketId, wanted: ["log of the drive"], text: "Please send it." }));
    const [t] = await rows(
      sql`select waiting_on::text, chase_on::text, evidence_wanted, due_at from ticket where id = ${ticketId}`,
    );
    // Three working days after Wednesday 3 June 2026.
    expect(t).toEqual({ waiting_on: "customer", chase_on: "2026-06-08", evidence_wanted: 1, due_at: null });
  });
});
