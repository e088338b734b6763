import { Temporal } from "temporal-polyfill";
import { parsePeriod } from "./period";

/** A civil day as text, "2026-03-04". No clock, no zone: cover counts days, not hours. */
export type Day = string;

export type AddRule = "event_day_excluded" | "start_day_included";

const plain = (day: Day) => Temporal.PlainDate.from(day, { overflow: "reject" });

export function isDay(text: string): boolean {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) return false;
  try {
    plain(text);
    return true;
  } catch {
    return false;
  }
}

export function addDays(day: Day, days: number): Day {
  return plain(day).add({ days }).toString();
}

export function daysBetween(from: Day, to: Day): number {
  return plain(from).until(plain(to), { largestUnit: "days" }).days;
}

/** Negative, zero or positive, as for sort. */
export function compareDays(a: Day, b: Day): number {
  return a < b ? -1 : a > b ? 1 : 0;
}

export const laterDay = (a: Day, b: Day): Day => (a >= b ? a : b);
export const earlierDay = (a: Day, b: Day): Day => (a <= b ? a : b);

/**
 * Last day of a period that starts with the event on `start`.
 *
 * Years and months are added in one step and clamped to the month's end, then weeks and days
 * (Regulation (EEC, Euratom) No 1182/71 Art. 3; BGB s. 187, 188).
 * `event_day_excluded`: the event's day is day zero. `start_day_included`: it is day one, so the
 * period ends the day before the same date, or on the month's last day where that date is missing.
 *
 * @throws RangeError when the period is not a plain date period; parse it first.
 */
export function addPeriod(start: Day, period: string, rule: AddRule = "event_day_excluded"): Day {
  const parsed = parsePeriod(period);
  if (!parsed.ok) throw new RangeError(parsed.refusal.message);
  const { years, months, weeks, days } = parsed.value;
  const from = plain(start);
  const shifted = from.add({ years, months }, { overflow: "constrain" });
  const clamped = shifted.day !== from.day;
  const end = shifted.add({ weeks, days });
  if (rule === "event_day_excluded") return end.toString();
  // A clamp has already taken the missing day away; only then nothing more is subtracted.
  const onlyCalendar = weeks === 0 && days === 0;
  return (clamped && onlyCalendar ? end : end.subtract({ days: 1 })).toString();
}

export type Workweek = { workdays: readonly number[]; holidays: readonly Day[] };

export function isWorkday(day: Day, week: Workweek): boolean {
  return week.workdays.includes(plain(day).dayOfWeek) && !week.holidays.includes(day);
}

/** For time limits to act only: cover itself never rolls. */
export function rollToWorkday(day: Day, week: Workweek): Day {
  let at = day;
  for (let i = 0; i < 366 && !isWorkday(at, week); i++) at = addDays(at, 1);
  return at;
}

/** Adds whole working days. */
export function addWorkdays(day: Day, count: number, week: Workweek): Day {
  let at = day;
  for (let left = count; left > 0;) {
    at = addDays(at, 1);
    if (isWorkday(at, week)) left--;
  }
  return at;
}

export type DaySpan = { from: Day; to: Day };

/** Days paused, both ends counted, overlaps counted once. */
export function pausedDays(spans: readonly DaySpan[]): number {
  const sorted = [...spans].sort((a, b) => compareDays(a.from, b.from));
  let total = 0;
  let reached: Day | null = null;
  for (const span of sorted) {
    const from: Day = reached !== null && span.from <= reached ? addDays(reached, 1) : span.from;
    if (from > span.to) continue;
    total += daysBetween(from, span.to) + 1;
    reached = span.to;
  }
  return total;
}

/** The calendar day of an instant in a zone; never the UTC day. */
export function civilDayIn(instant: Date, zone: string): Day {
  return Temporal.Instant.fromEpochMilliseconds(instant.getTime())
    .toZonedDateTimeISO(zone)
    .toPlainDate()
    .toString();
}

/** The instant at which a wall clock shows `time` ("09:00") on a day in a zone. */
export function instantAt(day: Day, time: string, zone: string): Date {
  const at = Temporal.PlainDateTime.from(`${day}T${time}`).toZonedDateTime(zone, {
    disambiguation: "compatible",
  });
  return new Date(at.epochMilliseconds);
}

/** ISO weekday number: Monday 1 to Sunday 7. */
export const weekday = (day: Day): number => plain(day).dayOfWeek;
