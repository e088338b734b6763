import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { must } from "@/lib/base/result";
import { noteGivenOn, noteMovedPart, notePause, noteTransferNotice } from "@/lib/coverage/holding.commands";
import { refreshCover } from "@/lib/coverage/commands";
import { coverFor, coverSummaries } from "@/lib/coverage/queries";
import { replaceSystem, swapPart } from "@/lib/ledger/commands";
import { takeDecision, tieUnit } from "@/lib/tickets/commands";
import { decided, mailTicket } from "../../factories/returns";
import { as, at, job, rows, sell, seller, SERVER, stock, unitId, type Seller } from "../../factories/seller";
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

/** Kept windows and the engine's, side by side. */
async function agree(serial: string) {
  const saleLineId = await saleOf(serial);
  const kept = await rows(
    sql`select u.serial, w.kind::text, w.first_on::text as "firstOn", w.last_on::text as "lastOn" from cover_window w
      join unit u on u.id = w.unit_id left join installation i on i.id = w.installation_id
      where w.sale_line_id = ${saleLineId} and i.to_on is null order by 1, 2`,
  );
  const told = (await coverFor(job(), await unitId(serial), "2026-06-03"))!.rows
    .map(({ serial, kind, firstOn, lastOn }) => ({ serial, kind, firstOn, lastOn }))
    .sort((a, b) => (`${a.serial} ${a.kind}` < `${b.serial} ${b.kind}` ? -1 : 1));
  expect(kept).toEqual(told);
  expect(kept.length).toBeGreaterThan(0);
}
const lastOf = async (serial: string) =>
  (await coverFor(job(), await unitId(serial), "2026-06-03"))!.rows.find(
    (r) => r.serial === serial && r.kind === "cover",
  )?.lastOn;

describe("a unit given on to another company", () => {
  it("goes along with its days; the terms do not name it, so a person is needed", async () => {
    const one = system("OW2210-GIVE1", { order: "ORD-8101" });
    await sell([one, part("VS19-GIVE1", one, "Drive bay 1")]);
    must(
      await noteGivenOn(as(s.agent), {
        unitId: await unitId("OW2210-GIVE1"),
        accountCode: "lowmere",
        onDay: "2026-05-04",
      }),
    );
    await agree("OW2210-GIVE1");
    const { decision } = await decided(s, "OW2210-GIVE1", { from: s.dana, fault: "no_power" });
    expect(decision.outcome).toBe("needs_person");
    expect(decision.reasons.map((r) => r.rule)).toEqual(["given_on_unnamed"]);
    // The one who had it sees it no more; the one who has it does.
    expect(await coverFor(as(s.sam), await unitId("OW2210-GIVE1"), "2026-06-03")).toBeNull();
    expect(await coverFor(as(s.dana), await unitId("VS19-GIVE1"), "2026-06-03")).not.toBeNull();
  });

  it("is refused in words to an account that is not there, to its holder, and before its ship day", async () => {
    const unit = await unitId("OW2210-GIVE1");
    const give = (accountCode: string, onDay: string) =>
      noteGivenOn(as(s.agent), { unitId: unit, accountCode, onDay });
    expect(await give("NOBODY", "2026-05-04")).toMatchObject({
      ok: false,
      refusal: { fields: { accountCode: [expect.stringContaining("No account has the code NOBODY")] } },
    });
    expect(await give("LOWMERE", "2026-05-04")).toMatchObject({ ok: false, refusal: { code: "rule" } });
    expect(await give("PINNOCK", "2025-05-04")).toMatchObject({
      ok: false,
      refusal: { fields: { onDay: [expect.stringContaining("shipped")] } },
    });
    expect(
      await noteGivenOn(as(s.agent), {
        unitId: unit,
        accountCode: "PINNOCK",
        onDay: "2026-05-04",
        noticedOn: "2026-05-03",
      }),
    ).toMatchObject({ ok: false, refusal: { fields: { noticedOn: [expect.any(String)] } } });
  });

  it("waits until the claims of its holder are closed", async () => {
    await sell([system("OW2210-GIVE2", { order: "ORD-8102" })]);
    const d = await decided(s, "OW2210-GIVE2", { fault: "no_power" });
    expect(
      await noteGivenOn(as(s.agent), {
        unitId: await unitId("OW2210-GIVE2"),
        accountCode: "LOWMERE",
        onDay: "2026-05-04",
      }),
    ).toMatchObject({
      ok: false,
      refusal: { code: "conflict", message: expect.stringContaining(`Ticket ${d.number} is open`) as string },
    });
  });

  it("takes its notice once", async () => {
    const unit = { unitId: await unitId("OW2210-GIVE1") };
    must(await noteTransferNotice(as(s.agent), { ...unit, noticedOn: "2026-05-20" }));
    expect(await noteTransferNotice(as(s.agent), { ...unit, noticedOn: "2026-05-21" })).toMatchObject({
      ok: false,
      refusal: { code: "rule" },
    });
  });
});

