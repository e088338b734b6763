import { parse as parseCsv } from "csv-parse/sync";
import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { read, transact } from "@/db/client";
import { keepPerson } from "@/lib/auth/commands";
import { must, ok } from "@/lib/base/result";
import { goodwillSheet, type GoodwillReport } from "@/lib/coverage/goodwill";
import {
  GOODWILL_PAGE,
  goodwillOfTicket,
  goodwillReport,
  goodwillRows,
  openGoodwills,
  oursOfGoodwill,
} from "@/lib/coverage/goodwill.queries";
import type { Actor, Role } from "@/lib/ctx";
import { defaultSite } from "@/lib/ledger/queries";
import { authorizeRma, withdrawRma } from "@/lib/rma/commands";
import { takeDecision } from "@/lib/tickets/commands";
import { answerGoodwill, askGoodwill } from "@/lib/tickets/goodwill.commands";
import { entryFacts, ticketByNumber } from "@/lib/tickets/queries";
import { fold } from "@/lib/tickets/rules";
import { decided, mailTicket } from "../../factories/returns";
import { as, at, job, NOON, rows, sell, seller, type Seller } from "../../factories/seller";
import { system } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
let second: Actor;
let both: Actor;
async function person(name: string, roles: Role[]): Promise<Actor> {
  const email = `${name.toLowerCase().replace(/ .*/, "")}@ostwick.example`;
  const { userId } = must(await keepPerson(job(), { email, name, roles }));
  return { kind: "staff", userId, name, email, roles };
}
beforeAll(async () => {
  s = await seller();
  second = await person("Hanne Brook", ["manager"]);
  both = await person("Idris Vane", ["agent", "manager"]);
});

const LATE = { receivedAt: at("2029-02-01T10:00:00Z") };
const REASON = "Third failure within a year, and they renew in spring.";
const refused = (code: string, message: RegExp) => ({
  ok: false,
  refusal: { code, message: expect.stringMatching(message) as string },
});
/** Each step a minute after the one before: the newest decision is the newest by its time. */
let minutes = 0;
const then = (actor: Actor) => as(actor, new Date(NOON.getTime() + ++minutes * 60_000));
let units = 0;
/** A unit of its own whose cover is over, decided so. */
async function over() {
  const serial = `OW2210-GW${String(++units).padStart(3, "0")}`;
  await sell([system(serial, { order: `ORD-G${units}` })]);
  const d = await decided(s, serial, { ...LATE, fault: "no_power" });
  expect(d.decision.outcome).toBe("not_covered");
  return { ...d, serial };
}
type Case = Awaited<ReturnType<typeof over>>;
const ask = (c: Case, more = {}, who: Actor = s.agent) =>
  askGoodwill(then(who), {
    ticketId: c.ticketId,
    ticketUnitId: c.ticketUnitId,
    reason: REASON,
    remedy: "repair",
    ...more,
  });
const grant = (goodwillId: string, decisionId: string, more = {}, who: Actor = s.manager) =>
  answerGoodwill(then(who), {
    goodwillId,
    decisionId,
    answer: "granted",
    remedy: "repair",
    limit: "420",
    ...more,
  });
const decline = (goodwillId: string, decisionId: string, who: Actor = s.manager) =>
  answerGoodwill(then(who), {
    goodwillId,
    decisionId,
    answer: "declined",
    words: "It was opened by others.",
  });
const authorize = (
  c: Case,
  remedy: "repair" | "credit" | "replacement_on_receipt" = "repair",
  who: Actor = s.agent,
) => authorizeRma(then(who), { ticketId: c.ticketId, lines: [{ ticketUnitId: c.ticketUnitId }], remedy });
const again = async (c: Case, more = {}) =>
  must(
    await takeDecision(then(s.agent), {
      ticketId: c.ticketId,
      ticketUnitId: c.ticketUnitId,
      faultClass: "no_power",
      ...more,
    }),
  );
const stored = async (id: string) =>
  (await rows<Record<string, unknown>>(sql`select *, state::text from goodwill where id = ${id}`))[0]!;
