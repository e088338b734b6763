import { periodWords } from "../base/period";
import {
  CLAUSE_FEE_WORDS,
  EXCLUSION_WORDS,
  FREIGHT_WORDS,
  REMEDY_WORDS,
  REPLACED_WORDS,
  TRANSFER_WORDS,
  type StartBasis,
} from "./schema";
import { FIELDS_OF, familiesWords, inOrder, KIND_WORDS, type ClauseField, type TermsClause } from "./terms";

export const BASIS_WORDS: Record<StartBasis, string> = {
  shipped: "the ship day",
  delivered: "delivery",
  invoiced: "the invoice day",
  installed: "the day it is set up",
};

export const moneyWords = (cents: number) => `${(cents / 100).toFixed(2)} EUR`;
const n = (value: number, word: string) =>
  `${value.toLocaleString("en-US")} ${word}${value === 1 ? "" : "s"}`;
const list = (words: readonly string[], joint = "and") =>
  words.length < 2 ? (words[0] ?? "") : `${words.slice(0, -1).join(", ")} ${joint} ${words.at(-1)}`;
const named = (words: object, key: string) => (words as Record<string, string>)[key] ?? key;
const stop = (text: string) => (/[.!?]$/.test(text) ? text : `${text}.`);

/** The days a window clause gives. */
function days(c: TermsClause): string {
  const from = c.startBasis ? ` from ${BASIS_WORDS[c.startBasis]}` : "";
  const grace =
    c.startBasis && c.startBasis !== "shipped"
      ? ` (without proof: ship day${c.deliveryGraceDays > 0 ? ` and ${n(c.deliveryGraceDays, "day")}` : ""})`
      : "";
  const day = c.dayRule === "event_day_excluded" ? "that day not counted" : "that day counted";
  return `${periodWords(c.period ?? "")}${from}${grace}, ${day}`;
}

function care(c: TermsClause): string[] {
  const out: string[] = [];
  if (c.dueBackDays !== null || c.holdCents !== null)
    out.push(
      `In advance: ${list([
        ...(c.dueBackDays !== null ? [`the old part is due back in ${n(c.dueBackDays, "day")}`] : []),
        ...(c.holdCents !== null ? [`${moneyWords(c.holdCents)} are held until then`] : []),
      ])}`,
    );
  if (c.freight) out.push(`Freight: ${FREIGHT_WORDS[c.freight]}`);
  if (c.responseHours !== null) out.push(`We answer within ${n(c.responseHours, "working hour")}`);
  return out;
}

/** The whole rule of a clause in plain sentences. Parts, condition and remedies stand beside it. */
export function clauseWords(c: TermsClause): string {
  const said: string[] = [];
  switch (c.kind) {
    case "exclusion":
      said.push(
        `Leaves out ${named(EXCLUSION_WORDS, c.exclusion ?? "")} once evidence shows it: ${list(c.evidence)}`,
        "Without that a person decides",
      );
      break;
    case "fee":
      said.push(
        `${moneyWords(c.feeCents ?? 0)} for ${named(CLAUSE_FEE_WORDS, c.feeKind ?? "")}, only when told before on the authorization; never for a consumer’s faulty unit`,
      );
      break;
    case "transfer": {
      const rule = c.transferRule ? TRANSFER_WORDS[c.transferRule] : "not said";
      const limit = c.period
        ? `, within ${periodWords(c.period)} of the day it was given on, ${c.dayRule === "event_day_excluded" ? "that day not counted" : "that day counted"}${c.rolls ? ", moved to the next working day" : ""}`
        : "";
      said.push(`When a unit is given on, ${rule}${limit}`);
      break;
    }
    case "replaced_part":
      said.push(
        `A part we fit has ${REPLACED_WORDS[c.replacedRule]}`,
        ...(c.period
          ? [
              `The floor is ${periodWords(c.period)} from the swap, ${c.dayRule === "event_day_excluded" ? "that day not counted" : "that day counted"}`,
            ]
          : []),
      );
      break;
    case "doa":
      said.push(
        `${days(c)}; a last day that is no working day ${c.rolls ? "moves to the next that is" : "stays"}`,
        ...care(c),
      );
      break;
    case "cover": {
      const use = [
        ...(c.enduranceHours !== null ? [n(c.enduranceHours, "hour")] : []),
        ...(c.enduranceTb !== null ? [`${c.enduranceTb.toLocaleString("en-US")} TB written`] : []),
      ];
      said.push(
        `${days(c)}${use.length > 0 ? `, or ${use.join(" or ")}, whichever is first` : ""}; pauses ${c.clockStops ? "add their days" : "add nothing"}`,
        ...care(c),
      );
    }
  }
  return [...said.map(stop), ...(c.words.trim() ? [`“${c.words.trim()}”`] : [])].join(" ");
}

