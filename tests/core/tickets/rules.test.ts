import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { addBusinessMinutes } from "@/lib/tickets/calendar";
import {
  customerSeesByDefault,
  fold,
  letterOf,
  NEW_TICKET,
  step,
  TARGETS,
  type EntryFact,
  type TicketState,
} from "@/lib/tickets/rules";
import {
  ENTRY_KINDS,
  WAITING_ON,
  type EntryKind,
  type EntryLetter,
  type WaitingOn,
} from "@/lib/tickets/schema";

const CAL = {
  zone: "Europe/London",
  workdays: [1, 2, 3, 4, 5],
  opensAt: "08:30",
  closesAt: "17:00",
  holidays: [],
};
const AT = new Date("2026-06-03T09:00:00Z");
const LATER = new Date("2026-06-04T10:00:00Z");
const entry = (kind: EntryKind, data: Record<string, unknown> = {}, at = LATER): EntryFact => ({
  kind,
  at,
  data,
});

/** A ticket that waits on somebody since AT, with the clock or the reminder that belongs to it. */
function waiting(on: WaitingOn): TicketState {
  const runs = on === "us" || on === "dock" || on === "bench";
  return {
    ...NEW_TICKET,
    waitingOn: on,
    waitingFor: "before",
    clockStartedAt: runs ? AT : null,
    dueAt: runs ? addBusinessMinutes(AT, TARGETS[on], CAL) : null,
    chaseOn: ["customer", "carrier", "supplier"].includes(on) ? "2026-06-08" : null,
    closedAt: on === "nobody" ? AT : null,
  };
}

type To = WaitingOn | "=";
/** Whose move follows an entry, from each state: us, customer, carrier, dock, bench, supplier, nobody. "=": no change. */
const TABLE: Record<string, [EntryLetter, sees: boolean, data: object, to: To[]]> = {
  mail_in: ["M", true, {}, ["us", "us", "=", "=", "=", "us", "us"]],
  mail_out: ["M", true, {}, ["customer", "=", "=", "=", "=", "=", "="]],
  mail_auto: ["M", true, {}, all("=")],
  mail_noted: ["M", false, {}, all("=")],
  fault_reported: ["E", true, {}, all("us")],
  evidence_added: ["E", true, {}, ["us", "us", "=", "=", "=", "=", "="]],
  evidence_wanted: ["E", true, {}, all("customer")],
  unit_tied: ["N", false, {}, all("=")],
  note: ["N", false, {}, all("=")],
  decision: ["C", true, { outcome: "covered" }, all("us")],
  "decision shown": ["C", true, { outcome: "covered", shown: true }, all("customer")],
  "decision shown, not covered": ["C", true, { outcome: "not_covered", shown: true }, all("customer")],
  "decision shown, needs a person": ["C", true, { outcome: "needs_person", shown: true }, all("us")],
  rma_requested: ["R", true, {}, all("us")],
  rma_authorized: ["R", true, {}, all("customer")],
  rma_declined: ["R", true, {}, all("nobody")],
  rma_expired: ["R", true, {}, all("nobody")],
  rma_withdrawn: ["R", true, {}, all("nobody")],
  rma_settled: ["R", true, {}, all("nobody")],
  parcel_sent: ["S", true, {}, all("carrier")],
  dock_received: ["D", true, {}, all("bench")],
  dock_stopped: ["D", false, {}, all("us")],
  bench_started: ["B", false, {}, all("bench")],
  bench_closed: ["B", true, { outcome: "fault_confirmed" }, all("dock")],
  "bench_closed, damage": ["B", true, { outcome: "damage_not_covered" }, all("us")],
  replacement_shipped: ["S", true, {}, all("carrier")],
  closed: ["N", true, {}, all("nobody")],
  goodwill_asked: ["C", false, {}, all("us")],
  goodwill_granted: ["C", true, {}, all("us")],
  goodwill_declined: ["C", false, {}, all("us")],
};
function all(to: To): To[] {
  return WAITING_ON.map(() => to);
}
const kindOf = (name: string) => name.split(/[ ,]/)[0] as EntryKind;

