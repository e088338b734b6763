import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { must } from "@/lib/base/result";
import { coverFor } from "@/lib/coverage/queries";
import type { Ctx } from "@/lib/ctx";
import { closeBench, keepReading, shipReplacement, startBench } from "@/lib/dock/bench.commands";
import { receiveLine } from "@/lib/dock/commands";
import { sheetFor } from "@/lib/dock/sheets";
import { keepAnswers, startReport } from "@/lib/evidence/commands";
import { defaultSite } from "@/lib/ledger/queries";
import { authorizeRma, markSent } from "@/lib/rma/commands";
import { rmaById } from "@/lib/rma/queries";
import { takeDecision, tieUnit } from "@/lib/tickets/commands";
import { sendReport } from "@/lib/tickets/report.commands";
import { fold, type EntryFact, type TicketState } from "@/lib/tickets/rules";
import { mailTicket, photo, stateOf } from "../../factories/returns";
import { as, at, job, rows, seller, unitId, type Seller } from "../../factories/seller";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
beforeAll(async () => {
  s = await seller();
});

/** What is stored of a ticket is what its record folds to, nothing else. */
async function storedIsFolded(ticketId: string): Promise<TicketState> {
  const entries = await rows<{ kind: EntryFact["kind"]; at: string; data: Record<string, unknown> }>(
    sql`select kind::text, at, data from entry where ticket_id = ${ticketId} order by seq`,
  );
  const folded = fold(
    entries.map((e) => ({ kind: e.kind, at: new Date(e.at), data: e.data })),
    await defaultSite(job()),
  );
  const [stored] = await rows(
    sql`select waiting_on::text as "waitingOn", waiting_for as "waitingFor", clock_started_at as "clockStartedAt", due_at as "dueAt",
      chase_on::text as "chaseOn", closed_at as "closedAt", evidence_wanted as "evidenceWanted", evidence_came as "evidenceCame"
      from ticket where id = ${ticketId}`,
  );
  const instant = (v: unknown) => (v === null ? null : new Date(v as string));
  expect({
    ...stored,
    clockStartedAt: instant(stored!.clockStartedAt),
    dueAt: instant(stored!.dueAt),
    closedAt: instant(stored!.closedAt),
  }).toEqual(folded);
  return folded;
}

const DAY = 24 * 3_600_000;

