import fc from "fast-check";
import { expect, test } from "vitest";
import { binomialTail, departing, falseDiscovery } from "@/lib/reliability/departure";
import { near, reference } from "./reference";

// Benjamini and Hochberg 1995, JRSS B 57:289, section 4 (p-values and "four" as published), and ties.
test.each(["REF-BH-1995", "REF-BH-TIES"])("false discovery %s", (id) => {
  const of = reference(id);
  const got = falseDiscovery(of.input.p);
  got.forEach((p, i) => near(p, of.expected.adjusted[i], of, `adjusted ${i}`));
  expect(got.filter((p) => p <= of.input.q)).toHaveLength(of.expected.n_rejected);
});

test("lots against their expected failures (constructed; R 4.2.2)", () => {
  const of = reference("REF-LOT");
  const got = departing(of.input.expected, of.input.failed, of.input.q);
  got.forEach((lot, i) => {
    near(lot.p, of.expected.p_conditional[i], of, `p ${i}`);
    near(lot.adjusted, of.expected.bh_conditional[i], of, `adjusted ${i}`);
  });
  expect(of.input.lot.filter((_: string, i: number) => got[i]!.flagged)).toEqual(of.expected.flagged);
});

test("a binomial tail and its complement make one", () => {
  fc.assert(
    fc.property(
      fc.integer({ min: 1, max: 400 }),
      fc.double({ min: 0.001, max: 0.999, noNaN: true }),
      fc.nat(400),
      (n, p, d) => {
        const k = Math.min(d, n);
        expect(binomialTail(k, n, p) + binomialTail(n - k + 1, n, 1 - p)).toBeCloseTo(1, 9);
      },
    ),
  );
  expect(binomialTail(0, 5, 0.5)).toBe(1);
  expect(binomialTail(6, 5, 0.5)).toBe(0);
  expect(binomialTail(2, 5, 0)).toBe(0);
});

test("one failure alone flags nothing, and no failures anywhere leave nothing to say", () => {
  expect(departing([1e-9, 5], [1, 0]).map((d) => d.flagged)).toEqual([false, false]);
  expect(departing([0, 0], [0, 0]).map((d) => d.p)).toEqual([1, 1]);
});