describe("a part moved to another system", () => {
  const one = system("OW2210-MOVE1", {
    order: "ORD-8201",
    "ship date": "2026-01-05",
    "delivery date": "2026-01-07",
  });
  const two = system("OW2210-MOVE2", {
    order: "ORD-8202",
    "ship date": "2026-04-13",
    "delivery date": "2026-04-14",
  });
  beforeAll(async () => {
    await sell([one, part("VS19-MOVE1", one, "Drive bay 1")]);
    await sell([two, part("VS19-MOVE2", two, "Drive bay 1")]);
  });

  it("of the same customer keeps the terms and days it was sold under", async () => {
    must(
      await noteMovedPart(as(s.agent), {
        partUnitId: await unitId("VS19-MOVE1"),
        toUnitId: await unitId("OW2210-MOVE2"),
        slot: "Drive bay 2",
        onDay: "2026-05-04",
      }),
    );
    expect(await lastOf("VS19-MOVE1")).toBe("2029-01-07");
    expect(await lastOf("VS19-MOVE2")).toBe("2029-04-14");
    await agree("OW2210-MOVE1");
    await agree("OW2210-MOVE2");
    const { decision } = await decided(s, "VS19-MOVE1", { receivedAt: at("2029-01-08T10:00:00Z") });
    expect(decision).toMatchObject({ outcome: "not_covered", lastCoveredOn: "2029-01-07" });
  });

  it("swapped there has its floor from the swap and its remainder from the sale it came under", async () => {
    await stock("VS19-MOVE3");
    must(
      await swapPart(job(), {
        parentUnitId: await unitId("OW2210-MOVE2"),
        slot: "Drive bay 2",
        outUnitId: await unitId("VS19-MOVE1"),
        inUnitId: await unitId("VS19-MOVE3"),
        onDay: "2028-12-20",
        reason: "replaced",
      }),
    );
    must(await refreshCover(job(), [await saleOf("OW2210-MOVE2")]));
    expect(await lastOf("VS19-MOVE3")).toBe("2029-03-20");
    await agree("OW2210-MOVE2");
  });

  it("of another customer was given on, and its new holder is told that a person reads its terms", async () => {
    const three = system("OW2210-MOVE3", { order: "ORD-8203" });
    await sell([three, part("VS19-MOVE4", three, "Drive bay 1")]);
    must(
      await noteMovedPart(as(s.agent), {
        partUnitId: await unitId("VS19-MOVE4"),
        toUnitId: await unitId("OW2210-LOW01"),
        slot: "Drive bay 7",
        onDay: "2026-05-04",
      }),
    );
    const staffs = await decided(s, "VS19-MOVE4", { from: s.dana });
    expect(staffs.decision.reasons.map((r) => r.rule)).toEqual(["given_on_unnamed"]);
    // The first sale is another's: its days are not told to the new holder.
    const seen = (await coverFor(as(s.dana), await unitId("VS19-MOVE4"), "2026-06-03"))!;
    expect(seen.rows.filter((r) => r.serial === "VS19-MOVE4")).toEqual([]);
    expect(seen.unread).toEqual([await unitId("VS19-MOVE4")]);
    // The one it came from sees the system it left, and no word of where it went.
    const left = (await coverFor(as(s.sam), await unitId("VS19-MOVE4"), "2026-06-03"))!;
    expect(left.unit.serial).toBe("OW2210-MOVE3");
    expect(JSON.stringify(left)).not.toMatch(/Lowmere|LOW01|Drive bay 7/);
  });

  it("into a slot that is taken is refused with what stands there", async () =>
    expect(
      await noteMovedPart(as(s.agent), {
        partUnitId: await unitId("VS19-MOVE2"),
        toUnitId: await unitId("OW2210-LOW01"),
        slot: "Drive bay 1",
        onDay: "2026-05-04",
      }),
    ).toMatchObject({
      ok: false,
      refusal: { code: "conflict", fields: { slot: [expect.stringContaining("VS19-LOW0A")] } },
    }));
});

describe("a whole unit that took over a sale", () => {
  it("has the rest of the first cover, or its floor where that is later", async () => {
    await sell([system("OW2210-OLD01", { order: "ORD-8301", "ship date": "2026-01-05" })]);
    for (const [fresh, old, onDay, last] of [
      ["OW2210-NEW01", "OW2210-OLD01", "2026-05-04", "2029-01-05"],
      ["OW2210-NEW02", "OW2210-NEW01", "2028-12-20", "2029-03-20"],
    ] as const) {
      await stock(fresh, SERVER);
      must(
        await replaceSystem(job(), {
          oldUnitId: await unitId(old),
          newUnitId: await unitId(fresh),
          onDay,
        }),
      );
      must(await refreshCover(job(), [await saleOf(fresh)]));
      expect(await lastOf(fresh)).toBe(last);
      await agree(fresh);
    }
    const { decision } = await decided(s, "OW2210-NEW02", {
      fault: "no_power",
      receivedAt: at("2029-03-20T10:00:00Z"),
    });
    expect(decision).toMatchObject({ outcome: "covered", lastCoveredOn: "2029-03-20" });
  });
});

