import fc from "fast-check";
import { expect, test } from "vitest";
import { atRiskAt, kaplanMeier, type LifeCount } from "@/lib/reliability/survival";
import { near, reference } from "./reference";

const livesOf = (input: { time: number[]; failed: number[]; entry?: number[]; weight?: number[] }) =>
  input.time.map((time, i): LifeCount => ({
    time,
    failed: input.failed[i] === 1,
    entry: input.entry?.[i] ?? 0,
    count: input.weight?.[i] ?? 1,
  }));

// Sources beside each id: Freireich et al. 1963, Blood 21:699 (6MP, placebo); NIST e-Handbook 8.4.1.3;
// constructed cases computed with R 4.2.2 survival 3.5-3 and again with an independent Python program.
test.each([
  "REF-KM-6MP",
  "REF-KM-PLACEBO",
  "REF-KM-NIST",
  "REF-KM-GROUPED",
  "REF-KM-TRUNC",
  "REF-KM-TRUNC-GAP",
])("Kaplan-Meier %s", (id) => {
  const of = reference(id);
  const got = kaplanMeier(livesOf(of.input), of.input.confidence);
  expect(got.map((s) => s.time)).toEqual(of.expected.time);
  expect(got.map((s) => s.atRisk)).toEqual(of.expected.at_risk);
  expect(got.map((s) => s.failed)).toEqual(of.expected.failed);
  expect(got.map((s) => s.censored)).toEqual(of.expected.censored);
  got.forEach((s, i) => {
    near(s.survival, of.expected.S[i], of, `S ${i}`);
    near(s.se, of.expected.se_greenwood[i], of, `se ${i}`);
    near(s.lo, of.expected.loglog_lo[i], of, `lo ${i}`);
    near(s.hi, of.expected.loglog_hi[i], of, `hi ${i}`);
    near(s.hazard, of.expected.nelson_aalen[i], of, `H ${i}`);
    near(s.hazardSe, of.expected.nelson_aalen_se[i], of, `H se ${i}`);
  });
});

const life = fc.record({
  time: fc.integer({ min: 1, max: 60 }),
  failed: fc.boolean(),
  count: fc.integer({ min: 1, max: 5 }),
});

test("without lives out of view the curve is the empirical one", () => {
  fc.assert(
    fc.property(fc.array(fc.integer({ min: 1, max: 40 }), { minLength: 1, maxLength: 60 }), (times) => {
      const steps = kaplanMeier(times.map((time) => ({ time, failed: true })));
      for (const s of steps)
        expect(s.survival).toBeCloseTo(times.filter((t) => t > s.time).length / times.length, 10);
    }),
  );
});

test("the order of rows and their grouping do not matter", () => {
  fc.assert(
    fc.property(fc.array(life, { minLength: 1, maxLength: 40 }), (lives) => {
      const single = lives.flatMap((l) => Array.from({ length: l.count }, () => ({ ...l, count: 1 })));
      const again = kaplanMeier(single.reverse());
      kaplanMeier(lives).forEach((s, i) => {
        expect(again[i]!.atRisk).toBe(s.atRisk);
        expect(again[i]!.survival).toBeCloseTo(s.survival, 12);
      });
    }),
  );
});

test("the curve stays within its limits and only falls", () => {
  fc.assert(
    fc.property(fc.array(life, { minLength: 1, maxLength: 40 }), (lives) => {
      let before = 1;
      for (const s of kaplanMeier(lives)) {
        expect(s.survival).toBeLessThanOrEqual(before);
        before = s.survival;
        if (s.lo === null) continue;
        expect(s.lo).toBeLessThanOrEqual(s.survival + 1e-12);
        expect(s.hi).toBeGreaterThanOrEqual(s.survival - 1e-12);
      }
    }),
  );
});

test("numbers at risk: all at age zero, none past the oldest", () => {
  const lives = [
    { time: 10, failed: true },
    { time: 20, failed: false, count: 3 },
  ];
  expect(atRiskAt(lives, [0, 10, 11, 20, 21])).toEqual([4, 4, 3, 3, 0]);
});
