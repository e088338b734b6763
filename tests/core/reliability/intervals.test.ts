import fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
  chiSquareQuantile,
  exactShare,
  exposurePerFailure,
  poissonLimits,
  rateOf,
  wilson,
} from "@/lib/reliability/intervals";
import { near, reference } from "./reference";

describe("exact Poisson limits (Garwood 1936, Biometrika 28:437; values of R 4.2.2 and SciPy)", () => {
  const of = reference("REF-POIS-TABLE");
  const tables = of.expected.tables as { confidence: number; n: number[]; lo: number[]; hi: number[] }[];
  test.each(tables)("table at $confidence", ({ confidence, n, lo, hi }) => {
    n.forEach((count, i) => {
      const got = poissonLimits(count, confidence);
      near(got.lo, lo[i]!, of, `lo of ${count}`);
      near(got.hi, hi[i]!, of, `hi of ${count}`);
    });
  });
});

test("chi-square quantiles from 1 to 2,000,000 degrees of freedom (mathematical fact; R 4.2.2)", () => {
  const of = reference("REF-CHISQ-Q");
  of.input.p.forEach((p: number, i: number) =>
    of.input.df.forEach((df: number, j: number) => {
      // Limits are never asked for at one failure in a million million: those need relative digits
      // of a number near 1e-24, which no count can show.
      if (p < 1e-6 && df < 10) return;
      near(chiSquareQuantile(p, df), of.expected.quantile[i][j], of, `p ${p} df ${df}`);
    }),
  );
});

test.each([0, 1, 500, 1_000, 10_000, 1_000_000])("limits of %d hold their own probability", (count) => {
  const { lo, hi } = poissonLimits(count);
  expect(lo).toBeLessThanOrEqual(count);
  expect(hi).toBeGreaterThan(count);
  // Wilson-Hilferty cube-root approximation: an independent formula, good to 0.1% from 500 on (textbook, from memory).
  if (count >= 500) {
    const z = 1.959963984540054;
    const wh = (n: number, s: number) => n * (1 - 1 / (9 * n) + (s * z) / (3 * Math.sqrt(n))) ** 3;
    expect(lo / wh(count, -1)).toBeCloseTo(1, 4);
    expect(hi / wh(count + 1, 1)).toBeCloseTo(1, 4);
  }
});

test("shares: Wilson (1927), exact (Clopper and Pearson 1934); NIST e-Handbook 7.2.4.1, 7.2.4.2", () => {
  const of = reference("REF-PROP");
  of.input.x.forEach((x: number, i: number) => {
    const n = of.input.n[i];
    for (const [name, limits, confidence] of [
      ["wilson95", wilson, 0.95],
      ["exact95", exactShare, 0.95],
      ["wilson90", wilson, 0.9],
      ["exact90", exactShare, 0.9],
    ] as const) {
      const got = limits(x, n, confidence)!;
      near(got.lo, of.expected[name][i][0], of, `${name} lo ${x}/${n}`);
      near(got.hi, of.expected[name][i][1], of, `${name} hi ${x}/${n}`);
    }
  });
  expect(wilson(0, 0)).toBeNull();
  expect(exactShare(0, 0)).toBeNull();
});

test("exposure per failure (NIST e-Handbook 8.4.5.1)", () => {
  const of = reference("REF-MTBF-NIST");
  const got = exposurePerFailure(of.input.failures, of.input.total_time, of.input.confidence)!;
  near(got.mean, of.expected.mtbf, of, "mean");
  near(got.lo, of.expected.lo, of, "lo");
  near(got.hi, of.expected.hi, of, "hi");
});

test("without a failure there is a lower bound and no estimate (NIST e-Handbook 8.4.5.1)", () => {
  const of = reference("REF-MTBF-ZERO");
  of.input.total_time.forEach((time: number, i: number) => {
    const got = exposurePerFailure(0, time, of.input.confidence[i])!;
    near(got.lo, of.expected.mtbf_lower[i], of, `${time}`);
    expect(got.mean).toBeNull();
    expect(got.hi).toBeNull();
  });
});

test("yearly rates of a published fleet table (open data, 2018; computed with R 4.2.2)", () => {
  const of = reference("REF-AFR-FLEET-2018");
  of.input.failures.forEach((d: number, i: number) => {
    const got = rateOf(d, of.input.exposure_days[i] / of.input.days_per_year)!;
    near(got.exposure, of.expected.exposure_years[i], of, `years ${i}`);
    near(got.rate, of.expected.rate[i], of, `rate ${i}`);
    near(got.lo, of.expected.lo[i], of, `lo ${i}`);
    near(got.hi, of.expected.hi[i], of, `hi ${i}`);
  });
});

test("no exposure, no rate", () => {
  expect(rateOf(0, 0)).toBeNull();
  expect(rateOf(3, 0)).toBeNull();
  expect(rateOf(0, Number.NaN)).toBeNull();
});

test("a rate and its limits scale with the unit of time", () => {
  fc.assert(
    fc.property(
      fc.integer({ min: 0, max: 5000 }),
      fc.double({ min: 0.1, max: 1e6, noNaN: true }),
      fc.double({ min: 0.01, max: 1000, noNaN: true }),
      (d, t, by) => {
        const [a, b] = [rateOf(d, t)!, rateOf(d, t * by)!];
        for (const k of ["rate", "lo", "hi"] as const)
          expect(Math.abs(b[k] * by - a[k])).toBeLessThanOrEqual(1e-9 * (a[k] + 1e-9));
      },
    ),
  );
});
