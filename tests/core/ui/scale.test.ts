import fc from "fast-check";
import { describe, expect, it } from "vitest";
import {
  dayNumber,
  dayText,
  dayTicksOf,
  monthOf,
  percentOf,
  shortDay,
  spanOf,
  stretch,
  ticksOf,
  weekdayOf,
} from "@/components/ui/scale";
import { addDays, daysBetween } from "@/lib/base/civil";

const day = fc.integer({ min: -7_000, max: 40_000 }).map((n) => addDays("1990-01-01", n));

describe("days on a rule", () => {
  // Reference: temporal-polyfill, a general library for civil dates.
  it("counts days as the civil calendar does", () => {
    fc.assert(
      fc.property(day, day, (a, b) => {
        expect(dayNumber(b) - dayNumber(a)).toBe(daysBetween(a, b));
      }),
    );
  });

  it("says where a day stands, and keeps it on the rule", () => {
    const year = { from: "2026-01-01", to: "2027-01-01" };
    expect(percentOf("2026-01-01", year)).toBe(0);
    expect(percentOf("2027-01-01", year)).toBe(100);
    // 1 July is the 182nd day after 1 January in a common year: 181 of 365.
    expect(percentOf("2026-07-01", year)).toBeCloseTo((181 / 365) * 100, 3);
    expect(percentOf("2031-01-01", year)).toBe(100);
    expect(percentOf("2020-01-01", year)).toBe(0);
  });

  it("counts a stretch's last day whole", () => {
    const span = { from: "2026-01-01", to: "2026-01-11" };
    expect(stretch("2026-01-01", "2026-01-10", span)).toEqual({ left: 0, width: 100 });
    expect(stretch("2026-01-03", "2026-01-03", span)).toEqual({ left: 20, width: 10 });
  });

  it("draws nothing from a rule without length, rather than dividing by nothing", () => {
    expect(percentOf("2026-01-01", { from: "2026-01-01", to: "2026-01-01" })).toBe(0);
  });

  it("spans every day it was given, ends included", () => {
    fc.assert(
      fc.property(fc.array(day, { minLength: 1, maxLength: 8 }), (days) => {
        const span = spanOf(days);
        for (const d of days) {
          expect(d > span.from && d < span.to).toBe(true);
        }
      }),
    );
  });
});

describe("ticks of a few weeks", () => {
  it("mark each day, and each Monday by its date", () => {
    const ticks = dayTicksOf({ from: "2028-02-21", to: "2028-03-13" });
    expect(ticks).toHaveLength(21);
    expect(ticks.filter((t) => t.kind === "week").map((t) => t.label)).toEqual(["21 Feb", "28 Feb", "6 Mar"]);
  });

  it("leave days out on a long rule, and labels where they would run together", () => {
    const ticks = dayTicksOf({ from: "2026-01-05", to: "2026-04-06" });
    expect(ticks).toHaveLength(13);
    expect(ticks.filter((t) => t.label).map((t) => t.label)).toEqual(["5 Jan", "26 Jan", "16 Feb", "9 Mar"]);
  });

  // Reference: temporal-polyfill, and the UTC calendar of the language itself.
  it("know the day of the week as the civil calendar does", () => {
    const names = ["Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"];
    fc.assert(
      fc.property(fc.integer({ min: -20_000, max: 40_000 }), (n) => {
        const d = addDays("1970-01-01", n);
        expect(dayText(n)).toBe(d);
        expect(weekdayOf(d)).toBe(names[new Date(`${d}T00:00:00Z`).getUTCDay()]);
      }),
    );
  });
});

describe("ticks", () => {
  it("marks each 1 January once and labels it where there is room", () => {
    const ticks = ticksOf({ from: "2024-03-01", to: "2029-02-10" });
    expect(ticks.filter((t) => t.kind === "year").map((t) => t.label)).toEqual([
      "2025",
      "2026",
      "2027",
      "2028",
      undefined,
    ]);
    expect(ticks.filter((t) => t.kind !== "year")).toHaveLength(55);
  });

  it("rise along the rule and thin out on long ones", () => {
    fc.assert(
      fc.property(day, fc.integer({ min: 31, max: 20_000 }), (from, length) => {
        const ticks = ticksOf({ from, to: addDays(from, length) });
        for (let i = 1; i < ticks.length; i++) {
          expect((ticks[i]?.at ?? 0) > (ticks[i - 1]?.at ?? 0)).toBe(true);
        }
        expect(ticks.length).toBeLessThanOrEqual(90);
        expect(ticks.filter((t) => t.label).length).toBeLessThanOrEqual(11);
      }),
    );
  });
});

it("says days shortly, and leaves out a year that is plain", () => {
  expect(shortDay("2024-03-04")).toBe("4 Mar 2024");
  expect(shortDay("2026-11-02", "2026-11-12")).toBe("2 Nov");
  expect(shortDay("2025-11-02", "2026-11-12")).toBe("2 Nov 2025");
  expect(monthOf("2027-03-03")).toBe("March 2027");
});
