import { expect, test } from "vitest";
import { departing } from "@/lib/reliability/departure";
import { rateOf } from "@/lib/reliability/intervals";
import { kaplanMeier, type LifeCount } from "@/lib/reliability/survival";

// Simulation with a known truth, seeded: what is called 95% must hold the truth about that often.
// A linear congruential sequence (the constants are textbook figures, from memory): enough for drawing lives.
function seeded(seed: number) {
  let s = seed >>> 0;
  return () => {
    s = (Math.imul(s, 1664525) + 1013904223) >>> 0;
    return (s + 0.5) / 4294967296;
  };
}

test("95% limits of rate and of share working hold the truth in 93 to 97 of 100 of 2,000 histories", () => {
  const random = seeded(20261112);
  const rate = 0.2;
  const at = 1.5;
  const truth = Math.exp(-rate * at);
  let [rateHeld, shareHeld] = [0, 0];
  for (let run = 0; run < 2000; run++) {
    const lives: LifeCount[] = Array.from({ length: 200 }, () => {
      const fails = -Math.log(1 - random()) / rate;
      const leaves = 0.5 + 2.5 * random();
      return { time: Math.min(fails, leaves), failed: fails <= leaves };
    });
    const failures = lives.filter((l) => l.failed).length;
    const limits = rateOf(
      failures,
      lives.reduce((n, l) => n + l.time, 0),
    )!;
    if (limits.lo <= rate && rate <= limits.hi) rateHeld += 1;
    const step = kaplanMeier(lives)
      .filter((s) => s.time <= at)
      .at(-1)!;
    if (step.lo! <= truth && truth <= step.hi!) shareHeld += 1;
  }
  for (const held of [rateHeld, shareHeld]) {
    expect(held / 2000).toBeGreaterThanOrEqual(0.93);
    expect(held / 2000).toBeLessThanOrEqual(0.97);
  }
});

test("a planted bad lot is found, and clean ones are flagged no more often than said", () => {
  const random = seeded(7);
  const draw = (mean: number) => {
    // A Poisson count by counting exponential gaps.
    let [n, t] = [0, -Math.log(1 - random())];
    while (t < mean) [n, t] = [n + 1, t - Math.log(1 - random())];
    return n;
  };
  const expected = Array.from({ length: 12 }, (_, i) => 3 + i / 2);
  const runs = 400;
  let [found, falsely] = [0, 0];
  for (let run = 0; run < runs; run++) {
    const clean = departing(expected, expected.map(draw));
    if (clean.some((d) => d.flagged)) falsely += 1;
    const planted = departing(
      expected,
      expected.map((e, i) => draw(i === 4 ? 5 * e : e)),
    );
    if (planted[4]!.flagged) found += 1;
  }
  expect(falsely / runs).toBeLessThanOrEqual(0.05 + 2 * Math.sqrt((0.05 * 0.95) / runs));
  expect(found / runs).toBeGreaterThan(0.9);
});