async function storedIsFolded(ticketId: string) {
  const folded = fold(await entryFacts(job(), ticketId), await defaultSite(job()));
  const [t] = await rows<{ waiting_on: string; waiting_for: string; due_at: Date | null }>(
    sql`select waiting_on::text, waiting_for, due_at from ticket where id = ${ticketId}`,
  );
  expect(t).toMatchObject({ waiting_on: folded.waitingOn, waiting_for: folded.waitingFor });
  expect(t!.due_at === null ? null : new Date(t!.due_at)).toEqual(folded.dueAt);
  return folded;
}
const codeOf = async (run: Promise<unknown>): Promise<string> => {
  const thrown = await run.then(
    () => null,
    (e: unknown) => e,
  );
  for (let e = thrown; e instanceof Error; e = e.cause) if ("code" in e) return String(e.code);
  return "none";
};

describe("asking", () => {
  it("stands on the record for us alone, and waits on us for a manager", async () => {
    const c = await over();
    const { goodwillId, ref } = must(await ask(c));
    expect(ref).toBe("C2");
    expect(await stored(goodwillId)).toMatchObject({
      state: "asked",
      decision_id: c.decisionId,
      wanted_remedy: "repair",
      reason: REASON,
      asked_by_name: "Noor Haddad",
      answered_by: null,
    });
    expect(await storedIsFolded(c.ticketId)).toMatchObject({
      waitingOn: "us",
      waitingFor: "grant or decline goodwill",
    });
    const [written] = await rows(
      sql`select kind::text, customer_sees from entry where ticket_id = ${c.ticketId} and letter = 'C' and number = 2`,
    );
    expect(written).toEqual({ kind: "goodwill_asked", customer_sees: false });
    const [audited] = await rows(sql`select act from audit_row where subject_id = ${goodwillId}`);
    expect(audited).toEqual({ act: "goodwill.ask" });
  });

  it("needs a reason, a decision that is no, and a unit that is tied and not on an RMA", async () => {
    const c = await over();
    expect(await ask(c, { reason: "   nice    " })).toMatchObject({
      refusal: { code: "invalid", fields: { reason: [expect.stringMatching(/ten characters/)] } },
    });
    expect(await ask(c, { remedy: "a cake" })).toMatchObject({
      refusal: { fields: { remedy: [expect.stringMatching(/remedy/)] } },
    });
    const covered = await decided(s, "VS19-PIN0A");
    expect(await ask({ ...covered, serial: "" })).toMatchObject(refused("rule", /no goodwill is needed/));
    const { ticketId } = await mailTicket(s.sam);
    expect(await ask({ ...c, ticketId })).toMatchObject(refused("not_found", /not on the ticket/));
    expect(await ask(c, {}, s.dock)).toMatchObject(refused("forbidden", /role/));
    expect(await ask(c, {}, s.sam)).toMatchObject(refused("forbidden", /role/));
  });

  it("is open to what a person must decide", async () => {
    const d = await decided(s, "VS19-PIN0B", { fault: "physical_damage" });
    expect(d.decision.outcome).toBe("needs_person");
    const { goodwillId } = must(await ask({ ...d, serial: "VS19-PIN0B" }));
    must(await decline(goodwillId, d.decisionId));
  });

  it("is once for a unit, also when two ask at the same instant", async () => {
    const c = await over();
    const both = await Promise.all([ask(c), ask(c, {}, s.second)]);
    const lost = both.find((r) => !r.ok);
    expect(both.filter((r) => r.ok)).toHaveLength(1);
    expect(lost).toMatchObject(refused("conflict", /(Noor Haddad|Ruben Castellan) has asked for OW2210-GW/));
    const open = sql`insert into goodwill (id, ticket_id, ticket_unit_id, unit_id, decision_id, state, asked_by, asked_by_name, asked_at, reason, wanted_remedy)
      select gen_random_uuid(), ticket_id, ticket_unit_id, unit_id, decision_id, state, asked_by, asked_by_name, asked_at, reason, wanted_remedy from goodwill where ticket_id = ${c.ticketId}`;
    expect(await codeOf(rows(open))).toBe("23505");
  });
});

