import { forbiddenIn } from "./law";
import { addDays, isDay } from "../base/civil";
import { parsePeriod } from "../base/period";
import { showDay } from "../base/show";
import { CONDITIONS, FAMILIES, FAMILY_WORDS, type Family } from "../ledger/schema";
import {
  CLAUSE_FEES,
  CLAUSE_FEE_WORDS,
  EXCLUSIONS,
  EXCLUSION_WORDS,
  REMEDIES,
  REMEDY_WORDS,
  type ClauseFact,
  type ClauseFee,
  type ClauseKind,
  type Exclusion,
} from "./schema";

/** A clause as it is drafted: as the engine reads it, without its place in the database. */
export type TermsClause = Omit<ClauseFact, "id">;
export type ClauseField = keyof TermsClause;

export const KIND_WORDS: Record<ClauseKind, string> = {
  doa: "dead on arrival",
  cover: "cover",
  replaced_part: "parts we fit",
  exclusion: "what is left out",
  fee: "fee",
  transfer: "units given on",
};

const WHO = ["families", "condition"] as const;
const CARE = ["remedies", "dueBackDays", "holdCents", "freight", "responseHours"] as const;
/** What each kind of clause says. A field that is not here has no effect in it. */
export const FIELDS_OF: Record<ClauseKind, readonly ClauseField[]> = {
  doa: [...WHO, "period", "startBasis", "deliveryGraceDays", "dayRule", "rolls", ...CARE, "words"],
  cover: [
    ...WHO,
    "period",
    "startBasis",
    "deliveryGraceDays",
    "dayRule",
    "clockStops",
    "enduranceHours",
    "enduranceTb",
    ...CARE,
    "words",
  ],
  replaced_part: [...WHO, "replacedRule", "period", "dayRule", "words"],
  exclusion: [...WHO, "exclusion", "evidence", "words"],
  fee: ["feeKind", "feeCents", "words"],
  transfer: [...WHO, "transferRule", "period", "dayRule", "rolls", "words"],
};

const BLANK: Omit<TermsClause, "number" | "kind" | "title"> = {
  families: [],
  condition: null,
  period: null,
  startBasis: null,
  deliveryGraceDays: 0,
  dayRule: "event_day_excluded",
  rolls: true,
  clockStops: true,
  replacedRule: "later_of_both",
  transferRule: null,
  remedies: [],
  dueBackDays: null,
  holdCents: null,
  freight: null,
  responseHours: null,
  enduranceHours: null,
  enduranceTb: null,
  exclusion: null,
  evidence: [],
  feeKind: null,
  feeCents: null,
  words: "",
};

type Loose<T> = { [K in keyof T]?: T[K] | null | undefined };
type Named = Pick<TermsClause, "number" | "kind" | "title">;

/** A clause whole: what was not said is as the database has it by itself. */
export const clauseOf = (given: Named & Loose<TermsClause>): TermsClause =>
  Object.fromEntries(
    [...(["number", "kind", "title"] as const), ...(Object.keys(BLANK) as (keyof typeof BLANK)[])].map(
      (k) => [k, given[k] ?? (BLANK as Partial<TermsClause>)[k]],
    ),
  ) as TermsClause;

/** A clause with nothing in it that its kind does not say. */
export const onlyItsOwn = (c: TermsClause): TermsClause =>
  clauseOf({
    number: c.number,
    kind: c.kind,
    title: c.title,
    ...Object.fromEntries(FIELDS_OF[c.kind].map((f) => [f, c[f]])),
  });

const collator = new Intl.Collator("en", { numeric: true });
/** The order people cite clauses in: 3.2 before 3.10. */
export const inOrder = <T extends { number: string }>(clauses: readonly T[]): T[] =>
  [...clauses].sort((a, b) => collator.compare(a.number, b.number) || (a.number < b.number ? -1 : 1));

export type TermsProblem = {
  /** Place in the list that was checked; −1 for the terms as a whole. */
  index: number;
  number: string;
  field: ClauseField | "form";
  message: string;
  /** Place of the other clause, where two do not go together. */
  other?: number;
};

/** Bounds that no terms of the trade come near: a slip of the keyboard does. Ours, no source. */
export const BOUNDS = {
  periodDays: 50 * 366,
  cents: 10_000_000,
  graceDays: 60,
  dueBackDays: 120,
  responseHours: 2_000,
  enduranceHours: 200_000,
  enduranceTb: 1_000_000,
  title: 120,
  words: 2_000,
  evidence: 12,
  /** How far ahead an issue may begin: none may come in force before it. */
  aheadDays: 731,
} as const;

const familyWords = (f: string) => (FAMILY_WORDS as Record<string, string>)[f]?.toLowerCase() ?? f;
export const familiesWords = (families: readonly string[]) =>
  families.length === 0 ? "every part" : families.map(familyWords).join(", ");

