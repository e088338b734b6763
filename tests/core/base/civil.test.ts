import fc from "fast-check";
import { describe, expect, it, test } from "vitest";
import {
  addDays,
  addPeriod,
  civilDayIn,
  daysBetween,
  laterDay,
  pausedDays,
  rollToWorkday,
  type AddRule,
} from "@/lib/base/civil";
import { parsePeriod } from "@/lib/base/period";
import reference from "./reference/coverage-dates.json";

type Case = {
  id: string;
  rule: string;
  start: string;
  period: string;
  expected_last_covered_day: string;
  source: string;
  holidays?: string[];
  base_rule?: string;
  pauses?: [string, string][];
  replaced_on?: string;
  floor?: string;
};
const MON_FRI = [1, 2, 3, 4, 5];

function lastDay(c: Case): string {
  const base = (c.base_rule ?? c.rule.replace("_roll_next_working_day", "")) as AddRule;
  const end = addPeriod(c.start, c.period, base);
  if (c.rule.endsWith("roll_next_working_day"))
    return rollToWorkday(end, { workdays: MON_FRI, holidays: c.holidays ?? [] });
  if (c.rule === "tolled")
    return addDays(end, pausedDays((c.pauses ?? []).map(([from, to]) => ({ from, to }))));
  if (c.rule === "replacement_later_of") return laterDay(end, addPeriod(c.replaced_on!, c.floor!));
  return end;
}

describe("cover dates agree with published rules and worked examples", () => {
  // Sources stand in the reference file beside each case: Dodds v Walker [1981], EU 1182/71 Art. 3,
  // BGB s. 187-188 and 209, CRA 2015 s. 22, CPR 2.8, Matthew v Sedman [2021] and others.
  for (const c of reference.cases as Case[]) {
    test(`${c.id} ${c.rule}: ${c.start} + ${c.period} (${c.source})`, () => {
      expect(lastDay(c)).toBe(c.expected_last_covered_day);
    });
  }
});

describe("the claim's day is the day of first receipt in the seller's zone", () => {
  for (const c of reference.claim_day_cases as unknown as Record<string, string>[]) {
    test(`${c.id}: ${JSON.stringify(c).slice(0, 90)}`, () => {
      const instant = c.claim_instant ?? c.instant ?? c.claim_instant_utc;
      const zone = c.seller_zone ?? c.zone;
      expect(instant, "case names its instant").toBeTruthy();
      expect(civilDayIn(new Date(instant!), zone!)).toBe(c.expected_claim_day);
    });
  }
});

describe("properties of civil days", () => {
  const day = fc
    .date({ min: new Date("2000-01-01"), max: new Date("2049-12-31"), noInvalidDate: true })
    .map((d) => d.toISOString().slice(0, 10));
  it("a longer period never ends sooner", () => {
    fc.assert(
      fc.property(
        day,
        fc.integer({ min: 1, max: 60 }),
        (d, n) => addPeriod(d, `P${n + 1}M`) > addPeriod(d, `P${n}M`),
      ),
    );
  });
  it("the order of pauses does not matter and overlaps count once", () => {
    const span = fc
      .tuple(day, fc.integer({ min: 0, max: 40 }))
      .map(([from, n]) => ({ from, to: addDays(from, n) }));
    fc.assert(
      fc.property(fc.array(span, { maxLength: 6 }), (spans) => {
        const days = new Set(
          spans.flatMap((s) =>
            Array.from({ length: daysBetween(s.from, s.to) + 1 }, (_, i) => addDays(s.from, i)),
          ),
        );
        return pausedDays(spans) === days.size && pausedDays([...spans].reverse()) === days.size;
      }),
    );
  });
});

describe("a period that is no plain length of days is refused with its reason", () => {
  for (const [text, why] of [
    ["P0D", "longer than nothing"],
    ["P1.5M", "whole parts"],
    ["P-3M", "negative"],
    ["-P3M", "negative"],
    ["PT5H", "days, not hours"],
    ["36", "such as P36M"],
    ["P", "such as P36M"],
    ["", "such as P36M"],
  ] as const) {
    it(`${text || "(empty)"}: ${why}`, () => {
      const r = parsePeriod(text);
      expect(r.ok ? "" : r.refusal.message).toContain(why);
    });
  }
});
