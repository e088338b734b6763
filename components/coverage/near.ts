import { dayNumber, dayText, longDay, shortDay, spanOf } from "../ui/scale";
import type { RulerRow } from "./ruler";

/**
 * What a ruler of years cannot show: whether a claim came the day before the last covered day or the
 * day after it. Decides whether a ruler needs a loupe, over which days, and says what it shows.
 */
export type Loupe = {
  /** A Monday. */
  from: string;
  /** A Sunday, the last day shown. */
  to: string;
  /** What the eye could not see, in whole sentences. */
  why: string;
};

export type LoupeDays = {
  shippedOn?: string | null;
  claimOn?: string | null;
  todayOn: string;
  todayWord?: string;
};

/** Days nearer than this share of the scale nearly touch: ten pixels on a narrow one. */
const NEAR = 0.025;
/** Days further apart than this are left to the ruler, unless nothing nearer is there to show. */
const REACH = 70;
const PAD = 4;
const WEEKS = 3;
/** A loupe that does not enlarge so much shows nothing the ruler did not. */
const POWER = 3;

type Line = { id: "claim" | "today"; n: number };
type Edge = { n: number; end: "first" | "last"; doa: boolean; clause: string };

/** The rows a claim hangs on: those marked as claimed, or the only one there is. */
export const mattering = (rows: readonly RulerRow[]): readonly RulerRow[] => {
  const claimed = rows.filter((r) => r.claimed);
  return claimed.length > 0 ? claimed : rows.length === 1 ? rows : [];
};

/** Those of them that have a day within a loupe. */
export const rowsUnder = (rows: readonly RulerRow[], { from, to }: Pick<Loupe, "from" | "to">) =>
  mattering(rows).filter((r) => r.from <= to && r.to >= from);

const isDoa = (row: RulerRow) => row.window === "doa" || row.kind === "doa";

/** A DOA window that was over when the claim came decides nothing; a cover that was over does. */
export const decides = (row: RulerRow, { claimOn, todayOn }: LoupeDays): boolean =>
  !isDoa(row) || (claimOn ?? todayOn) <= row.to;

const daysApart = (n: number) => (n === 1 ? "1 day" : `${n} days`);

/** The first days of all rows are one day to a reader; so are equal last days of several clauses. */
function edgesOf(rows: readonly RulerRow[]): Edge[] {
  const edges = new Map<string, Edge>();
  for (const row of rows) {
    const doa = isDoa(row);
    const ends: Edge[] = [
      { n: dayNumber(row.from), end: "first", doa: false, clause: row.clause },
      { n: dayNumber(row.to), end: "last", doa, clause: row.clause },
    ];
    for (const e of ends) {
      const key = `${e.n} ${e.end} ${e.doa}`;
      if (!edges.has(key)) edges.set(key, e);
    }
  }
  return [...edges.values()];
}

/** Whole weeks, from Monday to Sunday as ISO 8601 counts them, with room at either end. */
function weeksRound(first: number, last: number): { from: number; to: number } {
  // Day 4 of the count, 5 January 1970, was a Monday.
  const monday = (n: number) => n - ((((n - 4) % 7) + 7) % 7);
  let from = monday(first - PAD);
  let to = monday(last + PAD) + 6;
  while (to - from + 1 < WEEKS * 7) {
    if (first - from <= to - last) from -= 7;
    else to += 7;
  }
  return { from, to };
}

/** "the last covered day, 3 March"; with its clause where there are several such days. */
function edgeWords(e: Edge, among: readonly Edge[], say: (n: number) => string): string {
  const several = among.filter((o) => o.end === e.end && o.doa === e.doa).length > 1;
  const day =
    e.end === "first"
      ? "the first covered day"
      : e.doa
        ? "the last day of the DOA window"
        : "the last covered day";
  return `${day}${several ? ` of clause ${e.clause}` : ""}, ${say(e.n)}`;
}

/** Each part ends in a day set off by a comma, so the list is held together by stronger marks. */
const listed = (words: readonly string[]) =>
  words.length < 3
    ? words.join(", and ")
    : `${words.slice(0, -1).join("; ")}; and ${words[words.length - 1] ?? ""}`;

/** "1 day before the last covered day, 3 March", for each end of cover in sight, nearest first. */
function placeOf(n: number, edges: readonly Edge[], say: (n: number) => string): string {
  const nearest = [...edges].sort((a, b) => Math.abs(a.n - n) - Math.abs(b.n - n));
  return listed(
    nearest.map((e) => {
      const words = edgeWords(e, edges, say);
      if (e.n === n) return `on ${words.slice(0, words.lastIndexOf(","))}`;
      return `${daysApart(Math.abs(e.n - n))} ${n < e.n ? "before" : "after"} ${words}`;
    }),
  );
}

