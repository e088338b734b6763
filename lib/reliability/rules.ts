import { addDays, type Day } from "../base/civil";
import { FAMILY_WORDS, type Condition, type Family } from "../ledger/schema";
import { departing } from "./departure";
import { DAYS_PER_YEAR } from "./exposure";
import { exactShare, poissonLimits, rateOf } from "./intervals";
import type {
  GroupBy,
  LifeSums,
  RateRow,
  RatesFilter,
  RatesView,
  StandsOut,
  SurvivalGroup,
  SurvivalView,
} from "./schema";
import { atRiskAt, kaplanMeier, type LifeCount } from "./survival";
import { DAYS_PER_MONTH, type Cohort } from "./triangle";
import { firmGround, notYetFirm } from "./words";

/** Below either, a dot misleads: read its whisker. Gates of our own, common practice, no source. */
export const SMALL_FAILURES = 5;
export const SMALL_YEARS = 200;
const MIN_AT_RISK = 10;

/** Sums of lives to the rows of figure 1, the figure of all parts, and what may be said of them. */
export function ratesFrom(sums: readonly LifeSums[], filter: RatesFilter, asOf: Day): RatesView {
  const rows = groupRows(sums, filter.by).sort(
    (a, b) => (b.rate ?? -1) - (a.rate ?? -1) || a.label.localeCompare(b.label, "en"),
  );
  const parts = sums.filter((s) => s.family !== "system");
  const all = rowOf("all", { label: "All parts", name: "All parts", prose: "all parts" }, null, null, parts);
  return { asOf, filter, rows, all, firm: firmGround(rows, all), notYet: notYetFirm(rows, asOf) };
}

function groupRows(sums: readonly LifeSums[], by: GroupBy): RateRow[] {
  const what = (s: LifeSums) => (by === "family" ? s.family : s.modelCode);
  // New and refurbished are told apart wherever both exist: pooled they describe neither.
  const conditions = new Map<string, Set<Condition>>();
  for (const s of sums) conditions.set(what(s), (conditions.get(what(s)) ?? new Set()).add(s.condition));
  const groups = new Map<string, LifeSums[]>();
  for (const s of sums) {
    const split = conditions.get(what(s))!.size > 1;
    const key = split ? `${what(s)}|${s.condition}` : what(s);
    groups.set(key, [...(groups.get(key) ?? []), s]);
  }
  return [...groups].map(([key, own]) => {
    const one = own[0]!;
    const split = key.includes("|");
    const word = (text: string) => (split ? `${text}, ${one.condition}` : text);
    const short = by === "family" ? FAMILY_WORDS[one.family] : one.modelCode;
    const full = by === "family" ? short : `${one.modelName}, ${one.modelCode}`;
    const bare = by === "family" ? short.toLowerCase() : short;
    return rowOf(
      key,
      { label: word(short), name: word(full), prose: split ? `${one.condition} ${bare}` : bare },
      one.family,
      split ? one.condition : null,
      own,
    );
  });
}

function rowOf(
  key: string,
  words: Pick<RateRow, "label" | "name" | "prose">,
  family: Family | null,
  condition: Condition | null,
  own: readonly LifeSums[],
): RateRow {
  const sum = (of: (s: LifeSums) => number) => own.reduce((n, s) => n + of(s), 0);
  const failures = sum((s) => s.failures);
  const unitYears = sum((s) => s.days) / DAYS_PER_YEAR;
  const rate = rateOf(failures, unitYears);
  const open = sum((s) => s.open);
  const [judged, noFaultFound] = [sum((s) => s.judged), sum((s) => s.noFaultFound)];
  const [arrived, arrivedDead] = [sum((s) => s.arrived), sum((s) => s.arrivedDead)];
  return {
    key,
    ...words,
    family,
    condition,
    units: sum((s) => s.units),
    unitYears,
    failures,
    rate: rate?.rate ?? null,
    limits: rate ? { lo: rate.lo, hi: rate.hi } : null,
    highest: rate ? poissonLimits(failures + open).hi / unitYears : null,
    small: failures < SMALL_FAILURES || unitYears < SMALL_YEARS,
    inView: sum((s) => s.inView),
    open,
    judged,
    noFaultFound,
    noFaultFoundLimits: exactShare(noFaultFound, judged),
    arrived,
    arrivedDead,
    arrivedDeadLimits: exactShare(arrivedDead, arrived),
  };
}

export type ConditionLives = { condition: Condition; lives: LifeCount[]; coverDays: number | null };

/** Curves by condition, each drawn only as far as enough units are at risk. */
export function survivalFrom(family: Family, asOf: Day, found: readonly ConditionLives[]): SurvivalView {
  const groups = found.map(({ condition, lives, coverDays }): SurvivalGroup => {
    const units = lives.reduce((n, l) => n + (l.count ?? 1), 0);
    const shownTo = oldestWith(lives, Math.min(MIN_AT_RISK, units));
    const months = Array.from({ length: Math.floor(shownTo / DAYS_PER_MONTH / 6) + 1 }, (_, i) => i * 6);
    const counts = atRiskAt(
      lives,
      months.map((m) => m * DAYS_PER_MONTH),
    );
    return {
      condition,
      units,
      failures: lives.reduce((n, l) => n + (l.failed ? (l.count ?? 1) : 0), 0),
      steps: kaplanMeier(lives).filter((s) => s.time <= shownTo),
      shownTo,
      atRisk: months.map((month, i) => ({ month, units: counts[i]! })),
      coverDays,
    };
  });
  return { family, asOf, groups };
}

/** The oldest age at which at least so many are at risk. */
function oldestWith(lives: readonly LifeCount[], enough: number): number {
  let seen = 0;
  for (const l of [...lives].sort((a, b) => b.time - a.time)) {
    seen += l.count ?? 1;
    if (seen >= enough) return l.time;
  }
  return 0;
}

/** The ship month that departs most from what all of them together lead to expect, if any does. */
export function standsOut(cohorts: readonly Cohort[]): Omit<StandsOut, "lot"> | null {
  const hazard = new Map<number, { d: number; n: number }>();
  for (const cell of cohorts.flatMap((c) => c.cells)) {
    const h = hazard.get(cell.month) ?? { d: 0, n: 0 };
    hazard.set(cell.month, { d: h.d + cell.failed, n: h.n + cell.atRisk });
  }
  const expected = cohorts.map((c) =>
    c.cells.reduce((sum, cell) => {
      const h = hazard.get(cell.month)!;
      return sum + (h.n > 0 ? (cell.atRisk * h.d) / h.n : 0);
    }, 0),
  );
  const failed = cohorts.map((c) => c.cells.reduce((n, cell) => n + cell.failed, 0));
  const tested = departing(expected, failed);
  let at = -1;
  tested.forEach((t, i) => {
    if (t.flagged && (at < 0 || t.p < tested[at]!.p)) at = i;
  });
  return at < 0 ? null : { month: cohorts[at]!.month, failures: failed[at]!, expected: expected[at]! };
}

/** The twelve months that the triangle shows, oldest first: the month of the as-of day is the last. */
export function monthsShown(asOf: Day): string[] {
  const months = [asOf.slice(0, 7)];
  while (months.length < 12) months.unshift(addDays(`${months[0]}-01`, -1).slice(0, 7));
  return months;
}
