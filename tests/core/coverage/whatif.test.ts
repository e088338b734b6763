import { describe, expect, it } from "vitest";
import { differenceOf } from "@/lib/coverage/difference";
import { decide } from "@/lib/coverage/rules";
import { WhatIf, withWhatIf } from "@/lib/coverage/whatif";
import { claim, CLAUSES, GIVEN } from "./facts";

const tried = (ask: Record<string, string>, input = claim()) => {
  const put = withWhatIf(input, WhatIf.parse(ask));
  return { put, before: decide(input), after: decide(put) };
};

describe("what if", () => {
  it("nothing asked, or every field left empty, leaves the decision as it is", () => {
    const { put, before, after } = tried({ claimOn: "", period: "", hours: "", log: "" });
    expect(put).toEqual(claim());
    expect(after).toEqual(before);
  });

  it.each<[Record<string, string>, string, string]>([
    [{ claimOn: "2029-01-08" }, "not_covered", "2029-01-07"],
    [{ claimOn: "2029-01-08", deliveredOn: "2026-01-08" }, "covered", "2029-01-08"],
    [{ claimOn: "2029-01-08", period: "P37M" }, "covered", "2029-02-07"],
    [{ claimOn: "2029-01-07", dayRule: "start_day_included" }, "not_covered", "2029-01-06"],
    [{ claimOn: "2029-01-07", startBasis: "shipped" }, "not_covered", "2029-01-05"],
    [{ claimOn: "2029-01-08", pauseFrom: "2026-03-01", pauseTo: "2026-03-01" }, "covered", "2029-01-08"],
    [{ claimOn: "2029-03-01", swappedOn: "2028-12-20" }, "covered", "2029-03-20"],
    [{ faultClass: "physical_damage" }, "needs_person", "2029-01-07"],
    [{ shown: "physical_damage", photos: "1" }, "not_covered", "2029-01-07"],
    [{ faultClass: "physical_damage", ruledOut: "physical_damage" }, "covered", "2029-01-07"],
    [{ hours: "30001", log: "this" }, "not_covered", "2029-01-07"],
    [{ hours: "30001", log: "other" }, "needs_person", "2029-01-07"],
    [{ hours: "30001", log: "none" }, "needs_person", "2029-01-07"],
  ])("%o: %s to %s", (ask, outcome, lastCoveredOn) => {
    const { put, before, after } = tried(ask);
    expect(after).toMatchObject({ outcome, lastCoveredOn });
    expect(
      differenceOf({ inputs: claim(), answer: before }, { inputs: put, answer: after }).facts.length,
    ).toBeGreaterThan(0);
  });

  it("a notice that came is put to the last time it was given on", () => {
    const input = claim({
      clauses: [...CLAUSES, GIVEN],
      sale: { transfers: [{ on: "2026-05-04", noticedOn: null }] },
      claimOn: "2026-06-10",
    });
    expect(tried({}, input).after.outcome).toBe("not_covered");
    expect(tried({ noticedOn: "2026-05-20" }, input).after.outcome).toBe("covered");
  });

  it.each([
    [{ period: "P0D" }, "period", "A period must be longer than nothing."],
    [{ period: "P1.5M" }, "period", "A period has whole parts only: write P45D, not P1.5M."],
    [{ period: "P-3M" }, "period", "A period cannot be negative."],
    [{ claimOn: "2026-02-30" }, "claimOn", "Give a day of the calendar, such as 2026-03-04."],
    [
      { pauseFrom: "2026-03-10", pauseTo: "2026-03-01" },
      "pauseTo",
      "The last day cannot come before the first.",
    ],
    [{ pauseFrom: "2026-03-10" }, "pauseTo", "A pause needs its first and its last day."],
    [{ hours: "many" }, "hours", "Give the hours as a number."],
  ])("refuses %o at %s", (ask, field, message) => {
    const read = WhatIf.safeParse(ask);
    expect(read.success).toBe(false);
    expect(read.error!.issues.map((i) => [i.path[0], i.message])).toContainEqual([field, message]);
  });
});