describe("from a mail to a settled RMA", () => {
  it("keeps the record, the tree, the cover and the derived state right at every step", async () => {
    let now = at("2026-06-03T09:00:00Z");
    const step = (actor: Parameters<typeof as>[0]): Ctx =>
      as(actor, (now = new Date(now.getTime() + DAY / 8)));
    const out = "VS19-PIN0A";
    const drive = await unitId(out);
    const { ticketId } = await mailTicket(s.sam, { receivedAt: now });
    expect(await storedIsFolded(ticketId)).toMatchObject({ waitingOn: "us", waitingFor: "answer" });

    const { ticketUnitId } = must(await tieUnit(step(s.agent), { ticketId, unitId: drive }));
    expect((await storedIsFolded(ticketId)).waitingOn).toBe("us");

    const taken = must(
      await takeDecision(step(s.agent), { ticketId, ticketUnitId, faultClass: "failed_drive" }),
    );
    // Delivered 7 January 2026, 36 months: the event's day is day zero (BGB s. 187, 188).
    expect(taken.decision).toMatchObject({
      outcome: "covered",
      clauseNumber: "3.2",
      lastCoveredOn: "2029-01-07",
    });
    expect(await storedIsFolded(ticketId)).toMatchObject({
      waitingOn: "us",
      waitingFor: "tell the customer",
    });

    const { rmaId, number } = must(
      await authorizeRma(step(s.agent), {
        ticketId,
        lines: [{ ticketUnitId }],
        remedy: "replacement_on_receipt",
      }),
    );
    expect(await storedIsFolded(ticketId)).toMatchObject({
      waitingOn: "customer",
      waitingFor: "send the part",
    });
    expect(await stateOf(rmaId)).toBe("authorized");

    must(await markSent(step(s.sam), { rmaId, carrier: "Parcel Line", tracking: "PL1" }));
    expect((await storedIsFolded(ticketId)).waitingOn).toBe("carrier");
    expect(await stateOf(rmaId)).toBe("in_transit");

    const line = (await rmaById(job(), rmaId))!.lines[0]!;
    const label = await photo(s, "receipt_line", line.id, "label");
    const arrived = await photo(s, "receipt_line", line.id, "arrived");
    must(
      await receiveLine(step(s.dock), {
        lineId: line.id,
        // As a hand scanner may give it: lower case, with a blank and a line end.
        scanned: "vs19 pin0a\r\n",
        place: "A-12",
        clientId: crypto.randomUUID(),
      }),
    );
    expect(await storedIsFolded(ticketId)).toMatchObject({ waitingOn: "bench", waitingFor: "test it" });
    const [came] = await rows<{ data: { photos: string[] } }>(
      sql`select data from entry where ticket_id = ${ticketId} and kind = 'dock_received'`,
    );
    expect(came!.data.photos.sort()).toEqual([label, arrived].sort());

    const { testId } = must(await startBench(step(s.bench), { lineId: line.id, scan: out }));
    for (const st of sheetFor("drive").steps)
      must(
        await keepReading(step(s.bench), {
          testId,
          step: st.step,
          value: st.serial ? out : st.measure ? "9000" : "",
          verdict: "fail",
        }),
      );
    expect(await storedIsFolded(ticketId)).toMatchObject({
      waitingOn: "bench",
      waitingFor: "finish the test",
    });

    must(
      await closeBench(step(s.bench), {
        testId,
        scan: out,
        outcome: "fault_confirmed",
        disposition: "return_to_supplier",
        finding: "Blocks cannot be read.",
      }),
    );
    expect(await storedIsFolded(ticketId)).toMatchObject({ waitingOn: "dock" });

    const shipped = must(
      await shipReplacement(step(s.bench), {
        lineId: line.id,
        serial: "VS19-STOCK1",
        carrier: "Parcel Line",
        tracking: "PL2",
      }),
    );
    // 90 days from the swap end long before the rest of the first cover does.
    expect(shipped).toMatchObject({ lastCoveredOn: "2029-01-07", settled: true });
    expect(await storedIsFolded(ticketId)).toMatchObject({ waitingOn: "nobody" });
    expect(await stateOf(rmaId)).toBe("settled");

    const cover = (await coverFor(job(now), await unitId("OW2210-PIN01"), "2026-06-10"))!;
    const bay = cover.tree.find((p) => p.slot === "Drive bay 1")!;
    expect(bay).toMatchObject({ serial: "VS19-STOCK1", source: "swap" });
    expect(bay.was).toEqual([expect.objectContaining({ serial: out, reason: `replaced under ${number}` })]);
    expect(cover.rows.find((r) => r.serial === "VS19-STOCK1" && r.kind === "cover")!.lastOn).toBe(
      "2029-01-07",
    );
    expect(
      await rows(
        sql`select serial, whereabouts::text from unit where serial in (${out}, 'VS19-STOCK1') order by serial`,
      ),
    ).toEqual([
      { serial: out, whereabouts: "supplier" },
      { serial: "VS19-STOCK1", whereabouts: "customer" },
    ]);

    const refs = await rows<{ ref: string; kind: string }>(
      sql`select letter::text || number as ref, kind::text from entry where ticket_id = ${ticketId} order by seq`,
    );
    expect(refs.map((r) => `${r.ref} ${r.kind}`)).toEqual([
      "M1 mail_in",
      "N1 unit_tied",
      "C1 decision",
      "R1 rma_authorized",
      "S1 parcel_sent",
      "D1 dock_received",
      "B1 bench_started",
      "B2 bench_closed",
      "S2 replacement_shipped",
      "R2 rma_settled",
    ]);
    // No change without its audit row: one row for each entry, naming its reference.
    const audited = await rows<{ ref: string }>(
      sql`select after->>'ref' as ref from audit_row where subject_id = ${ticketId} and act like 'entry.%' order by chain_no`,
    );
    expect(audited.map((a) => a.ref)).toEqual(refs.map((r) => r.ref));
    const mails = await rows<{ template: string }>(
      sql`select template from outbox where ticket_id = ${ticketId} order by created_at, template`,
    );
    expect(mails.map((m) => m.template).sort()).toEqual([
      "bench_result",
      "received",
      "rma_authorized",
      "settled",
      "shipped",
    ]);
  });

  it("goes the same way from a portal report, where the customer takes the decision and the remedy", async () => {
    const { reportId } = must(
      await startReport(as(s.dana), {
        unitId: await unitId("OW2210-LOW01"),
        partId: await unitId("VS19-LOW0A"),
        faultClass: "failed_drive",
        words: "It clicks.",
        battery: "none",
      }),
    );
    must(await keepAnswers(as(s.dana), reportId, { words: "It clicks and is gone." }));
    const { number } = must(await sendReport(as(s.dana), reportId));
    const [ticket] = await rows<{ id: string; tu: string }>(
      sql`select t.id, tu.id as tu from ticket t join ticket_unit tu on tu.ticket_id = t.id where t.number = ${number}`,
    );
    expect(await storedIsFolded(ticket!.id)).toMatchObject({
      waitingOn: "customer",
      waitingFor: "choose a remedy",
    });
    const again = await sendReport(as(s.dana), reportId);
    expect(again.ok).toBe(false);
    const refused = await authorizeRma(as(s.dana), {
      ticketId: ticket!.id,
      lines: [{ ticketUnitId: ticket!.tu }],
      remedy: "refund",
    });
    expect(refused).toMatchObject({ ok: false, refusal: { code: "rule" } });
    const foreign = await authorizeRma(as(s.sam), {
      ticketId: ticket!.id,
      lines: [{ ticketUnitId: ticket!.tu }],
      remedy: "replacement_on_receipt",
    });
    expect(foreign).toMatchObject({ ok: false, refusal: { code: "not_found" } });
    const mine = must(
      await authorizeRma(as(s.dana), {
        ticketId: ticket!.id,
        lines: [{ ticketUnitId: ticket!.tu }],
        remedy: "replacement_on_receipt",
      }),
    );
    expect(mine.number).toMatch(/^RMA-\d+-[0-9A-Z]$/);
    expect(await storedIsFolded(ticket!.id)).toMatchObject({
      waitingOn: "customer",
      waitingFor: "send the part",
    });
  });
});
