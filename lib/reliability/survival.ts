import { normalTwoSided } from "./intervals";

/** Lives of one age: how many failed and how many went out of view at it, having come into view at `entry`. */
export type LifeCount = { entry?: number; time: number; failed: boolean; count?: number };

export type SurvivalStep = {
  time: number;
  atRisk: number;
  failed: number;
  /** Went out of view at this very age. */
  censored: number;
  survival: number;
  /** Greenwood. Null where the curve is at zero. */
  se: number | null;
  lo: number | null;
  hi: number | null;
  /** Nelson-Aalen. */
  hazard: number;
  hazardSe: number;
};

/**
 * Kaplan-Meier with Greenwood's error, log-log limits and the Nelson-Aalen sum, one step per age
 * with a failure. At equal ages failures come before those that go out of view. A life is at risk at
 * age t when entry < t <= time, so that refurbished units may come into view late.
 */
export function kaplanMeier(lives: readonly LifeCount[], confidence = 0.95): SurvivalStep[] {
  const z = normalTwoSided(confidence);
  const failedAt = tally(lives.filter((l) => l.failed));
  const exits = sums(lives.map((l) => ({ at: l.time, n: l.count ?? 1 })));
  const entries = sums(lives.map((l) => ({ at: l.entry ?? 0, n: l.count ?? 1 })));
  const lost = tally(lives.filter((l) => !l.failed));
  const times = [...failedAt.keys()].sort((a, b) => a - b);
  const steps: SurvivalStep[] = [];
  let survival = 1;
  let greenwood = 0;
  let hazard = 0;
  let hazardVar = 0;
  for (const time of times) {
    const failed = failedAt.get(time)!;
    const atRisk = entries.before(time) - exits.before(time);
    survival *= 1 - failed / atRisk;
    greenwood += failed / (atRisk * (atRisk - failed));
    hazard += failed / atRisk;
    hazardVar += failed / (atRisk * atRisk);
    const dead = survival <= 0;
    const spread = (z * Math.sqrt(greenwood)) / Math.log(survival);
    steps.push({
      time,
      atRisk,
      failed,
      censored: lost.get(time) ?? 0,
      survival,
      se: dead ? null : survival * Math.sqrt(greenwood),
      lo: dead ? null : survival ** Math.exp(-spread),
      hi: dead ? null : survival ** Math.exp(spread),
      hazard,
      hazardSe: Math.sqrt(hazardVar),
    });
  }
  return steps;
}

/** How many lives are at risk just at each of the given ages. */
export function atRiskAt(lives: readonly LifeCount[], ages: readonly number[]): number[] {
  const exits = sums(lives.map((l) => ({ at: l.time, n: l.count ?? 1 })));
  const entries = sums(lives.map((l) => ({ at: l.entry ?? 0, n: l.count ?? 1 })));
  // At age zero everybody who enters there is at risk.
  return ages.map((age) => (age === 0 ? entries.upTo(0) : entries.before(age) - exits.before(age)));
}

function tally(lives: readonly LifeCount[]): Map<number, number> {
  const found = new Map<number, number>();
  for (const l of lives) found.set(l.time, (found.get(l.time) ?? 0) + (l.count ?? 1));
  return found;
}

/** Running sums by place: how many lie before, or at and before, a point. */
function sums(points: readonly { at: number; n: number }[]) {
  const sorted = [...points].sort((a, b) => a.at - b.at);
  const at = sorted.map((p) => p.at);
  const total = [0];
  for (const p of sorted) total.push(total.at(-1)! + p.n);
  const find = (x: number, inclusive: boolean) => {
    let [lo, hi] = [0, at.length];
    while (lo < hi) {
      const mid = (lo + hi) >> 1;
      if (at[mid]! < x || (inclusive && at[mid] === x)) lo = mid + 1;
      else hi = mid;
    }
    return total[lo]!;
  };
  return { before: (x: number) => find(x, false), upTo: (x: number) => find(x, true) };
}
