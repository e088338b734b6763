import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { must } from "@/lib/base/result";
import { publishTerms } from "@/lib/coverage/commands";
import { closeBench, sendBack, settleByMoney, shipReplacement, startBench } from "@/lib/dock/bench.commands";
import { receiveLine } from "@/lib/dock/commands";
import { benchQueue } from "@/lib/dock/queries";
import { authorizeRma } from "@/lib/rma/commands";
import { authorized, confirmed, decided, photo, stateOf } from "../../factories/returns";
import { as, job, rows, sell, seller, type Seller } from "../../factories/seller";
import { part, system } from "../../factories/shipments";
import { BUSINESS_TERMS } from "../../factories/terms";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
beforeAll(async () => {
  s = await seller();
});

const waits = async (ticketId: string) =>
  (await rows<{ on: string }>(sql`select waiting_on::text as on from ticket where id = ${ticketId}`))[0]!.on;

describe("an advance replacement", () => {
  it("wants the old part back by the day its clause says, rolled to a working day of our site", async () => {
    must(
      await publishTerms(job(), {
        ...BUSINESS_TERMS,
        code: "OSW-TEN",
        clauses: BUSINESS_TERMS.clauses.map((c) => (c.number === "3.2" ? { ...c, dueBackDays: 10 } : c)),
      }),
    );
    const own = system("OW2210-TEN01", { order: "ORD-7701", terms: "OSW-TEN" });
    await sell([own, { ...part("VS19-TEN01", own, "Drive bay 1"), terms: "OSW-TEN" }]);
    const rma = await authorized(s, "VS19-TEN01", "advance_replacement");
    // Authorized on Wednesday 3 June 2026: ten days end on a Saturday.
    const [row] = await rows<{ due: string; by: string }>(
      sql`select due_back_on::text as due, expires_on::text as by from rma where id = ${rma.rmaId}`,
    );
    expect(row).toEqual({ due: "2026-06-15", by: "2026-06-17" });
  });

  it("goes out before anything has come back, and the RMA is settled when the old part has been judged", async () => {
    const rma = await authorized(s, "VS19-PIN0A", "advance_replacement");
    expect(await waits(rma.ticketId)).toBe("dock");
    expect((await benchQueue(job())).map((r) => r.serial)).toContain("VS19-PIN0A");

    const shipped = must(
      await shipReplacement(as(s.bench), {
        lineId: rma.lineId,
        serial: "VS19-STOCK1",
        carrier: "Parcel Line",
      }),
    );
    expect(shipped.settled).toBe(false);
    expect(await waits(rma.ticketId)).toBe("customer");
    // A second press finds the first.
    const twice = await shipReplacement(as(s.bench), {
      lineId: rma.lineId,
      serial: "VS19-STOCK2",
      carrier: "Parcel Line",
    });
    expect(twice.ok ? "" : twice.refusal.code).toBe("conflict");

    for (const slot of ["label", "arrived"] as const) await photo(s, "receipt_line", rma.lineId, slot);
    must(
      await receiveLine(as(s.dock), {
        lineId: rma.lineId,
        scanned: "VS19-PIN0A",
        place: "A-12",
        clientId: crypto.randomUUID(),
      }),
    );
    const { testId } = must(await startBench(as(s.bench), { lineId: rma.lineId, scan: "VS19-PIN0A" }));
    const sent = await closeBench(as(s.bench), {
      testId,
      scan: "VS19-PIN0A",
      outcome: "no_fault_found",
      disposition: "send_back",
      finding: "Nothing found.",
    });
    expect(sent.ok ? "" : sent.refusal.message).toContain("promised in advance");
    must(
      await closeBench(as(s.bench), {
        testId,
        scan: "VS19-PIN0A",
        outcome: "fault_confirmed",
        disposition: "scrap",
        finding: "Blocks cannot be read.",
      }),
    );
    expect(await stateOf(rma.rmaId)).toBe("settled");
    expect(await waits(rma.ticketId)).toBe("nobody");
  });
});

describe("what follows a test", () => {
  it("is what was promised: a fault found brings no same unit back and no money instead of a part", async () => {
    const at = await confirmed(s, "VS19-PIN0B", "replacement_on_receipt");
    const back = await sendBack(as(s.bench), { lineId: at.lineId, carrier: "Parcel Line" });
    const money = await settleByMoney(as(s.agent), { lineId: at.lineId });
    expect([back.ok, money.ok]).toEqual([false, false]);
    expect(await stateOf(at.rmaId)).toBe("at_bench");
  });
});

describe("a harmed battery", () => {
  it("gets no RMA and so no label, whoever asks", async () => {
    const d = await decided(s, "VS19-LOW0A", { from: s.dana });
    await rows(sql`update ticket_unit set answers = '{"battery":"damaged"}' where id = ${d.ticketUnitId}`);
    for (const actor of [s.agent, s.dana]) {
      const refused = await authorizeRma(as(actor), {
        ticketId: d.ticketId,
        lines: [{ ticketUnitId: d.ticketUnitId }],
        remedy: "replacement_on_receipt",
      });
      expect(refused.ok ? "" : refused.refusal.message).toContain("damaged battery");
    }
    expect((await rows(sql`select id from rma where ticket_id = ${d.ticketId}`)).length).toBe(0);
  });
});
