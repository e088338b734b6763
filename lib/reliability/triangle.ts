import { addDays, addPeriod, type Day } from "../base/civil";

/** Months of service are of equal length, so that a month's hazard compares across ship months. */
export const DAYS_PER_MONTH = 365.25 / 12;

/** Lives of one ship month that ended in one month of service (0: on day zero). */
export type CohortCount = { month: string; ended: number; failed: number; count: number };

export type Cell = {
  month: number;
  atRisk: number;
  failed: number;
  /** Per 1000 at risk; null without anybody at risk. */
  per1000: number | null;
  /** Not all of the cohort can have been this long in service yet. */
  running: boolean;
};
export type Cohort = { month: string; units: number; cells: Cell[] };

/**
 * Ship month against months in service, as a life table: failures in a month over those at risk at its
 * begin. Works with the quantity known to be shipped, so a cohort without failures keeps a true zero.
 */
export function triangle(counts: readonly CohortCount[], asOf: Day, months: number): Cohort[] {
  const byMonth = new Map<string, CohortCount[]>();
  for (const c of counts) byMonth.set(c.month, [...(byMonth.get(c.month) ?? []), c]);
  return [...byMonth.entries()]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .map(([month, rows]) => {
      const first = `${month}-01`;
      const last = addDays(addPeriod(first, "P1M"), -1);
      const total = rows.reduce((n, r) => n + r.count, 0);
      const cells: Cell[] = [];
      for (let k = 1; k <= months; k++) {
        if (addDays(first, Math.floor((k - 1) * DAYS_PER_MONTH)) >= asOf) break;
        const atRisk = rows.reduce((n, r) => n + (r.ended >= k ? r.count : 0), 0);
        const failed = rows.reduce((n, r) => n + (r.ended === k ? r.failed : 0), 0);
        cells.push({
          month: k,
          atRisk,
          failed,
          per1000: atRisk > 0 ? (failed / atRisk) * 1000 : null,
          running: addDays(last, Math.ceil(k * DAYS_PER_MONTH)) > asOf,
        });
      }
      return { month, units: total, cells };
    });
}

/** Month of service that a life of so many days ended in: day 1 to 30 is month 1, day zero is 0. */
export const monthOfService = (days: number): number => Math.ceil(days / DAYS_PER_MONTH);

/**
 * Hazard by month of service over all cohorts, from failures of known quantities shipped, and what is
 * still to come of each cohort up to the oldest month seen.
 */
export function lifeTable(shipped: readonly number[], failures: readonly (readonly number[])[]) {
  const months = Math.max(0, ...failures.map((f) => f.length));
  const failed: number[] = [];
  const atRisk: number[] = [];
  for (let k = 0; k < months; k++) {
    let [d, n] = [0, 0];
    failures.forEach((row, i) => {
      if (row.length <= k) return;
      d += row[k]!;
      n += shipped[i]! - row.slice(0, k).reduce((a, b) => a + b, 0);
    });
    failed.push(d);
    atRisk.push(n);
  }
  const hazard = failed.map((d, k) => (atRisk[k]! > 0 ? d / atRisk[k]! : 0));
  let alive = 1;
  const cumulative = hazard.map((h) => 1 - (alive *= 1 - h));
  const toCome = failures.map((row, i) => {
    const left = shipped[i]! - row.reduce((a, b) => a + b, 0);
    return left * (1 - hazard.slice(row.length).reduce((s, h) => s * (1 - h), 1));
  });
  return { failed, atRisk, hazard, cumulative, toCome };
}
