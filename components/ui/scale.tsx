import type { CSSProperties } from "react";

// Civil days on a rule. Day numbers by UTC are exact for civil days, and small enough for a browser;
// periods and calendars stay with lib/base/civil on the server.

const MS = 86_400_000;

/** Whole days since 1970-01-01. NaN for text that is no day. */
export function dayNumber(day: string): number {
  const [y, m, d] = day.split("-").map(Number);
  if (y === undefined || m === undefined || d === undefined) return Number.NaN;
  return Math.round(Date.UTC(y, m - 1, d) / MS);
}

/** The day of a whole number of days since 1970-01-01. */
export const dayText = (n: number): string => new Date(n * MS).toISOString().slice(0, 10);

const WEEKDAYS = ["Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"];

/** "Mon". 1970-01-01 was a Thursday. */
export const weekdayOf = (day: string): string => WEEKDAYS[(((dayNumber(day) + 4) % 7) + 7) % 7] ?? "";

const MONTHS = [
  "January",
  "February",
  "March",
  "April",
  "May",
  "June",
  "July",
  "August",
  "September",
  "October",
  "November",
  "December",
];

const split = (day: string) => {
  const [y = "", m = "1", d = "1"] = day.split("-");
  return { year: y, month: MONTHS[Number(m) - 1] ?? "", date: Number(d) };
};

/** "4 Mar 2024", or "4 Mar" beside a day of the same year. */
export function shortDay(day: string, beside?: string): string {
  const { year, month, date } = split(day);
  const short = `${date} ${month.slice(0, 3)}`;
  return beside?.startsWith(`${year}-`) ? short : `${short} ${year}`;
}

/** "4 March 2024". */
export function longDay(day: string): string {
  const { year, month, date } = split(day);
  return `${date} ${month} ${year}`;
}

/** "March 2024". */
export function monthOf(day: string): string {
  const { year, month } = split(day);
  return `${month} ${year}`;
}

export type Span = { from: string; to: string };

/** Where a day stands between two days, in percent, kept within 0 and 100. */
export function percentOf(day: string, { from, to }: Span): number {
  const a = dayNumber(from);
  const b = dayNumber(to);
  if (!(b > a)) return 0;
  const share = ((dayNumber(day) - a) / (b - a)) * 100;
  return Math.round(Math.min(100, Math.max(0, share)) * 1000) / 1000;
}

/** A span that holds all the days, with a little room at either end so that the outer marks can be seen. */
export function spanOf(days: readonly string[]): Span {
  const numbers = days.map(dayNumber).filter(Number.isFinite);
  if (numbers.length === 0) return { from: "1970-01-01", to: "1970-01-31" };
  const first = Math.min(...numbers);
  const last = Math.max(...numbers);
  const length = Math.max(last - first, 30);
  return {
    from: dayText(first - Math.max(1, Math.round(length * 0.004))),
    to: dayText(first + Math.ceil(length * 1.02)),
  };
}

/** Left edge and width of a stretch of days. The last day counts whole. */
export function stretch(from: string, to: string, span: Span): { left: number; width: number } {
  const left = percentOf(from, span);
  const right = percentOf(dayText(dayNumber(to) + 1), span);
  return { left, width: Math.round(Math.max(0, right - left) * 1000) / 1000 };
}

export type Tick = { at: number; kind: "day" | "week" | "month" | "quarter" | "year"; label?: string };

/**
 * The ticks of a span: years always, quarters up to fifteen years, months up to seven. A year's label
 * is left out where it would run past the edge or into the one before it.
 */
export function ticksOf(span: Span, lastLabel = 95): Tick[] {
  const from = dayNumber(span.from);
  const to = dayNumber(span.to);
  const years = (to - from) / 365.25;
  const every = years > 15 ? 12 : years > 7 ? 3 : 1;
  const labelEvery = Math.max(1, Math.ceil(years / 9));
  const ticks: Tick[] = [];
  let [y = 1970, m = 1] = span.from.split("-").map(Number);
  for (;;) {
    if (m > 12) {
      y += 1;
      m = 1;
    }
    const day = `${String(y).padStart(4, "0")}-${String(m).padStart(2, "0")}-01`;
    const n = dayNumber(day);
    if (n > to) return ticks;
    if (n >= from && (m - 1) % every === 0) {
      const at = percentOf(day, span);
      const kind = m === 1 ? "year" : (m - 1) % 3 === 0 ? "quarter" : "month";
      const labelled = kind === "year" && y % labelEvery === 0 && at < lastLabel;
      ticks.push(labelled ? { at, kind, label: String(y) } : { at, kind });
    }
    m += 1;
  }
}

/** Up to this many days each has its tick; on a longer rule only the Mondays have. */
const DAY_BY_DAY = 70;
const WEEK_LABELS = 6;

/**
 * The ticks of a few weeks: each day, Mondays tall and labelled with their day, as ISO weeks begin.
 * Labels thin out so that they stand apart on the narrowest screen.
 */
export function dayTicksOf(span: Span, lastLabel = 86): Tick[] {
  const from = dayNumber(span.from);
  const to = dayNumber(span.to);
  const labelEvery = Math.max(1, Math.ceil((to - from) / 7 / WEEK_LABELS));
  const ticks: Tick[] = [];
  let mondays = 0;
  for (let n = from; n < to; n++) {
    const day = dayText(n);
    const at = percentOf(day, span);
    if (weekdayOf(day) === "Mon") {
      const labelled = mondays % labelEvery === 0 && at < lastLabel;
      ticks.push(labelled ? { at, kind: "week", label: shortDay(day, day) } : { at, kind: "week" });
      mondays += 1;
    } else if (to - from <= DAY_BY_DAY) {
      ticks.push({ at, kind: "day" });
    }
  }
  return ticks;
}

const TICK = { day: "tick", week: "tick yr", month: "tick", quarter: "tick qt", year: "tick yr" } as const;

/** Labels that a narrow screen has no room for: those by the far edge, and every second of many. */
function spare(ticks: readonly Tick[]): Set<Tick> {
  const labelled = ticks.filter((t) => t.label);
  return new Set(labelled.filter((t, i) => t.at > 86 || (labelled.length > 6 && i % 2 === 1)));
}

/** The ticks of a rule, hanging from its top edge. Only for the eye. */
export function Scale({
  span,
  months = true,
  ticks,
  style,
}: {
  span: Span;
  months?: boolean;
  /** Other ticks than those of the years: the days of a loupe. */
  ticks?: readonly Tick[];
  style?: CSSProperties;
}) {
  const drawn = (ticks ?? ticksOf(span, months ? 95 : 90)).filter((t) => months || t.kind !== "month");
  const spared = spare(drawn);
  return (
    <div className="scale" style={style} aria-hidden="true">
      {drawn.map((t) => (
        <span key={t.at}>
          <i className={TICK[t.kind]} style={{ left: `${t.at}%` }} />
          {t.label ? (
            <span className={spared.has(t) ? "yl spare" : "yl"} style={{ left: `${t.at}%` }}>
              {t.label}
            </span>
          ) : null}
        </span>
      ))}
    </div>
  );
}