describe("answering", () => {
  it("is never one's own, by the rule and by the database", async () => {
    const c = await over();
    const { goodwillId } = must(await ask(c, {}, both));
    expect(await grant(goodwillId, c.decisionId, {}, both)).toMatchObject(refused("rule", /their own ask/));
    expect(await decline(goodwillId, c.decisionId, both)).toMatchObject(refused("rule", /their own ask/));
    const own = transact(as(both), async (ctx) =>
      ok(
        await ctx.tx.execute(
          sql`update goodwill set state = 'granted', answered_by = asked_by, answered_at = now(), remedy = 'repair', limit_cents = 1 where id = ${goodwillId}`,
        ),
      ),
    );
    expect(await codeOf(own)).toBe("23514");
    expect(await grant(goodwillId, c.decisionId, {}, s.second)).toMatchObject(refused("forbidden", /role/));
    expect(await stored(goodwillId)).toMatchObject({ state: "asked" });
    must(await grant(goodwillId, c.decisionId));
  });

  it("of two managers at once is the first one's; the other learns who that was", async () => {
    const c = await over();
    const { goodwillId } = must(await ask(c));
    const answers = await Promise.all([
      grant(goodwillId, c.decisionId),
      decline(goodwillId, c.decisionId, second),
    ]);
    expect(answers.filter((a) => a.ok)).toHaveLength(1);
    const kept = await stored(goodwillId);
    const lost = answers.find((a) => !a.ok);
    expect(lost).toMatchObject(
      refused(
        "conflict",
        new RegExp(`first: it was ${String(kept.state)} by ${String(kept.answered_by_name)} on 3 Jun`),
      ),
    );
    const [n] = await rows(
      sql`select count(*)::int as n from entry where ticket_id = ${c.ticketId} and kind in ('goodwill_granted', 'goodwill_declined')`,
    );
    expect(n).toEqual({ n: 1 });
    const change = rows(sql`update goodwill set answer = 'otherwise' where id = ${goodwillId}`);
    expect(await codeOf(change)).toBe("23001");
  });

  it("needs a remedy and a limit in euros to grant, and words to decline", async () => {
    const c = await over();
    const { goodwillId } = must(await ask(c));
    for (const limit of ["", "0", "-5", "1.200", "much"])
      expect(await grant(goodwillId, c.decisionId, { limit })).toMatchObject({
        refusal: { code: "invalid", fields: { limit: [expect.any(String)] } },
      });
    expect(
      await answerGoodwill(then(s.manager), {
        goodwillId,
        decisionId: c.decisionId,
        answer: "declined",
        words: " ",
      }),
    ).toMatchObject({ refusal: { fields: { words: [expect.stringMatching(/why not/)] } } });
    const { number, ref } = must(
      await grant(goodwillId, c.decisionId, { limit: "420,50", words: "Once only." }),
    );
    expect([number, ref]).toEqual([c.number, "C3"]);
    expect(await stored(goodwillId)).toMatchObject({
      state: "granted",
      limit_cents: 42_050,
      answer: "Once only.",
    });
    expect(await storedIsFolded(c.ticketId)).toMatchObject({
      waitingOn: "us",
      waitingFor: "authorize what was granted",
    });
  });

  it("is told first when the unit was decided again, and then holds for that decision", async () => {
    const c = await over();
    const { goodwillId } = must(await ask(c));
    const newer = await again(c, { faultClass: "restarts" });
    const stale = await grant(goodwillId, c.decisionId);
    expect(stale).toMatchObject(refused("stale", /decided again since you read this/));
    expect(stale).toMatchObject({ refusal: { details: { decisionId: newer.decisionId } } });
    const report = must(await goodwillReport(then(s.manager), {}));
    expect(report.open.find((g) => g.id === goodwillId)).toMatchObject({
      changed: true,
      newest: { id: newer.decisionId, ref: "C3", outcome: "not_covered" },
    });
    must(await grant(goodwillId, newer.decisionId));
    expect(await stored(goodwillId)).toMatchObject({ decision_id: newer.decisionId });
    must(await authorize(c));
  });

  it("declined waits on us to tell the customer, who does not see it", async () => {
    const c = await over();
    const { goodwillId } = must(await ask(c));
    must(await decline(goodwillId, c.decisionId));
    expect(await storedIsFolded(c.ticketId)).toMatchObject({
      waitingOn: "us",
      waitingFor: "tell the customer",
    });
    expect(await authorize(c)).toMatchObject(refused("rule", /is not covered/));
    must(await ask(c, { reason: "They sent a photo of the seal, unbroken." }));
  });
});