const whole = (n: number | null, from: number, to: number) =>
  n === null || (Number.isInteger(n) && n >= from && n <= to);
const span = (from: number, to: number) =>
  `Give a whole number from ${from} to ${to.toLocaleString("en-US")}.`;

/** What is wrong with one clause by itself, field by field. */
function ownProblems(c: TermsClause): [field: ClauseField, message: string][] {
  const out: [ClauseField, string][] = [];
  const no = (field: ClauseField, message: string) => out.push([field, message]);
  const repeated = <T>(list: readonly T[]) => list.find((x, i) => list.indexOf(x) !== i);

  if (!/^[1-9]\d{0,2}(\.[1-9]\d{0,2}){0,3}$/.test(c.number)) no("number", "Number clauses like 3 or 3.1.");
  if (c.title.trim() === "") no("title", "Say in a few words what the clause is about.");
  else if (c.title.length > BOUNDS.title) no("title", `Keep it within ${BOUNDS.title} characters.`);
  if (c.words.length > BOUNDS.words) no("words", `Keep it within ${BOUNDS.words} characters.`);

  const takes = forbiddenIn(`${c.title}. ${c.words}`);
  if (takes)
    no(
      "words",
      `“${takes}” takes away what the law may give. Write “under our warranty” and leave the law beside it.`,
    );

  const stranger = c.families.find((f) => !FAMILIES.includes(f as Family));
  if (stranger === "") no("families", "Tick the parts it is for, or choose every part.");
  else if (stranger !== undefined) no("families", `There is no part family “${stranger}”.`);
  const twice = repeated(c.families);
  if (twice !== undefined) no("families", `The family ${familyWords(twice)} is named twice.`);
  if (c.condition !== null && !(CONDITIONS as readonly string[]).includes(c.condition))
    no("condition", "A condition is new or refurbished.");

  const window = c.kind === "doa" || c.kind === "cover";
  const floorless = c.kind === "replaced_part" && c.replacedRule === "remainder";
  if (c.period !== null) {
    const read = parsePeriod(c.period);
    if (!read.ok) no("period", read.refusal.message);
    else {
      const { years, months, weeks, days } = read.value;
      if (years * 366 + months * 31 + weeks * 7 + days > BOUNDS.periodDays)
        no("period", "A period may be at most 49 years.");
      else if (floorless) no("period", "The rest of the first cover has no floor: leave it empty.");
      else if (c.kind === "transfer" && c.transferRule !== "with_notice")
        no("period", "Only a written notice has a time limit: leave it empty.");
      else if (c.kind === "exclusion" || c.kind === "fee") no("period", "This kind of clause has no period.");
    }
  } else if (window) no("period", "Give the period, such as P36M or P30D.");
  else if (c.kind === "replaced_part" && !floorless) no("period", "Give the floor, such as P90D.");

  if (window && c.startBasis === null) no("startBasis", "Say which day the period runs from.");
  if (!whole(c.deliveryGraceDays, 0, BOUNDS.graceDays)) no("deliveryGraceDays", span(0, BOUNDS.graceDays));
  else if (window && c.deliveryGraceDays > 0 && c.startBasis === "shipped")
    no("deliveryGraceDays", "The ship day is always known: no days are added for a missing proof.");

  const unknown = c.remedies.find((r) => !REMEDIES.includes(r));
  const doubled = repeated(c.remedies);
  if (unknown !== undefined) no("remedies", `There is no remedy “${unknown}”.`);
  else if (window && c.remedies.length === 0) no("remedies", "Name at least one remedy.");
  else if (!window && c.remedies.length > 0)
    no("remedies", "Remedies stand with cover and with dead on arrival only.");
  if (doubled !== undefined)
    no("remedies", `${REMEDY_WORDS[doubled] ?? doubled} stands twice: name each remedy once.`);

  const advance = c.remedies.includes("advance_replacement");
  const inAdvance = "only where an advance replacement is among the remedies.";
  if (!whole(c.dueBackDays, 1, BOUNDS.dueBackDays)) no("dueBackDays", span(1, BOUNDS.dueBackDays));
  else if (c.dueBackDays !== null && !advance)
    no("dueBackDays", `Days to send the old part back: ${inAdvance}`);
  if (!whole(c.holdCents, 1, BOUNDS.cents))
    no("holdCents", `Give an amount from 0.01 to ${(BOUNDS.cents / 100).toLocaleString("en-US")}.`);
  else if (c.holdCents !== null && !advance) no("holdCents", `A hold: ${inAdvance}`);
  if (!whole(c.responseHours, 1, BOUNDS.responseHours)) no("responseHours", span(1, BOUNDS.responseHours));

  for (const field of ["enduranceHours", "enduranceTb"] as const) {
    if (!whole(c[field], 1, BOUNDS[field])) no(field, span(1, BOUNDS[field]));
    else if (c[field] !== null && c.kind !== "cover") no(field, "A limit of use stands with cover only.");
  }

  if (c.kind === "transfer" && c.transferRule === null)
    no("transferRule", "Say what becomes of cover when a unit is given on.");
  if (c.kind !== "transfer" && c.transferRule !== null)
    no("transferRule", "This stands in a clause on units given on only.");

  if (c.kind === "exclusion") {
    if (c.exclusion === null || !EXCLUSIONS.includes(c.exclusion as Exclusion))
      no("exclusion", "Choose what is left out.");
    const evidence = c.evidence.map((e) => e.trim());
    if (evidence.length === 0 || evidence.includes(""))
      no("evidence", "Name the evidence that shows it; without evidence nobody may rely on the clause.");
    else if (evidence.length > BOUNDS.evidence || evidence.some((e) => e.length > BOUNDS.title))
      no("evidence", `At most ${BOUNDS.evidence} lines of ${BOUNDS.title} characters.`);
    else if (repeated(evidence) !== undefined) no("evidence", `“${repeated(evidence)}” stands twice.`);
  } else if (c.exclusion !== null) no("exclusion", "Only an exclusion leaves something out.");

  if (c.kind === "fee") {
    if (c.feeKind === null || !CLAUSE_FEES.includes(c.feeKind as ClauseFee)) no("feeKind", "Choose the fee.");
    if (c.feeCents === null || !whole(c.feeCents, 1, BOUNDS.cents))
      no("feeCents", `Give an amount from 0.01 to ${(BOUNDS.cents / 100).toLocaleString("en-US")}.`);
    if (c.words.trim() === "") no("words", "Write the words that tell the customer of the fee before.");
    if (c.families.length > 0) no("families", "A fee is told for every part alike: name no family.");
    if (c.condition !== null) no("condition", "A fee is told for every condition alike.");
  } else if (c.feeKind !== null || c.feeCents !== null) no("feeKind", "Only a fee has an amount.");
  return out;
}