function sentences(
  lines: readonly Line[],
  edges: readonly Edge[],
  years: boolean,
  todayWord: string,
): string {
  const say = (n: number) => (years ? longDay(dayText(n)) : longDay(dayText(n)).replace(/ \d+$/, ""));
  const claim = lines.find((l) => l.id === "claim");
  const today = lines.find((l) => l.id === "today");
  const isToday = todayWord === "today";
  const subject = (n: number) => (isToday ? `Today, ${say(n)}, is` : `It was counted on ${say(n)},`);
  const out: string[] = [];
  if (!claim) return today ? `${subject(today.n)} ${placeOf(today.n, edges, say)}.` : "";
  if (edges.length > 0) {
    const also = isToday && today?.n === claim.n ? ", today," : "";
    out.push(`The claim of ${say(claim.n)}${also} came ${placeOf(claim.n, edges, say)}.`);
  }
  if (today && today.n !== claim.n) {
    const side = today.n > claim.n ? "after" : "before";
    const which = edges.length > 0 ? "the claim" : `the claim of ${say(claim.n)}`;
    out.push(`${subject(today.n)} ${daysApart(Math.abs(today.n - claim.n))} ${side} ${which}.`);
  }
  return out.join(" ");
}

/**
 * The days to enlarge, or null where the ruler shows all there is to see. A loupe is wanted where the
 * claim or today lies so near the other, or near a first or last day of a row that matters, that the
 * lines nearly touch.
 */
export function loupeFor(rows: readonly RulerRow[], days: LoupeDays): Loupe | null {
  const { claimOn, todayOn, shippedOn, todayWord = "today" } = days;
  const rowsThatMatter = mattering(rows);
  if (rowsThatMatter.length === 0) return null;
  const given = [todayOn, claimOn, shippedOn].filter((d): d is string => Boolean(d));
  const span = spanOf([...given, ...rows.flatMap((r) => [r.from, r.to])]);
  const length = dayNumber(span.to) - dayNumber(span.from);

  const lines: Line[] = [{ id: "today", n: dayNumber(todayOn) }];
  if (claimOn) lines.unshift({ id: "claim", n: dayNumber(claimOn) });
  const edges = edgesOf(rowsThatMatter);
  const [first, second] = lines;
  const pairs = [
    ...lines.flatMap((l) => edges.map((e) => ({ a: l.n, b: e.n }))),
    ...(first && second && first.n !== second.n ? [{ a: first.n, b: second.n }] : []),
  ]
    .map((p) => ({ ...p, apart: Math.abs(p.a - p.b) }))
    .filter((p) => p.apart < length * NEAR)
    // The claim's own neighbors stand first, so that a tie is its to decide.
    .sort((p, q) => p.apart - q.apart);

  const claimN = first?.id === "claim" ? first.n : null;
  const start = pairs.find((p) => p.a === claimN) ?? pairs[0];
  if (!start) return null;
  let low = Math.min(start.a, start.b);
  let high = Math.max(start.a, start.b);
  // Neighbors of what is already in sight come in, while all stays within a few weeks.
  for (let grown = true; grown;) {
    grown = false;
    for (const { a, b } of pairs) {
      const touches = [a, b].some((n) => n >= low && n <= high);
      const lo = Math.min(low, a, b);
      const hi = Math.max(high, a, b);
      if (touches && hi - lo <= REACH && (lo < low || hi > high)) {
        low = lo;
        high = hi;
        grown = true;
      }
    }
  }

  const { from, to } = weeksRound(low, high);
  if ((to - from + 1) * POWER > length) return null;
  // Claim and today near each other with all cover long over: nothing hangs on which day it was.
  if (rowsUnder(rows, { from: dayText(from), to: dayText(to) }).length === 0) return null;
  const inside = ({ n }: { n: number }) => n >= from && n <= to;
  const years = dayText(from).slice(0, 4) !== dayText(to).slice(0, 4);
  return {
    from: dayText(from),
    to: dayText(to),
    why: sentences(lines.filter(inside), edges.filter(inside), years, todayWord),
  };
}

/** Longer counts of days say less than the day itself. */
const COUNTED = 120;

/** A row's last covered day as counted from the claim, or from today where nothing is claimed. */
export function fromClaim(row: RulerRow, { claimOn, todayOn, todayWord = "today" }: LoupeDays): string {
  const on = dayNumber(claimOn ?? todayOn);
  const than = claimOn ? "the claim" : todayWord === "today" ? "today" : "the day counted";
  const first = dayNumber(row.from) - on;
  if (first > 0) return `from ${daysApart(first)} after ${than}`;
  const last = dayNumber(row.to) - on;
  if (last === 0) return claimOn ? "to the day of the claim" : `to ${than}`;
  if (Math.abs(last) > COUNTED) return `to ${shortDay(row.to)}`;
  return `to ${daysApart(Math.abs(last))} ${last > 0 ? "after" : "before"} ${than}`;
}