describe("authorizing what is not covered", () => {
  it("goes by a grant alone, whoever authorizes, and for its remedy alone", async () => {
    const c = await over();
    for (const who of [s.agent, s.manager, both])
      expect(await authorize(c, "repair", who)).toMatchObject(refused("rule", /ask for goodwill/));
    expect(await authorize(c, "repair", s.sam)).toMatchObject(refused("rule", /A person of the desk/));
    const { goodwillId } = must(await ask(c));
    expect(await authorize(c, "repair", s.manager)).toMatchObject(refused("rule", /ask for goodwill/));
    must(await grant(goodwillId, c.decisionId));
    expect(await authorize(c, "credit")).toMatchObject(
      refused("rule", /C3 grants repair for OW2210-GW\d+, not credit/),
    );
    const rma = must(await authorize(c));
    const [entry] = await rows<{ line: string; data: Record<string, unknown> }>(
      sql`select line, data from entry where ticket_id = ${c.ticketId} and kind = 'rma_authorized'`,
    );
    expect(entry!.line).toBe(`${rma.number} authorized: repair, by goodwill, C3`);
    expect(entry!.data).not.toHaveProperty("limitCents");
    expect(entry!.data).toMatchObject({
      goodwill: [{ goodwillId, ref: "C3", serial: c.serial }],
    });
    const [mail] = await rows<{ props: Record<string, unknown> }>(
      sql`select props from outbox where ticket_id = ${c.ticketId} and template = 'rma_authorized'`,
    );
    expect(mail!.props).toMatchObject({ goodwill: [c.serial], fees: [] });
    expect(JSON.stringify(mail!.props)).not.toMatch(/limit|420/);
    expect(await storedIsFolded(c.ticketId)).toMatchObject({
      waitingOn: "customer",
      waitingFor: "send the part",
    });
    expect(await ask(c)).toMatchObject(refused("conflict", new RegExp(rma.number)));
  });

  it("is refused after a newer decision", async () => {
    const c = await over();
    const { goodwillId } = must(await ask(c));
    must(await grant(goodwillId, c.decisionId));
    await again(c);
    expect(await authorize(c)).toMatchObject(refused("rule", /decided again after C3/));
  });

  it("may be done again when the RMA came to nothing, and not twice", async () => {
    const c = await over();
    const { goodwillId } = must(await ask(c));
    must(await grant(goodwillId, c.decisionId));
    const first = must(await authorize(c));
    must(await withdrawRma(then(s.agent), { rmaId: first.rmaId }));
    const next = must(await authorize(c));
    expect(await goodwillOfTicket(job(), c.ticketId)).toMatchObject([{ usedBy: next.number }]);
    await rows(sql`update rma_line set state = 'settled' where rma_id = ${next.rmaId} returning id`);
    await rows(sql`update rma set state = 'settled' where id = ${next.rmaId} returning id`);
    expect(await authorize(c)).toMatchObject(
      refused("rule", new RegExp(`C3 was carried out by ${next.number}`)),
    );
    must(await ask(c, { reason: "It failed again within a week of the repair." }));
  });

  it("lets a person give what the clause gives, and more only where goodwill was granted", async () => {
    const d = await decided(s, "VS19-PIN0A", { fault: "physical_damage" });
    const c = { ...d, serial: "VS19-PIN0A" };
    expect(await authorize(c, "repair")).toMatchObject(refused("rule", /does not give repair/));
    const plain = must(await authorize(c, "replacement_on_receipt"));
    must(await withdrawRma(then(s.agent), { rmaId: plain.rmaId }));
    const { goodwillId } = must(await ask(c));
    must(await grant(goodwillId, d.decisionId));
    const marked = must(await authorize(c));
    const lines = await rows(
      sql`select line from entry where ticket_id = ${c.ticketId} and kind = 'rma_authorized' order by seq`,
    );
    expect(lines).toEqual([
      { line: `${plain.number} authorized: replacement on receipt` },
      { line: `${marked.number} authorized: repair, by goodwill, C3` },
    ]);
    must(await withdrawRma(then(s.agent), { rmaId: marked.rmaId }));
  });
});

