import { daysBetween } from "../base/civil";
import { showDay } from "../base/show";
import type { Reason, ReasonFacts } from "./schema";

export const lower = (t: string) => t.charAt(0).toLowerCase() + t.slice(1);
/** Thousands parted by a space that does not break. */
export const thin = (n: number) => n.toLocaleString("en-US").replace(/,/g, "\u00a0");

const TB = 1e12;
export const terabytes = (bytes: number) => {
  const tb = bytes / TB;
  return thin(tb >= 100 ? Math.round(tb) : Math.round(tb * 10) / 10);
};

type Sentences = { staff: string; customer: string };
type Say = (
  f: Required<Pick<ReasonFacts, "dates" | "numbers" | "words" | "evidence">> & ReasonFacts,
) => Sentences;

function when(f: ReasonFacts): string {
  const gap = daysBetween(f.dates.claimOn!, f.dates.lastOn!);
  if (gap === 0) return "on its last covered day";
  const n = Math.abs(gap);
  return `${n} ${n === 1 ? "day" : "days"} ${gap > 0 ? "before its end" : "after it"}`;
}

/** Days of cover, in words: the same base for the DOA window and for cover. */
const window: Say = (f) => {
  const { claimOn, lastOn } = f.dates as { claimOn: string; lastOn: string };
  const inside = claimOn <= lastOn;
  const base = f.words.base!;
  const end = f.dates.cutOn
    ? `, ended ${showDay(f.dates.cutOn)} when it was given on`
    : `; last covered day ${showDay(lastOn)}`;
  return {
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}: ${base}${end}. The claim of ${showDay(claimOn)} came ${when(f)}.`,
    customer: inside
      ? `It is covered to ${showDay(lastOn)} under clause ${f.clause} of your terms (${base}), and you wrote to us on ${showDay(claimOn)}.`
      : `Under our warranty it was covered to ${showDay(lastOn)} (clause ${f.clause}: ${base}), and you wrote to us on ${showDay(claimOn)}.`,
  };
};

/** One row a rule: its facts in, one sentence for staff and one for the customer out. */
const SAY: Record<ReasonFacts["rule"], Say> = {
  claim_before_ship: (f) => ({
    staff: `The claim of ${showDay(f.dates.claimOn!)} comes before the ship day ${showDay(f.dates.shippedOn!)}; one of the two is wrong.`,
    customer:
      "The day we shipped it and the day you wrote do not fit together, so a person checks the order.",
  }),
  serial_differs: (f) => ({
    staff: `The log names ${f.words.logSerial || "another serial"}, which is not the serial claimed.`,
    customer: "The log you sent is of another part than the one you chose, so a person looks at both.",
  }),
  sold_elsewhere: () => ({
    staff: "It was sold in another system, under a sale of another customer; a person reads those terms.",
    customer:
      "This part was first sold in another system, so a person looks up the terms it came under before we answer.",
  }),
  fitted_after_cover: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}, had ended when this part was fitted on ${showDay(f.dates.fittedOn!)}, and these terms give a part we fit no cover of its own.`,
    customer: `The first cover had ended when we fitted this part on ${showDay(f.dates.fittedOn!)}, so a person looks at what was agreed then.`,
  }),
  no_clause: (f) => ({
    staff: `These terms have no clause for the ${f.words.family}, and none for every part.`,
    customer: "Your terms do not name this kind of part, so a person reads them with you.",
  }),
  given_on_unnamed: (f) => ({
    staff: `It was given on to another company on ${showDay(f.dates.givenOn!)}, and these terms do not say whether cover goes along.`,
    customer: `It was given on to you on ${showDay(f.dates.givenOn!)}, and its terms do not say whether cover goes along, so a person reads them.`,
  }),
  given_on_first_buyer: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}: cover is the first buyer's, and it was given on on ${showDay(f.dates.givenOn!)}.`,
    customer: `Under our warranty its cover was the first buyer's (clause ${f.clause}), and it was given on on ${showDay(f.dates.givenOn!)}.`,
  }),
  given_on_notice_open: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}: given on on ${showDay(f.dates.givenOn!)}, and no written notice of it is on record${f.dates.noticeBy ? `; it may come until ${showDay(f.dates.noticeBy)}` : ""}.`,
    customer: `It was given on on ${showDay(f.dates.givenOn!)}. Cover goes along once we are told in writing (clause ${f.clause})${f.dates.noticeBy ? `, by ${showDay(f.dates.noticeBy)}` : ""}, and we have no such note yet.`,
  }),
  given_on_not_noticed: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}: given on on ${showDay(f.dates.givenOn!)}; the written notice was due by ${showDay(f.dates.noticeBy!)} and ${f.dates.noticedOn ? `came on ${showDay(f.dates.noticedOn)}` : "none is on record"}.`,
    customer: `Under our warranty cover goes along when we are told in writing (clause ${f.clause}). It was given on on ${showDay(f.dates.givenOn!)}, and we had no note of it by ${showDay(f.dates.noticeBy!)}.`,
  }),
  given_on_noticed: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}: given on on ${showDay(f.dates.givenOn!)}, with written notice of ${showDay(f.dates.noticedOn!)}; cover goes along.`,
    customer: `It was given on on ${showDay(f.dates.givenOn!)} and we were told on ${showDay(f.dates.noticedOn!)}, so its cover goes along (clause ${f.clause}).`,
  }),
  given_on_follows: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}: cover follows the serial; given on on ${showDay(f.dates.givenOn!)}.`,
    customer: `Its cover follows the serial (clause ${f.clause}), so it came to you with it on ${showDay(f.dates.givenOn!)}.`,
  }),
  doa_window: window,
  cover_window: window,
  endurance: (f) => {
    const { hours, limitHours, bytes, limitBytes } = f.numbers;
    const staff: string[] = [];
    const customer: string[] = [];
    if (hours !== undefined && limitHours !== undefined) {
      staff.push(`${thin(hours)} of ${thin(limitHours)} hours`);
      customer.push(`${thin(hours)} hours; the clause covers ${thin(limitHours)}`);
    }
    if (bytes !== undefined && limitBytes !== undefined) {
      staff.push(`${terabytes(bytes)} of ${terabytes(limitBytes)} TB written`);
      customer.push(`${terabytes(bytes)} TB written; the clause covers ${terabytes(limitBytes)}`);
    }
    return {
      staff: `${f.words.log} shows ${staff.join(" and ")}; whichever is reached first counts.`,
      customer: `Its log shows ${customer.join(", and ")}.`,
    };
  },
  endurance_unproven: () => ({
    staff:
      "The log is past the limit of the clause, but it names no serial, so it is not shown to be of this drive.",
    customer: "The log you sent does not say which drive it is of, so a person looks at it.",
  }),
  exclusion_shown: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}: the evidence shows it.`,
    customer: `Clause ${f.clause} leaves out ${lower(f.words.title!)}, and the evidence shows it.`,
  }),
  exclusion_unproven: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}, was said to be shown, but no ${f.evidence[0]} is on record; without it nobody may rely on the clause.`,
    customer: `We must see whether clause ${f.clause}, ${lower(f.words.title!)}, applies. We never assume it does.`,
  }),
  exclusion_open: (f) => ({
    staff:
      f.numbers.photos! > 0
        ? `Clause ${f.clause} may apply (${lower(f.words.title!)}); a person must look at the photos and compare them with ours.`
        : `Clause ${f.clause} may apply (${lower(f.words.title!)}), and no ${f.evidence[0]} is there to show it either way.`,
    customer: `We must see whether clause ${f.clause}, ${lower(f.words.title!)}, applies. We never assume it does.`,
  }),
  exclusion_ruled_out: (f) => ({
    staff: `Clause ${f.clause}, ${lower(f.words.title!)}, was looked into and does not apply: the evidence does not show it, or it was there when we shipped.`,
    customer: `We looked into clause ${f.clause}, ${lower(f.words.title!)}: it does not apply.`,
  }),
  earlier_claims: (f) => ({
    staff: `Claimed before under this sale: ${f.words.list}.`,
    customer:
      f.numbers.count === 1
        ? `You wrote to us about it once before, on ${showDay(f.dates.lastOn!)}.`
        : `You wrote to us about it ${f.numbers.count} times before, last on ${showDay(f.dates.lastOn!)}.`,
  }),
  open_rma: (f) => ({
    staff: `${f.words.rma} is open on this unit already.`,
    customer: `You already have ${f.words.rma} for this part.`,
  }),
};

/** The two sentences of a reason, from its facts alone. */
export const sentences = (facts: ReasonFacts): Sentences => SAY[facts.rule](facts);

/** A reason from its facts; what a rule does not need may be left out. Absent days and numbers are dropped. */
export function reason(
  rule: ReasonFacts["rule"],
  facts: Partial<Omit<ReasonFacts, "rule" | "dates" | "numbers">> & {
    dates?: Record<string, string | null | undefined>;
    numbers?: Record<string, number | null | undefined>;
  },
): Reason {
  const kept = <T>(from: Record<string, T | null | undefined> = {}) =>
    Object.fromEntries(Object.entries(from).filter(([, v]) => v !== null && v !== undefined)) as Record<
      string,
      T
    >;
  const whole: ReasonFacts = {
    rule,
    clause: facts.clause ?? null,
    source: facts.source ?? "the ledger",
    dates: kept(facts.dates),
    numbers: kept(facts.numbers),
    words: facts.words ?? {},
    evidence: facts.evidence ?? [],
  };
  return { ...whole, ...sentences(whole) };
}
