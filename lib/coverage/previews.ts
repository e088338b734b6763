import { daysBetween, type Workweek } from "../base/civil";
import { decide } from "./rules";
import type {
  ClauseFact,
  CoverWindow,
  DecideInput,
  Decision,
  Outcome,
  PartFact,
  PreviewState,
  SaleFact,
} from "./schema";
import { windowsFor } from "./windows";

/** What would become of a unit's last covered day, had it been sold under the draft. */
export const PREVIEW_CHANGES = ["ended", "lost", "shorter", "longer", "gained"] as const;
export type PreviewChange = (typeof PREVIEW_CHANGES)[number];

/** How many of each are kept as examples: five hundred in all. */
export const EXAMPLES_OF: Record<PreviewChange, number> = {
  ended: 150,
  lost: 50,
  shorter: 100,
  longer: 100,
  gained: 100,
};
export const TICKET_EXAMPLES = 200;

export type UnitExample = {
  change: PreviewChange;
  unitId: string;
  serial: string;
  systemSerial: string | null;
  slot: string | null;
  orderNumber: string;
  accountName: string;
  was: string | null;
  now: string | null;
  wasClause: string | null;
  nowClause: string | null;
  days: number | null;
};
export type TicketExample = {
  number: number;
  serial: string | null;
  was: Outcome;
  now: Outcome;
  /** What differs: the answer itself, or what goes with it. */
  differs: ("answer" | "remedies" | "fees")[];
};

export type PreviewAnswer = {
  /** The day that counts as today, fixed when it began: an interruption does not move it. */
  onDay: string;
  phase: "sales" | "tickets";
  steppedAt: string;
  sales: number;
  units: number;
  longer: number;
  shorter: number;
  gained: number;
  lost: number;
  unchanged: number;
  /** Cover that runs today and would have ended; counted among shorter and lost too. */
  ended: number;
  doaLonger: number;
  doaShorter: number;
  /** Open tickets with a decision, and those of them that would be answered otherwise. */
  tickets: number;
  ticketsDiffer: number;
  examples: UnitExample[];
  ticketExamples: TicketExample[];
};

export type PreviewView = {
  id: string;
  versionId: string;
  ofVersion: number;
  state: PreviewState;
  total: number;
  done: number;
  answer: PreviewAnswer;
  error: string | null;
  createdByName: string;
  createdAt: Date;
  finishedAt: Date | null;
};

export const emptyAnswer = (onDay: string, steppedAt: string): PreviewAnswer => ({
  onDay,
  phase: "sales",
  steppedAt,
  sales: 0,
  units: 0,
  longer: 0,
  shorter: 0,
  gained: 0,
  lost: 0,
  unchanged: 0,
  ended: 0,
  doaLonger: 0,
  doaShorter: 0,
  tickets: 0,
  ticketsDiffer: 0,
  examples: [],
  ticketExamples: [],
});

type Facts = { sale: SaleFact; clauses: ClauseFact[]; part: PartFact };
type Last = { lastOn: string; clause: string } | null;
export type UnitDifference = {
  was: Last;
  now: Last;
  change: Exclude<PreviewChange, "ended"> | "unchanged";
  ended: boolean;
  doa: "longer" | "shorter" | "unchanged";
};

const lastOf = (windows: CoverWindow[], kind: CoverWindow["kind"]): Last => {
  const w = windows.filter((x) => x.kind === kind).sort((a, b) => (a.lastOn < b.lastOn ? 1 : -1))[0];
  return w ? { lastOn: w.lastOn, clause: w.clauseNumber } : null;
};

function changeOf(was: Last, now: Last): UnitDifference["change"] {
  if (!was || !now) return was ? "lost" : now ? "gained" : "unchanged";
  return now.lastOn === was.lastOn ? "unchanged" : now.lastOn > was.lastOn ? "longer" : "shorter";
}

/** A unit's cover by the clauses it was sold under, against that by the draft's. */
export function unitDifference(
  facts: Facts,
  draft: readonly ClauseFact[],
  week: Workweek,
  onDay: string,
): UnitDifference {
  const own = windowsFor(facts.sale, facts.clauses, facts.part, week);
  const would = windowsFor(facts.sale, draft, facts.part, week);
  const [was, now] = [lastOf(own, "cover"), lastOf(would, "cover")];
  const doa = changeOf(lastOf(own, "doa"), lastOf(would, "doa"));
  return {
    was,
    now,
    change: changeOf(was, now),
    ended: was !== null && was.lastOn >= onDay && (now === null || now.lastOn < onDay),
    doa: doa === "gained" ? "longer" : doa === "lost" ? "shorter" : doa,
  };
}

export const daysMoved = (d: UnitDifference): number | null =>
  d.was && d.now ? daysBetween(d.was.lastOn, d.now.lastOn) : null;

/** Counts one unit in; tells whether it should stand among the examples, and as what. */
export function count(answer: PreviewAnswer, d: UnitDifference): PreviewChange | null {
  answer.units++;
  answer[d.change]++;
  if (d.ended) answer.ended++;
  if (d.doa === "longer") answer.doaLonger++;
  if (d.doa === "shorter") answer.doaShorter++;
  if (d.change === "unchanged") return null;
  return d.ended ? "ended" : d.change;
}

const feesOf = (d: Decision) => d.fees.map((f) => `${f.kind} ${f.cents}`).join(", ");

/**
 * A stored decision's inputs decided again, by their own clauses and by the draft's. Both by today's
 * engine, so that only the clauses can make a difference.
 */
export function decisionDifference(
  inputs: DecideInput,
  draft: readonly ClauseFact[],
): Omit<TicketExample, "number" | "serial"> {
  const was = decide(inputs);
  const now = decide({ ...inputs, clauses: [...draft] });
  const differs: TicketExample["differs"] = [];
  if (was.outcome !== now.outcome) differs.push("answer");
  if (was.remedies.join() !== now.remedies.join()) differs.push("remedies");
  if (feesOf(was) !== feesOf(now)) differs.push("fees");
  return { was: was.outcome, now: now.outcome, differs };
}
