import fc from "fast-check";
import { expect, test } from "vitest";
import { byAge, DAYS_PER_YEAR, seen } from "@/lib/reliability/exposure";
import { rateOf } from "@/lib/reliability/intervals";
import { lifeTable, monthOfService, triangle } from "@/lib/reliability/triangle";
import { near, reference } from "./reference";

// Constructed so that every rule of counting can be checked by hand; totals and limits of R 4.2.2.
test("twelve units to exposure, failures and rates (REF-EXPOSURE-12)", () => {
  const of = reference("REF-EXPOSURE-12");
  const u = of.input.units;
  const lives = u.serial.map((_: string, i: number) =>
    seen(
      {
        start: u.start[i],
        coverEnd: u.coverage_end[i],
        lastKnownGood: u.last_known_good[i],
        confirmedOn: u.verdict[i] === "confirmed" ? u.failed_on[i] : null,
      },
      of.input.analysis_date,
    ),
  ) as ReturnType<typeof seen>[];
  expect(lives.map((l) => l.days)).toEqual(of.expected.per_unit.exposure_days);
  expect(lives.map((l) => l.failed)).toEqual(of.expected.per_unit.counts_as_failure);
  expect(lives.map((l) => l.deadOnArrival)).toEqual(of.expected.per_unit.dead_on_arrival);
  const table = of.expected.table;
  of.expected.totals.model.forEach((model: string, m: number) => {
    const own = lives.filter((_, i) => u.model[i] === model);
    const steps = byAge(own, of.input.age_step_days);
    const want = table.model
      .map((_: string, i: number) => i)
      .filter((i: number) => table.model[i] === model)
      .map((i: number) => ({
        step: table.age_step[i],
        exposureDays: table.exposure_days[i],
        failures: table.failures[i],
      }));
    expect(steps).toEqual(want);
    const days = own.reduce((n, l) => n + l.days, 0);
    expect(days).toBe(of.expected.totals.exposure_days[m]);
    const rate = rateOf(own.filter((l) => l.failed).length, days / DAYS_PER_YEAR)!;
    near(rate.rate, of.expected.totals.rate[m], of, "rate");
    near(rate.lo, of.expected.totals.lo[m], of, "lo");
    near(rate.hi, of.expected.totals.hi[m], of, "hi");
  });
});

test("merging groups sums exposure and failures, whatever the step", () => {
  const lives = fc.array(
    fc.record({ days: fc.integer({ min: 0, max: 800 }), failed: fc.boolean() }).map((l) => ({
      ...l,
      failed: l.failed && l.days > 0,
      deadOnArrival: false,
    })),
    { maxLength: 60 },
  );
  fc.assert(
    fc.property(lives, lives, fc.integer({ min: 1, max: 90 }), (a, b, step) => {
      const sum = (list: { exposureDays: number; failures: number }[]) =>
        list.reduce((n, s) => [n[0]! + s.exposureDays, n[1]! + s.failures], [0, 0]);
      const [x, y, both] = [sum(byAge(a, step)), sum(byAge(b, step)), sum(byAge([...a, ...b], step))];
      expect(both).toEqual([x[0]! + y[0]!, x[1]! + y[1]!]);
      expect(both[0]).toBe([...a, ...b].reduce((n, l) => n + l.days, 0));
    }),
  );
});

test("a future ship day, an as-of day before it and a cover that never began give no exposure", () => {
  expect(seen({ start: "2027-01-01", coverEnd: "2030-01-01" }, "2026-11-12")).toEqual({
    days: 0,
    failed: false,
    deadOnArrival: false,
  });
  expect(
    seen({ start: "2026-01-01", coverEnd: "2025-12-01", confirmedOn: "2026-01-01" }, "2026-11-12"),
  ).toEqual({ days: 0, failed: false, deadOnArrival: false });
});

test("ship month against months in service with known quantities (REF-RUNOFF-SHIP; R 4.2.2)", () => {
  const of = reference("REF-RUNOFF-SHIP");
  const got = lifeTable(of.input.shipped, of.input.failures);
  expect(got.failed).toEqual(of.expected.month_failures);
  expect(got.atRisk).toEqual(of.expected.month_at_risk);
  got.hazard.forEach((h, i) => near(h, of.expected.month_hazard[i], of, `hazard ${i}`));
  got.cumulative.forEach((c, i) => near(c, of.expected.cumulative_fraction[i], of, `share ${i}`));
  got.toCome.forEach((c, i) => near(c, of.expected.expected_still_to_come[i], of, `to come ${i}`));
});

test("the triangle counts those at risk at a month's begin and marks months still running", () => {
  const rows = [
    { month: "2026-06", ended: 1, failed: 2, count: 2 },
    { month: "2026-06", ended: 3, failed: 1, count: 1 },
    { month: "2026-06", ended: 6, failed: 0, count: 97 },
    { month: "2026-11", ended: 1, failed: 0, count: 5 },
  ];
  const [june, november] = triangle(rows, "2026-11-12", 12);
  expect(june!.units).toBe(100);
  expect(june!.cells.map((c) => [c.atRisk, c.failed])).toEqual([
    [100, 2],
    [98, 0],
    [98, 1],
    [97, 0],
    [97, 0],
    [97, 0],
  ]);
  expect(june!.cells[0]!.per1000).toBe(20);
  // Shipped on 30 June, a unit ends its fourth month on 29 October, its fifth only after 12 November.
  expect(june!.cells.map((c) => c.running)).toEqual([false, false, false, false, true, true]);
  expect(november!.cells).toHaveLength(1);
  expect(november!.cells[0]!.running).toBe(true);
  expect([0, 1, 30, 31].map(monthOfService)).toEqual([0, 1, 1, 2]);
});
