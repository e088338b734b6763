import fc from "fast-check";
import { renderToStaticMarkup } from "react-dom/server";
import { expect, test } from "vitest";
import { RateFigure } from "@/components/reliability/rate-figure";
import { SurvivalFigure } from "@/components/reliability/survival-figure";
import { RateTable, SurvivalTable, TriangleTable } from "@/components/reliability/tables";
import { TriangleFigure } from "@/components/reliability/triangle-figure";
import { CONDITIONS, FAMILIES } from "@/lib/ledger/schema";
import { monthsShown, ratesFrom, standsOut, survivalFrom } from "@/lib/reliability/rules";
import { RatesFilter, type LifeSums } from "@/lib/reliability/schema";
import { ratesSheet, survivalSheet, triangleSheet } from "@/lib/reliability/sheet";
import { triangle } from "@/lib/reliability/triangle";

const asOf = "2026-11-12";
const filter = RatesFilter.parse({});
const sums = fc.array(
  fc.record<LifeSums>({
    family: fc.constantFrom(...FAMILIES),
    modelCode: fc.constantFrom("A", "B"),
    modelName: fc.constant("=cmd"),
    condition: fc.constantFrom(...CONDITIONS),
    units: fc.nat(5000),
    days: fc.oneof(fc.constant(0), fc.nat(3_000_000)),
    failures: fc.nat(2000),
    inView: fc.nat(5000),
    open: fc.nat(20),
    judged: fc.integer({ min: 10, max: 40 }),
    noFaultFound: fc.nat(10),
    arrived: fc.integer({ min: 10, max: 40 }),
    arrivedDead: fc.nat(10),
    coverDays: fc.option(fc.nat(2000)),
  }),
  { maxLength: 12 },
);
const whole = (markup: string) => expect(markup).not.toMatch(/NaN|Infinity|undefined|null/);

test("figure 1 and its table draw whatever the ledger holds", () => {
  fc.assert(
    fc.property(sums, fc.constantFrom("family" as const, "model" as const), (found, by) => {
      const view = ratesFrom(found, { ...filter, by }, asOf);
      whole(renderToStaticMarkup(<RateFigure view={view} by={by} />));
      whole(renderToStaticMarkup(<RateTable rows={view.rows} all={view.all} />));
      whole([...view.firm, ...view.notYet].join(" "));
    }),
    { numRuns: 60 },
  );
});

const lives = fc.array(
  fc.record({
    time: fc.integer({ min: 1, max: 2500 }),
    failed: fc.boolean(),
    count: fc.integer({ min: 1, max: 9 }),
  }),
  { minLength: 1, maxLength: 40 },
);

test("figure 2 draws one unit, all failed, none failed and two groups", () => {
  fc.assert(
    fc.property(lives, lives, fc.option(fc.nat(2000)), (a, b, coverDays) => {
      for (const groups of [
        [{ condition: "new" as const, lives: a, coverDays }],
        [
          { condition: "new" as const, lives: a, coverDays },
          { condition: "refurbished" as const, lives: b, coverDays: null },
        ],
      ]) {
        const view = survivalFrom("drive", asOf, groups);
        whole(renderToStaticMarkup(<SurvivalFigure view={view} />));
        whole(renderToStaticMarkup(<SurvivalTable view={view} />));
      }
    }),
    { numRuns: 60 },
  );
});

test("figure 3 shows a number in every cell, and says of a row of few units that it is one", () => {
  const cohorts = triangle(
    [
      { month: "2026-08", ended: 1, failed: 3, count: 3 },
      { month: "2026-08", ended: 3, failed: 0, count: 4 },
      { month: "2026-09", ended: 2, failed: 0, count: 4000 },
      { month: "2026-09", ended: 1, failed: 1, count: 1 },
    ],
    asOf,
    12,
  );
  const view = { family: "drive" as const, asOf, cohorts, standsOut: null };
  const markup = renderToStaticMarkup(<TriangleFigure view={view} months={monthsShown(asOf)} />);
  whole(markup);
  expect(markup).toContain("Aug 26 †");
  expect(markup).not.toContain("Sep 26 †");
  expect(markup).toContain(">429<");
  // One failure in four thousand is not nothing.
  expect(markup).toContain("&lt;1");
  whole(renderToStaticMarkup(<TriangleTable view={view} months={12} />));
  expect(standsOut(cohorts)?.month).toBe("2026-08");
});

test("a sheet keeps every digit, and what a table program would run is escaped", () => {
  const one: LifeSums = {
    family: "drive",
    modelCode: "VD-8",
    modelName: "=cmd",
    condition: "new",
    units: 3,
    days: 1000,
    failures: 1,
    inView: 2,
    open: 0,
    judged: 1,
    noFaultFound: 0,
    arrived: 0,
    arrivedDead: 0,
    coverDays: null,
  };
  const sheet = ratesSheet(ratesFrom([one], { ...filter, by: "model" }, asOf));
  const [head, row, all] = sheet.trim().split("\r\n");
  expect(head).toMatch(/^as_of,what,units,failures,unit_years,rate_per_unit_year/);
  expect(row).toContain(`"'=cmd, VD-8"`);
  expect(row).toContain(String(1000 / 365.25));
  expect(all).toContain("All parts");
  const curve = survivalFrom("drive", asOf, [
    { condition: "new", coverDays: null, lives: [{ time: 5, failed: true, count: 20 }] },
  ]);
  // All failed at once: the curve is at zero, and no limit is made up.
  expect(survivalSheet(curve).trim().split("\r\n")[1]).toBe("2026-11-12,drive,new,5,20,20,0,,,,1");
  expect(triangleSheet({ family: "drive", asOf, cohorts: [], standsOut: null }).trim()).toBe(
    "as_of,family,ship_month,units,month_in_service,at_risk,failed,still_running",
  );
});