/** Why two clauses do not stand beside each other: both would apply, and neither before the other. */
function clash(a: TermsClause, b: TermsClause): [field: ClauseField, message: string] | null {
  if (a.number === b.number) return ["number", `Clause ${a.number} is there already.`];
  if (a.kind !== b.kind) return null;
  const both = `Clauses ${a.number} and ${b.number}`;
  if (a.kind === "fee")
    return a.feeKind !== null && a.feeKind === b.feeKind
      ? ["feeKind", `${both} are both for ${CLAUSE_FEE_WORDS[a.feeKind as ClauseFee] ?? a.feeKind}.`]
      : null;
  if (a.kind === "exclusion" && a.exclusion !== b.exclusion) return null;
  if (a.condition !== b.condition) return null;
  const shared = a.families.filter((f) => b.families.includes(f));
  const open = a.families.length === 0 && b.families.length === 0;
  if (!open && shared.length === 0) return null;
  const what = `${familiesWords(open ? [] : shared)}${a.condition ? `, ${a.condition}` : ""}`;
  if (a.kind === "exclusion")
    return [
      "exclusion",
      `${both} both leave out ${EXCLUSION_WORDS[a.exclusion as Exclusion] ?? a.exclusion} for ${what}.`,
    ];
  return [
    "families",
    `${both} overlap: both are about ${KIND_WORDS[a.kind]} for ${what}. Take it out of one of them.`,
  ];
}

/**
 * Everything that keeps clauses from being published, each with its clause and field. Weights are those
 * of windows.clauseFor: a named family goes before the system's and before every part, a named
 * condition before any; only clauses of equal weight can overlap.
 */
export function checkTerms(clauses: readonly TermsClause[]): TermsProblem[] {
  const out: TermsProblem[] = [];
  clauses.forEach((c, index) => {
    for (const [field, message] of ownProblems(c)) out.push({ index, number: c.number, field, message });
    for (let other = 0; other < index; other++) {
      const found = clash(clauses[other]!, c);
      if (found) out.push({ index, number: c.number, field: found[0], message: found[1], other });
    }
  });
  if (!clauses.some((c) => c.kind === "cover"))
    out.push({
      index: -1,
      number: "",
      field: "form",
      message: "No clause gives cover: what is sold under these terms would have none.",
    });
  return out;
}

/** Why an issue may not begin on a day, or null. */
export function checkEffective(
  effectiveOn: string,
  at: { last: { issue: number; effectiveOn: string } | null; today: string },
): string | null {
  if (!isDay(effectiveOn)) return "Give a day as year-month-day, such as 2026-03-04.";
  if (at.last && effectiveOn < at.last.effectiveOn)
    return `Issue ${at.last.issue} is in force from ${showDay(at.last.effectiveOn)}; the next one cannot begin before it.`;
  const latest = addDays(at.today, BOUNDS.aheadDays);
  if (effectiveOn > latest)
    return `An issue may begin at most two years ahead, by ${showDay(latest)}: no later one could come before it.`;
  return null;
}
