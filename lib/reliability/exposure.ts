import { daysBetween, earlierDay, type Day } from "../base/civil";

export const DAYS_PER_YEAR = 365.25;

/** What is known of one life: a unit in service, or a part in its slot, from a day on. */
export type LifeFacts = {
  start: Day;
  coverEnd: Day;
  /** Last day it was known good before it was lost to view: credited, removed, handed on. */
  lastKnownGood?: Day | null;
  /** Day of first report of the first fault that the bench has confirmed. */
  confirmedOn?: Day | null;
};

export type LifeSeen = { days: number; failed: boolean; deadOnArrival: boolean };

/**
 * Days under observation, (start, stop] in whole days. It stops at the earliest of the confirmed
 * failure, the end of cover, the last day known good and the as-of day. A failure after that counts
 * no more than the days after it: neither. One on day zero is dead on arrival, with no exposure.
 */
export function seen(life: LifeFacts, asOf: Day): LifeSeen {
  const known = life.lastKnownGood ?? asOf;
  const last = earlierDay(earlierDay(life.coverEnd, known), asOf);
  const confirmed = life.confirmedOn != null && life.confirmedOn <= last ? life.confirmedOn : null;
  const days = Math.max(0, daysBetween(life.start, confirmed ?? last));
  const dead = confirmed !== null && days === 0;
  return { days, failed: confirmed !== null && !dead, deadOnArrival: dead };
}

export type AgeStep = { step: number; exposureDays: number; failures: number };

/**
 * Exposure and failures by step of age, every step filled up to the longest life, so that the sum of
 * the cells is always the sum of the lives. A failure at age 30 with steps of 30 is in step 0: (0, 30].
 */
export function byAge(lives: readonly LifeSeen[], stepDays: number): AgeStep[] {
  const longest = Math.max(0, ...lives.map((l) => l.days));
  const steps: AgeStep[] = Array.from({ length: Math.ceil(longest / stepDays) }, (_, step) => ({
    step,
    exposureDays: 0,
    failures: 0,
  }));
  for (const life of lives) {
    for (const s of steps) {
      const from = s.step * stepDays;
      if (life.days <= from) break;
      s.exposureDays += Math.min(stepDays, life.days - from);
    }
    if (life.failed) steps[Math.ceil(life.days / stepDays) - 1]!.failures += 1;
  }
  return steps;
}