describe("cover that rests", () => {
  it("ends later by its days, in the kept windows too", async () => {
    const unit = await unitId("OW2210-PIN01");
    must(
      await notePause(as(s.agent), {
        unitId: unit,
        from: "2026-03-01",
        to: "2026-03-10",
        reason: "at our bench",
      }),
    );
    expect(await lastOf("OW2210-PIN01")).toBe("2029-01-15");
    await agree("OW2210-PIN01");
    expect((await coverSummaries(job(), [unit], "2026-06-03")).get(unit)?.lastOn).toBe("2029-01-15");
  });

  it("goes along when a whole unit takes over the sale", async () => {
    await sell([system("OW2210-REST1", { order: "ORD-8401" })]);
    must(
      await notePause(as(s.agent), {
        unitId: await unitId("OW2210-REST1"),
        from: "2026-03-01",
        to: "2026-03-10",
        reason: "at our bench",
      }),
    );
    const before = await lastOf("OW2210-REST1");
    await stock("OW2210-REST2", SERVER);
    must(
      await replaceSystem(job(), {
        oldUnitId: await unitId("OW2210-REST1"),
        newUnitId: await unitId("OW2210-REST2"),
        onDay: "2026-05-04",
      }),
    );
    expect([before, await lastOf("OW2210-REST2")]).toEqual(["2029-01-15", "2029-01-15"]);
  });

  it("is refused for days to come, and for longer than a pause is", async () => {
    const unit = { unitId: await unitId("OW2210-PIN01"), reason: "at our bench" };
    expect(await notePause(as(s.agent), { ...unit, from: "2026-05-01", to: "2031-05-01" })).toMatchObject({
      ok: false,
      refusal: { fields: { to: [expect.stringContaining("still to come")] } },
    });
    expect(await notePause(as(s.agent), { ...unit, from: "2025-01-01", to: "2026-05-01" })).toMatchObject({
      ok: false,
      refusal: { fields: { to: [expect.stringContaining("366 days")] } },
    });
  });

  it("is refused where it ends before it starts, or lies before the sale", async () => {
    const unit = { unitId: await unitId("OW2210-PIN01"), reason: "at our bench" };
    expect(await notePause(as(s.agent), { ...unit, from: "2026-03-10", to: "2026-03-01" })).toMatchObject({
      ok: false,
      refusal: { fields: { to: ["The last day cannot come before the first."] } },
    });
    expect(await notePause(as(s.agent), { ...unit, from: "2025-03-01", to: "2025-03-04" })).toMatchObject({
      ok: false,
      refusal: { fields: { to: [expect.stringContaining("shipped")] } },
    });
    expect(await notePause(as(s.agent), { ...unit, from: "2026-02-30", to: "2026-03-04" })).toMatchObject({
      ok: false,
      refusal: { fields: { from: [expect.any(String)] } },
    });
  });
});

describe("the day of a claim", () => {
  it("is that of the entry that first named the unit", async () => {
    const t = await mailTicket(s.sam, { receivedAt: at("2028-12-20T10:00:00Z") });
    const first = must(
      await tieUnit(as(s.agent), { ticketId: t.ticketId, unitId: await unitId("VS19-PIN0A"), namedIn: "m1" }),
    );
    const taken = must(
      await takeDecision(as(s.agent), {
        ticketId: t.ticketId,
        ticketUnitId: first.ticketUnitId,
        faultClass: "failed_drive",
      }),
    );
    expect(taken.decision.reasons.at(0)?.dates.claimOn).toBe("2028-12-20");
    expect(
      await tieUnit(as(s.agent), { ticketId: t.ticketId, unitId: await unitId("VS19-PIN0B"), namedIn: "M9" }),
    ).toMatchObject({
      ok: false,
      refusal: { fields: { namedIn: [expect.stringContaining("no entry M9")] } },
    });
  });

  it("and what a log says is a person's reading: of this serial, or it stops", async () => {
    const d = await decided(s, "VS19-PIN0B");
    const again = (more: object) =>
      takeDecision(as(s.agent), {
        ticketId: d.ticketId,
        ticketUnitId: d.ticketUnitId,
        faultClass: "failed_drive",
        ...more,
      });
    const outcome = async (more: object) => must(await again(more)).decision.outcome;
    expect(await outcome({ powerOnHours: "30001", logSerial: "vs19 pin0b" })).toBe("not_covered");
    expect(await outcome({ powerOnHours: "30000", logSerial: "VS19-PIN0B" })).toBe("covered");
    expect(await outcome({ powerOnHours: "30001" })).toBe("needs_person");
    expect(await outcome({ powerOnHours: "10", logSerial: "VS19-LOW0A" })).toBe("needs_person");
    expect(await again({ powerOnHours: "many" })).toMatchObject({
      ok: false,
      refusal: { fields: { powerOnHours: ["Give the hours as a number."] } },
    });
    expect(await again({ established: ["liquid"], ruledOut: ["liquid"] })).toMatchObject({
      ok: false,
      refusal: { fields: { ruledOut: [expect.stringContaining("not both")] } },
    });
  });
});