describe("whose move follows", () => {
  it("is declared for every kind of entry", () => {
    expect([...new Set(Object.keys(TABLE).map(kindOf))].sort()).toEqual([...ENTRY_KINDS].sort());
  });
  it.each(Object.entries(TABLE))("%s", (name, [letter, sees, data, to]) => {
    const kind = kindOf(name);
    expect(letterOf(kind)).toBe(letter);
    expect(customerSeesByDefault(kind)).toBe(sees);
    WAITING_ON.forEach((from, i) => {
      const before = waiting(from);
      const after = step(before, entry(kind, { ...data }), CAL);
      if (to[i] === "=") expect(after, `from ${from}`).toEqual(before);
      else expect(after.waitingOn, `from ${from}`).toBe(to[i]);
    });
  });
});

describe("the clock", () => {
  it("runs while the move is ours, rests while it is not", () => {
    for (const [name, [, , data, to]] of Object.entries(TABLE))
      WAITING_ON.forEach((from, i) => {
        if (to[i] === "=") return;
        const after = step(waiting(from), entry(kindOf(name), { ...data }), CAL);
        const ours = ["us", "dock", "bench"].includes(after.waitingOn);
        expect(after.dueAt !== null, `${name} from ${from}`).toBe(ours);
        expect(after.clockStartedAt !== null).toBe(ours);
        expect(after.chaseOn !== null).toBe(["customer", "carrier", "supplier"].includes(after.waitingOn));
        expect(after.closedAt !== null).toBe(after.waitingOn === "nobody");
      });
  });
  it("is not begun anew by a second mail while it runs", () => {
    const before = waiting("us");
    const after = step(before, entry("mail_in"), CAL);
    expect(after).toMatchObject({ dueAt: before.dueAt, clockStartedAt: AT, waitingFor: "answer" });
  });
  it("begins anew when the move comes back to us", () => {
    const after = step(waiting("customer"), entry("mail_in"), CAL);
    // Thursday 4 June, 11:00 in London: six hours that day, two on Friday from 08:30.
    expect(after).toMatchObject({
      clockStartedAt: LATER,
      dueAt: new Date("2026-06-05T09:30:00Z"),
      chaseOn: null,
    });
  });
  it("opens a closed ticket again when the customer writes", () => {
    const after = step(waiting("nobody"), entry("mail_in"), CAL);
    expect(after).toMatchObject({ waitingOn: "us", closedAt: null, clockStartedAt: LATER });
  });
  it("reminds after working days only", () => {
    const friday = entry("rma_authorized", {}, new Date("2026-06-05T10:00:00Z"));
    expect(step(waiting("us"), friday, CAL).chaseOn).toBe("2026-06-10");
  });
});

describe("evidence", () => {
  it("is counted as asked for and as it came, whoever's move it is", () => {
    const s = fold(
      [
        entry("evidence_wanted", { wanted: ["photo of the label", "event log"] }),
        entry("evidence_added", { evidenceIds: ["1"] }),
        entry("parcel_sent"),
        entry("evidence_added", { evidenceIds: ["2", "3"] }),
        entry("evidence_added", {}),
      ],
      CAL,
    );
    expect(s).toMatchObject({ evidenceWanted: 2, evidenceCame: 3, waitingOn: "carrier" });
  });
});

describe("any record", () => {
  it("folds to one state however it is cut, and is never both due and reminded", () => {
    const any = fc.array(
      fc.constantFrom(...ENTRY_KINDS).map((kind) => ({ kind, at: LATER, data: {} })),
      { maxLength: 25 },
    );
    fc.assert(
      fc.property(any, fc.nat(25), (entries, cut) => {
        const whole = fold(entries, CAL);
        const head = fold(entries.slice(0, cut), CAL);
        expect(entries.slice(cut).reduce((s, e) => step(s, e, CAL), head)).toEqual(whole);
        expect(whole.dueAt !== null && whole.chaseOn !== null).toBe(false);
        expect(whole.closedAt !== null).toBe(whole.waitingOn === "nobody");
      }),
    );
  });
});
