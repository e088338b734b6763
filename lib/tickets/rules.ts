import { addWorkdays, civilDayIn } from "../base/civil";
import { addBusinessMinutes, type BusinessCalendar } from "./calendar";
import type { EntryKind, EntryLetter, WaitingOn } from "./schema";

const LETTERS: Record<EntryKind, EntryLetter> = {
  mail_in: "M",
  mail_out: "M",
  mail_auto: "M",
  mail_noted: "M",
  fault_reported: "E",
  evidence_added: "E",
  evidence_wanted: "E",
  unit_tied: "N",
  note: "N",
  closed: "N",
  decision: "C",
  goodwill_asked: "C",
  goodwill_granted: "C",
  goodwill_declined: "C",
  rma_requested: "R",
  rma_authorized: "R",
  rma_declined: "R",
  rma_expired: "R",
  rma_withdrawn: "R",
  rma_settled: "R",
  parcel_sent: "S",
  replacement_shipped: "S",
  dock_received: "D",
  dock_stopped: "D",
  bench_started: "B",
  bench_closed: "B",
};
export const letterOf = (kind: EntryKind): EntryLetter => LETTERS[kind];

/** What a customer does not see unless the entry says otherwise. */
const INNER: readonly EntryKind[] = [
  "note",
  "unit_tied",
  "mail_noted",
  "dock_stopped",
  "bench_started",
  "goodwill_asked",
  "goodwill_declined",
];
export const customerSeesByDefault = (kind: EntryKind): boolean => !INNER.includes(kind);

/** What of a ticket is derived from its record. */
export type TicketState = {
  waitingOn: WaitingOn;
  /** What the one we wait on is to do: "tell the customer". */
  waitingFor: string;
  clockStartedAt: Date | null;
  dueAt: Date | null;
  chaseOn: string | null;
  closedAt: Date | null;
  evidenceWanted: number;
  evidenceCame: number;
};

export type EntryFact = { kind: EntryKind; at: Date; data: Record<string, unknown> };

/** Working minutes we give ourselves, by whose move it is. */
export type Targets = { us: number; dock: number; bench: number };
export const TARGETS: Targets = { us: 8 * 60, dock: 8 * 60, bench: 3 * 8 * 60 };
/** Working days after which we remind whoever we wait on. */
export const CHASE_WORKDAYS = { customer: 3, carrier: 4, supplier: 10 } as const;

export const NEW_TICKET: TicketState = {
  waitingOn: "us",
  waitingFor: "read it",
  clockStartedAt: null,
  dueAt: null,
  chaseOn: null,
  closedAt: null,
  evidenceWanted: 0,
  evidenceCame: 0,
};

type Move = { on: WaitingOn; for: string; closes?: boolean } | null;

/** Whose move follows an entry. Null: nothing changes. */
function moveAfter(state: TicketState, entry: EntryFact): Move {
  const { kind, data } = entry;
  switch (kind) {
    case "mail_in":
      // While the goods are on their way or with us, a question does not stop the dock or the bench.
      return ["carrier", "dock", "bench"].includes(state.waitingOn) ? null : { on: "us", for: "answer" };
    case "fault_reported":
      return { on: "us", for: "read the report" };
    case "evidence_added":
      return state.waitingOn === "customer" || state.waitingOn === "us"
        ? { on: "us", for: "look at the evidence" }
        : null;
    case "mail_out":
      return state.waitingOn === "us" ? { on: "customer", for: "answer" } : null;
    case "evidence_wanted":
      return { on: "customer", for: "send evidence" };
    case "decision":
      if (data.outcome === "needs_person") return { on: "us", for: "decide" };
      return data.shown === true
        ? data.outcome === "not_covered"
          ? { on: "customer", for: "choose what happens" }
          : { on: "customer", for: "choose a remedy" }
        : { on: "us", for: "tell the customer" };
    case "goodwill_asked":
      return { on: "us", for: "grant or decline goodwill" };
    case "goodwill_granted":
      return { on: "us", for: "authorize what was granted" };
    case "goodwill_declined":
      return { on: "us", for: "tell the customer" };
    case "rma_requested":
      return { on: "us", for: "authorize" };
    case "rma_authorized":
      return data.remedy === "advance_replacement"
        ? { on: "dock", for: "send the replacement first" }
        : { on: "customer", for: "send the part" };
    case "rma_declined":
    case "rma_expired":
    case "rma_withdrawn":
      return { on: "nobody", for: "nothing", closes: true };
    case "parcel_sent":
      return { on: "carrier", for: "bring the parcel" };
    case "dock_received":
      return { on: "bench", for: "test it" };
    case "dock_stopped":
      return { on: "us", for: "say what to do with the unit set aside" };
    case "bench_started":
      return { on: "bench", for: "finish the test" };
    case "bench_closed":
      return data.outcome === "damage_not_covered"
        ? { on: "us", for: "tell the customer" }
        : { on: "dock", for: "ship what follows" };
    case "replacement_shipped":
      if (data.ahead === true)
        return state.waitingOn === "dock" ? { on: "customer", for: "send the old part" } : null;
      return { on: "carrier", for: "deliver the replacement" };
    case "rma_settled":
    case "closed":
      return { on: "nobody", for: "nothing", closes: true };
    case "mail_auto":
    case "mail_noted":
    case "unit_tied":
    case "note":
      return null;
  }
}

/**
 * The ticket's derived state after one more entry. Folding it over the record gives the
 * stored state, always; that is checked as an invariant.
 */
export function step(
  state: TicketState,
  entry: EntryFact,
  cal: BusinessCalendar,
  targets: Targets = TARGETS,
): TicketState {
  const count = (v: unknown) => (Array.isArray(v) ? v.length : 0);
  const counted: TicketState = {
    ...state,
    evidenceWanted: state.evidenceWanted + (entry.kind === "evidence_wanted" ? count(entry.data.wanted) : 0),
    evidenceCame: state.evidenceCame + (entry.kind === "evidence_added" ? count(entry.data.evidenceIds) : 0),
  };
  const move = moveAfter(counted, entry);
  if (move === null) return counted;
  const same = move.on === counted.waitingOn && counted.closedAt === null;
  if (same && counted.dueAt !== null) return { ...counted, waitingFor: move.for };
  const runs = move.on === "us" || move.on === "dock" || move.on === "bench";
  const chases = move.on === "customer" || move.on === "carrier" || move.on === "supplier";
  return {
    ...counted,
    waitingOn: move.on,
    waitingFor: move.for,
    clockStartedAt: runs ? entry.at : null,
    dueAt: runs ? addBusinessMinutes(entry.at, targets[move.on as keyof Targets], cal) : null,
    chaseOn: chases
      ? addWorkdays(
          civilDayIn(entry.at, cal.zone),
          CHASE_WORKDAYS[move.on as keyof typeof CHASE_WORKDAYS],
          cal,
        )
      : null,
    closedAt: move.closes ? entry.at : null,
  };
}

export function fold(entries: readonly EntryFact[], cal: BusinessCalendar): TicketState {
  return entries.reduce((s, e) => step(s, e, cal), NEW_TICKET);
}
