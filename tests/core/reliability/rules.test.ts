import { expect, test } from "vitest";
import { monthsShown, ratesFrom, survivalFrom } from "@/lib/reliability/rules";
import { RatesFilter, type LifeSums } from "@/lib/reliability/schema";
import { per100, percent } from "@/lib/reliability/words";

const asOf = "2026-11-12";
const sums = (more: Partial<LifeSums>): LifeSums => ({
  family: "drive",
  modelCode: "VD-8",
  modelName: "Vantry drive",
  condition: "new",
  units: 100,
  days: 365.25 * 1000,
  failures: 10,
  inView: 80,
  open: 0,
  judged: 12,
  noFaultFound: 2,
  arrived: 100,
  arrivedDead: 0,
  coverDays: 1096,
  ...more,
});
const filter = RatesFilter.parse({});

test("models of one family are merged by their sums, and ordered by rate", () => {
  const view = ratesFrom(
    [
      sums({}),
      sums({ modelCode: "VD-16", failures: 30 }),
      sums({ family: "memory", modelCode: "OM-32", failures: 3, days: 365.25 * 10_000 }),
    ],
    filter,
    asOf,
  );
  expect(view.rows.map((r) => [r.label, r.failures, r.unitYears])).toEqual([
    ["Drive", 40, 2000],
    ["Memory", 3, 10_000],
  ]);
  expect(view.rows[0]!.rate).toBeCloseTo(0.02, 12);
  expect(view.all).toMatchObject({ failures: 43, unitYears: 12_000 });
  expect(view.rows[1]!.small).toBe(true);
});

test("new and refurbished are pooled only where one of them is missing", () => {
  const view = ratesFrom(
    [
      sums({ failures: 30 }),
      sums({ condition: "refurbished", failures: 75 }),
      sums({ family: "fan", condition: "refurbished", failures: 9 }),
    ],
    filter,
    asOf,
  );
  expect(view.rows.map((r) => r.label)).toEqual(["Drive, refurbished", "Drive, new", "Fan"]);
  // 75 in 1000 years is 5.9 to 9.4 a hundred, 30 is 2.0 to 4.3: limits that do not meet.
  expect(view.firm[0]).toBe(
    "Drive: refurbished ones fail more often than new ones; their intervals do not meet.",
  );
});

test("intervals that meet are not called a difference", () => {
  const view = ratesFrom([sums({}), sums({ condition: "refurbished", failures: 14 })], filter, asOf);
  expect(view.firm.join(" ")).not.toContain("more often");
});

test("what stands above and below the figure for all parts is named", () => {
  const view = ratesFrom(
    [sums({ failures: 80 }), sums({ family: "memory", failures: 10 }), sums({ family: "fan", failures: 45 })],
    filter,
    asOf,
  );
  expect(view.firm).toEqual(["Above the figure for all parts: drive.", "Below it: memory."]);
  // 41 in 1000 is 2.94 to 5.56, 8 in 500 is 0.69 to 3.15; together 3.27.
  const below = ratesFrom(
    [sums({ failures: 41 }), sums({ family: "memory", failures: 8, days: 365.25 * 500 })],
    filter,
    asOf,
  );
  expect(below.firm).toEqual(["Below the figure for all parts: memory."]);
});

test("a small sample says what it fits, and when to ask again", () => {
  const one = (more: Partial<LifeSums>) => ratesFrom([sums(more)], filter, asOf).notYet[0];
  // 44 years seen, 156 to go at 250 units in service: 228 days after 12 November 2026.
  expect(one({ failures: 1, days: 365.25 * 44, inView: 250 })).toBe(
    "Drive: one failure in 44 unit-years fits anything from 0.06 to 12.7. Ask again after 200 unit-years, about June 2027.",
  );
  expect(one({ failures: 0, days: 365.25 * 44, inView: 0 })).toContain(
    "means at most 8.38, not none. None is in service under cover now",
  );
  expect(one({ failures: 3 })).toContain("too few failures to place the rate");
  expect(one({ failures: 0, days: 0 })).toBe("Drive: no time in service yet, so there is no rate.");
  expect(one({ failures: 1, days: 365.25, inView: 1 })).toContain("over ten years away");
});

test("more small samples than fit are counted, not listed", () => {
  const families = ["drive", "fan", "memory", "board", "riser"] as const;
  const view = ratesFrom(
    families.map((family) => sums({ family, failures: 1 })),
    filter,
    asOf,
  );
  expect(view.notYet).toHaveLength(4);
  expect(view.notYet[3]).toBe("Two more rows are marked †.");
});

test("a curve ends where fewer than ten are at risk", () => {
  const view = survivalFrom("drive", asOf, [
    {
      condition: "new",
      coverDays: 1096,
      lives: [
        { time: 100, failed: true, count: 2 },
        { time: 400, failed: false, count: 11 },
        { time: 700, failed: true, count: 4 },
      ],
    },
  ]);
  const [group] = view.groups;
  expect(group).toMatchObject({ units: 17, failures: 6, shownTo: 400 });
  expect(group!.steps.map((s) => s.time)).toEqual([100]);
  expect(group!.atRisk).toEqual([
    { month: 0, units: 17 },
    { month: 6, units: 15 },
    { month: 12, units: 15 },
  ]);
});

test("the triangle shows twelve months up to this one", () => {
  const shown = monthsShown("2026-11-12");
  expect([shown.length, shown[0], shown.at(-1)]).toEqual([12, "2025-12", "2026-11"]);
  expect(monthsShown("2026-01-31")[0]).toBe("2025-02");
});

test("figures in words never say nothing where there is something", () => {
  expect([0.00001, 0.0012, 0.0751, 0.127, 1.4].map(per100)).toEqual(["<0.01", "0.12", "7.51", "12.7", "140"]);
  expect([0, 0.0004, 0.042, 0.38].map(percent)).toEqual(["0%", "under 0.1%", "4.2%", "38%"]);
});