describe("the customer", () => {
  it("sees the exception in plain words, and nothing of asks, declines, reasons and limits", async () => {
    const c = await over();
    const first = must(await ask(c));
    must(await decline(first.goodwillId, c.decisionId));
    const { goodwillId } = must(await ask(c));
    expect(await ticketByNumber(as(s.sam), c.number)).toMatchObject({
      waitingOn: "us",
      waitingFor: "answer",
    });
    must(await grant(goodwillId, c.decisionId, { words: "For the renewal.", tell: "on" }));
    must(await authorize(c));
    const seen = (await ticketByNumber(as(s.sam), c.number))!;
    expect(seen.entries.map((e) => e.kind)).toEqual([
      "mail_in",
      "decision",
      "goodwill_granted",
      "rma_authorized",
    ]);
    const exception = seen.entries.find((e) => e.kind === "goodwill_granted")!;
    expect(exception.line).toBe(`We make an exception for you: repair for ${c.serial}`);
    expect(seen.messages[String(exception.data.messageId)]?.text).toMatch(
      /goodwill, outside the terms of our warranty, and it changes no right that you have by law/,
    );
    expect(JSON.stringify(seen)).not.toMatch(/limit|420|renewal|renew in spring|opened by others/i);
    const staff = (await ticketByNumber(as(s.agent), c.number))!;
    const given = staff.entries.find((e) => e.kind === "goodwill_granted")!.data;
    expect((await oursOfGoodwill(as(s.agent), c.ticketId)).get(String(given.goodwillId))).toEqual({
      limitCents: 42_000,
      words: "For the renewal.",
    });
    expect(await oursOfGoodwill(as(s.sam), c.ticketId)).toEqual(new Map());
    // Nor by the database itself, under their own role.
    const raw = await read(as(s.sam), (tx) =>
      tx.execute(sql`select line, data from entry where ticket_id = ${c.ticketId}`),
    );
    expect(JSON.stringify(raw.rows)).not.toMatch(/limit|42000|renewal/i);
  });

  it("cannot reach the table, nor any door to it", async () => {
    for (const query of [
      sql`select 1 from goodwill limit 1`,
      sql`insert into goodwill (id) values (gen_random_uuid())`,
      sql`update goodwill set state = 'granted'`,
      sql`delete from goodwill`,
    ])
      expect(await codeOf(transact(as(s.sam), async (ctx) => ok(await ctx.tx.execute(query))))).toBe("42501");
    for (const door of [goodwillReport, goodwillRows])
      expect(await door(as(s.sam), {})).toMatchObject(refused("forbidden", /role/));
    expect(await openGoodwills(as(s.sam))).toBeNull();
    expect(await openGoodwills(as(s.dock))).toBeNull();
    expect(await goodwillOfTicket(as(s.sam), crypto.randomUUID())).toEqual([]);
  });
});