export const FIELD_LABELS: Record<ClauseField, string> = {
  number: "Number",
  kind: "Kind",
  title: "About",
  families: "Parts",
  condition: "Condition",
  period: "Period",
  startBasis: "Runs from",
  deliveryGraceDays: "Days added without proof",
  dayRule: "The day itself",
  rolls: "Working days",
  clockStops: "Pauses",
  replacedRule: "A part we fit has",
  transferRule: "Given on",
  remedies: "Remedies, in order",
  dueBackDays: "Old part due back",
  holdCents: "Held in advance",
  freight: "Freight",
  responseHours: "We answer within",
  enduranceHours: "Hours of use",
  enduranceTb: "Written",
  exclusion: "Leaves out",
  evidence: "Evidence that shows it",
  feeKind: "Fee for",
  feeCents: "Amount",
  words: "In our words",
};

const NONE = "nothing";
const some = <T>(value: T | null, words: (value: T) => string) => (value === null ? NONE : words(value));
const SAID: { [F in ClauseField]: (c: TermsClause) => string } = {
  number: (c) => c.number,
  kind: (c) => KIND_WORDS[c.kind],
  title: (c) => c.title,
  families: (c) => familiesWords([...c.families].sort()),
  condition: (c) => c.condition ?? "any",
  period: (c) => some(c.period, (p) => `${periodWords(p)} (${p})`),
  startBasis: (c) => some(c.startBasis, (b) => BASIS_WORDS[b]),
  deliveryGraceDays: (c) => n(c.deliveryGraceDays, "day"),
  dayRule: (c) => (c.dayRule === "event_day_excluded" ? "not counted" : "counted"),
  rolls: (c) => (c.rolls ? "the last day moves to the next working day" : "the last day stays"),
  clockStops: (c) => (c.clockStops ? "add their days" : "add nothing"),
  replacedRule: (c) => REPLACED_WORDS[c.replacedRule],
  transferRule: (c) => some(c.transferRule, (t) => TRANSFER_WORDS[t]),
  remedies: (c) => c.remedies.map((r) => named(REMEDY_WORDS, r)).join(", then ") || NONE,
  dueBackDays: (c) => some(c.dueBackDays, (d) => n(d, "day")),
  holdCents: (c) => some(c.holdCents, moneyWords),
  freight: (c) => some(c.freight, (f) => FREIGHT_WORDS[f]),
  responseHours: (c) => some(c.responseHours, (h) => n(h, "working hour")),
  enduranceHours: (c) => some(c.enduranceHours, (h) => n(h, "hour")),
  enduranceTb: (c) => some(c.enduranceTb, (t) => `${t.toLocaleString("en-US")} TB`),
  exclusion: (c) => some(c.exclusion, (e) => named(EXCLUSION_WORDS, e)),
  evidence: (c) => c.evidence.join("; ") || NONE,
  feeKind: (c) => some(c.feeKind, (f) => named(CLAUSE_FEE_WORDS, f)),
  feeCents: (c) => some(c.feeCents, moneyWords),
  words: (c) => (c.words === "" ? NONE : `“${c.words}”`),
};

export type ClauseChange = { field: ClauseField; label: string; was: string; now: string };
export type ClauseComparison = {
  number: string;
  title: string;
  state: "same" | "changed" | "added" | "removed";
  before: TermsClause | null;
  after: TermsClause | null;
  changes: ClauseChange[];
};

function changesOf(before: TermsClause, after: TermsClause): ClauseChange[] {
  const asked = new Set<ClauseField>(["kind", "title", ...FIELDS_OF[before.kind], ...FIELDS_OF[after.kind]]);
  return [...asked].flatMap((field) => {
    const [was, now] = [SAID[field](before), SAID[field](after)];
    return was === now ? [] : [{ field, label: FIELD_LABELS[field], was, now }];
  });
}

/** Two sets of clauses, clause by clause by their number, in the order people cite them. */
export function compareTerms(
  before: readonly TermsClause[],
  after: readonly TermsClause[],
): ClauseComparison[] {
  const was = new Map(before.map((c) => [c.number, c]));
  const now = new Map(after.map((c) => [c.number, c]));
  const all = inOrder([...new Set([...was.keys(), ...now.keys()])].map((number) => ({ number })));
  return all.map(({ number }) => {
    const [b, a] = [was.get(number) ?? null, now.get(number) ?? null];
    const changes = b && a ? changesOf(b, a) : [];
    const state = !b ? "added" : !a ? "removed" : changes.length > 0 ? "changed" : "same";
    return { number, title: (a ?? b)!.title, state, before: b, after: a, changes };
  });
}

/** How many clauses differ, in words: "2 changed, 1 added, 1 taken out", or none. */
export function comparisonWords(rows: readonly ClauseComparison[]): string | null {
  const of = (state: ClauseComparison["state"]) => rows.filter((r) => r.state === state).length;
  const said = [
    [of("changed"), "changed"],
    [of("added"), "added"],
    [of("removed"), "taken out"],
  ].flatMap(([count, word]) => (count === 0 ? [] : [`${count} ${word}`]));
  return said.length === 0 ? null : said.join(", ");
}
