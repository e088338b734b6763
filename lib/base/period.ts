import { ok, refuse, type Result } from "./result";

export type Period = { years: number; months: number; weeks: number; days: number };

/**
 * Reads the date part of an ISO 8601 duration, such as P36M, P1Y6M, P90D or P2W.
 * Zero, fractions, signs and times of day are refused, each with its reason.
 */
export function parsePeriod(text: string): Result<Period> {
  const no = (why: string) => refuse("invalid", why, { fields: { period: [why] } });
  if (/^-|-\d/.test(text)) return no("A period cannot be negative.");
  if (/[.,]/.test(text)) return no("A period has whole parts only: write P45D, not P1.5M.");
  if (/T/.test(text)) return no("A period counts days, not hours.");
  const m = /^P(?:(\d{1,4})Y)?(?:(\d{1,4})M)?(?:(\d{1,4})W)?(?:(\d{1,5})D)?$/.exec(text);
  if (!m || text === "P") return no("Write a period such as P36M, P1Y6M, P90D or P2W.");
  const [years, months, weeks, days] = [m[1], m[2], m[3], m[4]].map((n) => Number(n ?? 0)) as [
    number,
    number,
    number,
    number,
  ];
  if (years + months + weeks + days === 0) return no("A period must be longer than nothing.");
  return ok({ years, months, weeks, days });
}

/** "36 months", "1 year 6 months", "90 days". */
export function periodWords(text: string): string {
  const parsed = parsePeriod(text);
  if (!parsed.ok) return text;
  const { years, months, weeks, days } = parsed.value;
  const part = (n: number, word: string) => (n === 0 ? [] : [`${n} ${word}${n === 1 ? "" : "s"}`]);
  return [
    ...part(years, "year"),
    ...part(months, "month"),
    ...part(weeks, "week"),
    ...part(days, "day"),
  ].join(" ");
}