describe("the report", () => {
  const zone = "Europe/London";
  /** A world of its own figures: what was asked in two months of 2027, on both sides of a month's end in the zone. */
  beforeAll(async () => {
    const c = await over();
    const put = (state: string, askedAt: string, cents: number | null, by: Actor, reason = REASON) =>
      rows(sql`insert into goodwill (id, ticket_id, ticket_unit_id, account_id, unit_id, decision_id, state, asked_by, asked_by_name, asked_at, reason, wanted_remedy, answered_by, answered_by_name, answered_at, remedy, limit_cents)
        select gen_random_uuid(), ${c.ticketId}, ${c.ticketUnitId}, d.account_id, d.unit_id, d.id, ${state}::goodwill_state, ${by.kind === "staff" ? by.userId : null}::uuid, ${by.kind === "staff" ? by.name : ""}, ${askedAt}::timestamptz, ${reason}, 'repair',
          case when ${state} = 'asked' then null else ${s.manager.kind === "staff" ? s.manager.userId : null}::uuid end, case when ${state} = 'asked' then null else 'Anneke Sow' end,
          case when ${state} = 'asked' then null else ${askedAt}::timestamptz + interval '1 hour' end, case when ${state} = 'granted' then 'repair'::remedy end, ${cents}::int
        from coverage_decision d where d.id = ${c.decisionId} returning id`);
    // British Summer Time: the last hour of June in London is still the 22nd hour in UTC.
    await put("granted", "2027-06-30T22:30:00Z", 10_000, s.agent);
    await put("granted", "2027-06-30T23:30:00Z", 12_000, s.agent);
    await put("granted", "2027-07-10T10:00:00Z", 30_050, s.second, "=HYPERLINK(0)");
    await put("declined", "2027-07-11T10:00:00Z", null, s.agent);
    await put("asked", "2027-07-12T10:00:00Z", null, s.second);
    for (let i = 0; i < GOODWILL_PAGE + 3; i++)
      await put("declined", `2027-08-01T10:00:${String(Math.floor(i / 2)).padStart(2, "0")}Z`, null, s.agent);
  });

  it("counts a month of the seller's zone, and the same from the rows", async () => {
    const july = must(await goodwillReport(as(s.manager), { month: "2027-07" }));
    expect(july.figures).toEqual({ asked: 4, waiting: 1, granted: 2, declined: 1, grantedCents: 42_050 });
    const { rows: answered } = must(await goodwillRows(as(s.manager), { month: "2027-07" }));
    expect(answered.map((r) => r.limitCents)).toEqual([null, 30_050, 12_000]);
    const granted = must(await goodwillReport(as(s.manager), { month: "2027-06", state: "granted" }));
    expect(granted.rows.map((r) => r.limitCents)).toEqual([10_000]);
    expect(july.months.slice(0, 3)).toEqual(["2027-08", "2027-07", "2027-06"]);
  });

  it("turns its pages without a row lost or shown twice, several at one instant", async () => {
    const seen: string[] = [];
    let after: string | null = null;
    do {
      const page: GoodwillReport = must(await goodwillReport(as(s.manager), { month: "2027-08", after }));
      seen.push(...page.rows.map((r) => r.id));
      after = page.next;
    } while (after !== null);
    expect(seen).toHaveLength(GOODWILL_PAGE + 3);
    expect(new Set(seen).size).toBe(seen.length);
    expect(seen).toEqual(must(await goodwillRows(as(s.manager), { month: "2027-08" })).rows.map((r) => r.id));
  });

  it("shows nonsense in the address as nothing chosen", async () => {
    const asked = must(
      await goodwillReport(as(s.manager), { state: ["granted", "x"], month: "2027-13", after: "1' or 1=1" }),
    );
    expect(asked.filter).toEqual({ state: null, month: null, after: null });
    expect(asked.rows).toHaveLength(GOODWILL_PAGE);
  });

  it("shows an agent what they asked, a manager and an admin everything", async () => {
    const mine = must(await goodwillReport(as(s.second), { month: "2027-07" }));
    expect(mine).toMatchObject({
      mine: true,
      figures: { asked: 2, granted: 1, grantedCents: 30_050, waiting: 1 },
    });
    expect(mine.open.every((g) => g.askedByName === "Ruben Castellan")).toBe(true);
    expect(must(await goodwillReport(as(s.admin), { month: "2027-07" }))).toMatchObject({
      mine: false,
      figures: { asked: 4 },
    });
    const [n] = await rows<{ open: number; own: number }>(
      sql`select count(*)::int as open, (count(*) filter (where asked_by = ${both.kind === "staff" ? both.userId : null}))::int as own from goodwill where state = 'asked'`,
    );
    expect(n!.open).toBeGreaterThan(1);
    expect(await openGoodwills(as(s.manager))).toEqual({ open: n!.open, toAnswer: n!.open });
    expect(await openGoodwills(as(both))).toEqual({ open: n!.open, toAnswer: n!.open - n!.own });
    expect(await openGoodwills(as(s.second))).toMatchObject({ toAnswer: 0 });
  });

  it("goes out as a sheet that runs nothing", async () => {
    const { rows: list } = must(await goodwillRows(as(s.manager), { month: "2027-07", state: "granted" }));
    const [head] = parseCsv(goodwillSheet(list, zone), { columns: true }) as Record<string, string>[];
    expect(head).toMatchObject({
      asked_on: "2027-07-10",
      asked_by: "Ruben Castellan",
      reason: "'=HYPERLINK(0)",
      state: "granted",
      limit_eur: "300.50",
    });
  });

  it("reads under the staff's role", async () => {
    const role = await read(as(s.manager), (tx) => tx.execute<{ r: string }>(sql`select current_user as r`));
    expect(role.rows[0]).toEqual({ r: "mendbay_staff" });
  });
});
