import { daysBetween, type Day } from "./civil";

const MONTHS = "January February March April May June July August September October November December".split(
  " ",
);
const WEEKDAYS = ["Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun"];

const parts = (day: Day) => {
  const [y, m, d] = day.split("-").map(Number) as [number, number, number];
  return { y, m, d, month: MONTHS[m - 1] ?? "" };
};

/** "4 March 2026". */
export function showDay(day: Day): string {
  const { y, d, month } = parts(day);
  return `${d} ${month} ${y}`;
}

/** "4 Mar 2026". */
export function showDayShort(day: Day): string {
  const { y, d, month } = parts(day);
  return `${d} ${month.slice(0, 3)} ${y}`;
}

/** "March 2026". */
export function showMonth(day: Day): string {
  const { y, month } = parts(day);
  return `${month} ${y}`;
}

/** "Fri 13" within a fortnight of today, "Fri 13 Nov" else. */
export function showNear(day: Day, today: Day): string {
  const { d, month } = parts(day);
  const name = WEEKDAYS[((daysBetween("2024-01-01", day) % 7) + 7) % 7] ?? "";
  return Math.abs(daysBetween(today, day)) <= 14 ? `${name} ${d}` : `${name} ${d} ${month.slice(0, 3)}`;
}

/** "1 d 5 h", "48 m", "2 h 10 m": the wait between two entries. */
export function showWait(ms: number): string {
  const minutes = Math.max(0, Math.round(ms / 60_000));
  if (minutes < 60) return `${minutes} m`;
  const hours = Math.floor(minutes / 60);
  if (hours < 24) return minutes % 60 === 0 ? `${hours} h` : `${hours} h ${minutes % 60} m`;
  const days = Math.floor(hours / 24);
  return hours % 24 === 0 || days > 6 ? `${days} d` : `${days} d ${hours % 24} h`;
}

/** "1:50" from minutes. */
export function showClockSpan(minutes: number): string {
  const m = Math.max(0, Math.round(minutes));
  return `${Math.floor(m / 60)}:${String(m % 60).padStart(2, "0")}`;
}

/** Wall clock in a zone: "11:24". */
export function showClock(at: Date, zone: string): string {
  return new Intl.DateTimeFormat("en-GB", { hour: "2-digit", minute: "2-digit", timeZone: zone }).format(at);
}

/** Day and clock in a zone: "12 Nov 2026, 11:24". */
export function showInstant(at: Date, zone: string): string {
  const day = new Intl.DateTimeFormat("en-CA", {
    year: "numeric",
    month: "2-digit",
    day: "2-digit",
    timeZone: zone,
  }).format(at);
  return `${showDayShort(day)}, ${showClock(at, zone)}`;
}

/** "Thursday 12 November 2026" in a zone. */
export function showLongDay(at: Date, zone: string): string {
  const p = new Intl.DateTimeFormat("en-GB", {
    weekday: "long",
    day: "numeric",
    month: "long",
    year: "numeric",
    timeZone: zone,
  });
  return p.format(at).replace(",", "");
}

const SMALL =
  "no one two three four five six seven eight nine ten eleven twelve thirteen fourteen fifteen sixteen seventeen eighteen nineteen twenty".split(
    " ",
  );
/** Small counts as words, larger ones as digits: "six", "27". */
export function countWord(n: number): string {
  return SMALL[n] ?? n.toLocaleString("en-US").replace(/,/g, "\u00a0");
}
export const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);
export const plural = (n: number, word: string, many = `${word}s`): string => (n === 1 ? word : many);

/** "25 MB", "212 kB". */
export function showBytes(n: number): string {
  if (n < 1000) return `${n} B`;
  if (n < 1_000_000) return `${Math.round(n / 1000)} kB`;
  return `${(n / 1_000_000).toFixed(1)} MB`;
}
