import { describe, expect, it } from "vitest";
import { civilDayIn } from "@/lib/base/civil";
import { decide } from "@/lib/coverage/rules";
import type { ClauseFact, DayRule } from "@/lib/coverage/schema";
import { windowsFor } from "@/lib/coverage/windows";
import reference from "../base/reference/coverage-dates.json";
import { claim, clause } from "./facts";

/**
 * Every case of the reference file, each with its own published source, through the module's doors:
 * clauses and a sale in, windows and decisions out.
 */
type Case = {
  id: string;
  rule: string;
  start: string;
  period: string;
  expected_last_covered_day: string;
  first_day_not_covered: string;
  source: string;
  base_rule?: string;
  holidays?: string[];
  pauses?: [string, string][];
  replaced_on?: string;
  floor?: string;
};
const MON_FRI = [1, 2, 3, 4, 5];

function inputOf(c: Case) {
  const rolls = c.rule.endsWith("_roll_next_working_day");
  const dayRule = (c.base_rule ?? c.rule.replace("_roll_next_working_day", "")) as DayRule;
  const rule = (["event_day_excluded", "start_day_included"] as const).includes(dayRule)
    ? dayRule
    : "event_day_excluded";
  const main: Partial<ClauseFact> = {
    period: c.period,
    startBasis: "shipped",
    dayRule: rule,
    remedies: ["repair"],
  };
  return claim({
    clauses: [
      clause("3.1", rolls ? "doa" : "cover", "Whole unit", main),
      // Beside a DOA window stands a cover that has long ended, so that the window alone decides.
      ...(rolls
        ? [clause("3.2", "cover", "One day", { ...main, period: "P1D", dayRule: "start_day_included" })]
        : []),
      clause("4.1", "replaced_part", "Parts we fit", { period: c.floor ?? "P1D" }),
    ],
    week: { workdays: MON_FRI, holidays: c.holidays ?? [] },
    sale: {
      shippedOn: c.start,
      deliveredOn: null,
      pauses: (c.pauses ?? []).map(([from, to]) => ({ from, to })),
    },
    part: { swaps: c.replaced_on ? [c.replaced_on] : [] },
  });
}

describe("cover windows and decisions", () => {
  it.each(reference.cases as Case[])("$id: $rule of $period from $start ($source)", (c) => {
    const input = inputOf(c);
    const kind = c.rule.endsWith("_roll_next_working_day") ? "doa" : "cover";
    const window = windowsFor(input.sale, input.clauses, input.part, input.week).find((w) => w.kind === kind);
    expect(window?.lastOn).toBe(c.expected_last_covered_day);
    const on = (claimOn: string) => decide({ ...input, claimOn }).outcome;
    expect(on(c.expected_last_covered_day)).toBe(kind === "doa" ? "covered_doa" : "covered");
    expect(on(c.first_day_not_covered)).toBe("not_covered");
  });

  it.each(reference.claim_day_cases)(
    "$id: $claim_instant in $seller_zone ($source)",
    ({ claim_instant, seller_zone, last_covered_day, expected_claim_day, expected_covered }) => {
      const claimOn = civilDayIn(new Date(claim_instant), seller_zone);
      expect(claimOn).toBe(expected_claim_day);
      // A day of cover that starts the day before ends on the last covered day.
      const shippedOn = `${Number(last_covered_day.slice(0, 4)) - 1}${last_covered_day.slice(4)}`;
      const input = claim({
        clauses: [clause("3.1", "cover", "Whole unit", { period: "P1Y", startBasis: "shipped" })],
        sale: { shippedOn },
        claimOn,
      });
      const d = decide(input);
      expect(d.lastCoveredOn).toBe(last_covered_day);
      expect(d.outcome).toBe(expected_covered ? "covered" : "not_covered");
    },
  );
});
