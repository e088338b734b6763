import fc from "fast-check";
import { expect, test } from "vitest";
import {
  apart,
  grouped,
  logAxis,
  logShare,
  monthAxis,
  shareAxis,
  years,
} from "@/components/reliability/axes";

const positive = fc.double({ min: 1e-3, max: 1e5, noNaN: true });

test("every rate and upper limit lies on the axis, and its labels never crowd", () => {
  fc.assert(
    fc.property(fc.array(positive, { minLength: 1, maxLength: 20 }), (rates) => {
      const axis = logAxis(
        rates,
        rates.flatMap((r) => [r / 50, r * 3]),
      );
      expect(axis.from).toBeLessThanOrEqual(Math.min(...rates));
      expect(axis.to).toBeGreaterThanOrEqual(3 * Math.max(...rates));
      expect(axis.ticks.length).toBeGreaterThanOrEqual(2);
      expect(axis.ticks.length).toBeLessThanOrEqual(10);
      for (const r of rates) expect(logShare(r, axis)).toBeGreaterThanOrEqual(0);
    }),
  );
});

test("one failure in a small group does not squeeze the others", () => {
  expect(logAxis([1, 3, 0.5], [0.001, 2, 4, 5]).from).toBe(0.1);
  expect(logAxis([], [])).toMatchObject({ from: 0.1, to: 10 });
  expect(logAxis([0, 0], [0, 8]).to).toBe(10);
});

test("a log axis puts equal ratios at equal distances", () => {
  const axis = { from: 0.1, to: 10 };
  expect(logShare(0.1, axis)).toBe(0);
  expect(logShare(1, axis)).toBeCloseTo(0.5, 12);
  expect(logShare(10, axis)).toBe(1);
  expect(logShare(1e-9, axis)).toBe(0);
});

test("a share axis ends at one and holds the lowest band", () => {
  expect(shareAxis(0.82)).toEqual({ from: 0.8, ticks: [0.8, 0.85, 0.9, 0.95, 1] });
  for (const least of [0, 0.1, 0.37, 0.66, 0.9, 0.985, 1]) {
    const axis = shareAxis(least);
    expect(axis.from).toBeLessThanOrEqual(least === 1 ? 0.98 + 1e-9 : least);
    expect(axis.ticks.at(-1)).toBe(1);
    expect(axis.ticks[0]).toBeCloseTo(axis.from, 2);
  }
});

test("months are ticked evenly and hold the oldest age", () => {
  expect(monthAxis(45)).toMatchObject({ to: 48 });
  expect(monthAxis(0).ticks).toEqual([0, 2]);
  expect(monthAxis(90).ticks[1]).toBe(12);
});

test("labels that would meet are moved apart, in their order", () => {
  expect(apart([100, 102], 15)).toEqual([100, 115]);
  expect(apart([102, 100], 15)).toEqual([115, 100]);
  expect(apart([20, 90], 15)).toEqual([20, 90]);
});

test("figures are grouped by a space that does not break", () => {
  expect(grouped(47796)).toBe("47\u00a0796");
  expect([years(0), years(9.94), years(44.2)]).toEqual(["0.0", "9.9", "44"]);
});
