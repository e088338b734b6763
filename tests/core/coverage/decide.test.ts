import { describe, expect, it } from "vitest";
import { civilDayIn } from "@/lib/base/civil";
import { sentences } from "@/lib/coverage/reasons";
import { decide, ENGINE, inherited, readInputs } from "@/lib/coverage/rules";
import { REASON_RULES, type DecideInput, type Decision, type Outcome } from "@/lib/coverage/schema";
import { claim, CLAUSES, DOA, DRIVES, FLOOR, GIVEN, LIQUID, WRITES } from "./facts";

const rules = (d: Decision) => d.reasons.map((r) => r.rule);

/**
 * Days by Regulation (EEC, Euratom) No 1182/71 Art. 3 and BGB s. 187, 188 (the event's day is day
 * zero, months are clamped to their end), reckoned by hand. The clauses are our own.
 */
const CASES: [
  what: string,
  input: DecideInput,
  outcome: Outcome,
  lastCoveredOn: string | null,
  rule: string,
][] = [
  ["in cover", claim(), "covered", "2029-01-07", "cover_window"],
  ["the last covered day", claim({ claimOn: "2029-01-07" }), "covered", "2029-01-07", "cover_window"],
  ["a day later", claim({ claimOn: "2029-01-08" }), "not_covered", "2029-01-07", "cover_window"],
  ["dead on arrival", claim({ claimOn: "2026-01-20" }), "covered_doa", "2026-02-06", "doa_window"],
  [
    "30 days from delivery, a Friday",
    claim({ claimOn: "2026-02-06" }),
    "covered_doa",
    "2026-02-06",
    "doa_window",
  ],
  ["and a day", claim({ claimOn: "2026-02-07" }), "covered", "2029-01-07", "cover_window"],
  [
    "a DOA limit on a Saturday rolls to Monday",
    claim({ sale: { shippedOn: "2026-01-05", deliveredOn: "2026-01-08" }, claimOn: "2026-02-09" }),
    "covered_doa",
    "2026-02-09",
    "doa_window",
  ],
  [
    "cover that ends on a Saturday does not roll",
    claim({ sale: { shippedOn: "2026-01-05", deliveredOn: "2026-01-06" }, claimOn: "2029-01-08" }),
    "not_covered",
    "2029-01-06",
    "cover_window",
  ],
  [
    "delivered on a leap day",
    claim({ sale: { shippedOn: "2024-02-28", deliveredOn: "2024-02-29" }, claimOn: "2027-02-28" }),
    "covered",
    "2027-02-28",
    "cover_window",
  ],
  [
    "a day after that",
    claim({ sale: { shippedOn: "2024-02-28", deliveredOn: "2024-02-29" }, claimOn: "2027-03-01" }),
    "not_covered",
    "2027-02-28",
    "cover_window",
  ],
  [
    "no proof of delivery: ship day and five",
    claim({ sale: { deliveredOn: null }, claimOn: "2029-01-10" }),
    "covered",
    "2029-01-10",
    "cover_window",
  ],
  [
    "before it was shipped",
    claim({ claimOn: "2026-01-04" }),
    "needs_person",
    "2029-01-07",
    "claim_before_ship",
  ],
  [
    "shipped in the future",
    claim({ sale: { shippedOn: "2027-01-05", deliveredOn: null } }),
    "needs_person",
    "2030-01-10",
    "claim_before_ship",
  ],
  ["no clause for the family", claim({ part: { family: "fan" } }), "needs_person", null, "no_clause"],
  [
    "refurbished has its own clause",
    claim({ sale: { condition: "refurbished" }, claimOn: "2027-01-06" }),
    "not_covered",
    "2027-01-05",
    "cover_window",
  ],
  [
    "swapped: the rest of the first cover is longer than the floor",
    claim({ part: { swaps: ["2026-05-04"] } }),
    "covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "swapped a second time, late: the floor is longer",
    claim({ part: { swaps: ["2028-12-20"] }, claimOn: "2029-03-20" }),
    "covered",
    "2029-03-20",
    "cover_window",
  ],
  [
    "past that floor",
    claim({ part: { swaps: ["2028-12-20"] }, claimOn: "2029-03-21" }),
    "not_covered",
    "2029-03-20",
    "cover_window",
  ],
  [
    "a swapped part has no second DOA window",
    claim({ part: { swaps: ["2026-01-12"] }, claimOn: "2026-01-20" }),
    "covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "fitted after the first cover, with no floor in the terms",
    claim({
      clauses: CLAUSES.filter((c) => c !== FLOOR),
      part: { swaps: ["2029-06-01"] },
      claimOn: "2029-06-10",
    }),
    "needs_person",
    null,
    "fitted_after_cover",
  ],
  [
    "paused for ten days, both ends counted",
    claim({ sale: { pauses: [{ from: "2026-03-01", to: "2026-03-10" }] }, claimOn: "2029-01-17" }),
    "covered",
    "2029-01-17",
    "cover_window",
  ],
  [
    "pauses that overlap count once",
    claim({
      sale: {
        pauses: [
          { from: "2026-03-06", to: "2026-03-10" },
          { from: "2026-03-01", to: "2026-03-08" },
        ],
      },
      claimOn: "2029-01-18",
    }),
    "not_covered",
    "2029-01-17",
    "cover_window",
  ],
  [
    "past its endurance, by a log of its own",
    claim({ readings: { powerOnHours: 30_001, serial: "VS-19F4-7K3Q", serialMatches: true } }),
    "not_covered",
    "2029-01-07",
    "endurance",
  ],
  [
    "at its endurance",
    claim({ readings: { powerOnHours: 30_000, serialMatches: true } }),
    "covered",
    "2029-01-07",
    "endurance",
  ],
  [
    "past endurance, by the log of another drive",
    claim({ readings: { powerOnHours: 41_000, serial: "VS-19F4-XXXX", serialMatches: false } }),
    "needs_person",
    "2029-01-07",
    "serial_differs",
  ],
  [
    "a log of another drive brings no cover back once its days are over",
    claim({ claimOn: "2029-02-01", readings: { serial: "VS-19F4-XXXX", serialMatches: false } }),
    "not_covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "liquid that is shown comes before damage that is only asked",
    claim({
      clauses: [...CLAUSES, LIQUID],
      faultClass: "physical_damage",
      evidence: { photos: 1, logs: 0 },
      established: ["liquid"],
    }),
    "not_covered",
    "2029-01-07",
    "exclusion_shown",
  ],
  [
    "sold as it is: the first days only",
    claim({ clauses: [DOA], claimOn: "2026-01-20" }),
    "covered_doa",
    "2026-02-06",
    "doa_window",
  ],
  [
    "dead on arrival, of a family that no clause of cover names",
    claim({ part: { family: "fan" }, claimOn: "2026-01-20" }),
    "covered_doa",
    "2026-02-06",
    "doa_window",
  ],
  [
    "sold as it is: and none after them",
    claim({ clauses: [DOA] }),
    "not_covered",
    "2026-02-06",
    "doa_window",
  ],
  [
    "given on before a part was fitted, and cover is the first buyer's",
    claim({
      clauses: [...CLAUSES, { ...GIVEN, transferRule: "first_buyer", period: null }],
      sale: { transfers: [{ on: "2026-03-02", noticedOn: null }] },
      part: { swaps: ["2026-04-01"] },
    }),
    "not_covered",
    null,
    "given_on_first_buyer",
  ],
  [
    "damage claimed without a photo",
    claim({ faultClass: "physical_damage", evidence: { photos: 0, logs: 0 } }),
    "needs_person",
    "2029-01-07",
    "exclusion_open",
  ],
  [
    "damage with a photo that no person has judged",
    claim({ faultClass: "physical_damage", evidence: { photos: 2, logs: 0 } }),
    "needs_person",
    "2029-01-07",
    "exclusion_open",
  ],
  [
    "damage that a person found shown",
    claim({
      faultClass: "physical_damage",
      evidence: { photos: 2, logs: 0 },
      established: ["physical_damage"],
    }),
    "not_covered",
    "2029-01-07",
    "exclusion_shown",
  ],
  [
    "damage claimed after the end is past, whatever it is",
    claim({ faultClass: "physical_damage", claimOn: "2029-02-01" }),
    "not_covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "past its endurance, by a log that names no serial",
    claim({ readings: { powerOnHours: 30_001 } }),
    "needs_person",
    "2029-01-07",
    "endurance_unproven",
  ],
  [
    "bytes written are past the limit before the hours are: whichever is first",
    claim({
      clauses: [WRITES],
      readings: { powerOnHours: 9_000, bytesWritten: 1_801e12, serialMatches: true },
    }),
    "not_covered",
    "2029-01-05",
    "endurance",
  ],
  [
    "both within their limits",
    claim({
      clauses: [WRITES],
      readings: { powerOnHours: 30_000, bytesWritten: 1_800e12, serialMatches: true },
    }),
    "covered",
    "2029-01-05",
    "endurance",
  ],
  [
    "damage said to be shown with nothing on record",
    claim({ established: ["physical_damage"], evidence: { photos: 0, logs: 1 } }),
    "needs_person",
    "2029-01-07",
    "exclusion_unproven",
  ],
  [
    "damage that ours from before shipping shows too",
    claim({ faultClass: "physical_damage", evidence: { photos: 2, logs: 0 }, ruledOut: ["physical_damage"] }),
    "covered",
    "2029-01-07",
    "exclusion_ruled_out",
  ],
  [
    "liquid that a person found in a drive claimed for another fault",
    claim({ clauses: [...CLAUSES, LIQUID], evidence: { photos: 1, logs: 1 }, established: ["liquid"] }),
    "not_covered",
    "2029-01-07",
    "exclusion_shown",
  ],
  [
    "a part without a clause of its own has its system's",
    claim({ part: { family: "fan", within: "system" } }),
    "covered",
    "2029-01-05",
    "cover_window",
  ],
  [
    "a part with a clause of its own does not have its system's",
    claim({ part: { family: "drive", within: "system" } }),
    "covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "swapped twice: the remainder from the first sale",
    claim({ part: { swaps: ["2026-05-04", "2027-02-01"] }, claimOn: "2029-01-07" }),
    "covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "swapped twice: the floor from the second swap, not the first",
    claim({ part: { swaps: ["2028-11-01", "2028-12-20"] }, claimOn: "2029-03-20" }),
    "covered",
    "2029-03-20",
    "cover_window",
  ],
  [
    "a replaced part has its remainder only, where the clause says so",
    claim({
      clauses: CLAUSES.map((c) => (c === FLOOR ? { ...c, replacedRule: "remainder" as const } : c)),
      part: { swaps: ["2028-12-20"] },
      claimOn: "2029-01-08",
    }),
    "not_covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "a replaced part has its floor only, where the clause says so",
    claim({
      clauses: CLAUSES.map((c) => (c === FLOOR ? { ...c, replacedRule: "floor" as const } : c)),
      part: { swaps: ["2026-03-02"] },
      claimOn: "2026-06-03",
    }),
    "not_covered",
    "2026-05-31",
    "cover_window",
  ],
  [
    "the clock does not stop, where the clause says so",
    claim({
      clauses: [{ ...DRIVES, clockStops: false }],
      sale: { pauses: [{ from: "2026-03-01", to: "2026-03-10" }] },
      claimOn: "2029-01-08",
    }),
    "not_covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "a pause after the end brings nothing back",
    claim({ sale: { pauses: [{ from: "2029-01-10", to: "2029-02-10" }] }, claimOn: "2029-01-11" }),
    "not_covered",
    "2029-01-07",
    "cover_window",
  ],
  [
    "a DOA window that does not roll",
    claim({
      clauses: [{ ...DOA, rolls: false }, DRIVES],
      sale: { shippedOn: "2026-01-05", deliveredOn: "2026-01-08" },
      claimOn: "2026-02-09",
    }),
    "covered",
    "2029-01-08",
    "cover_window",
  ],
  [
    "counted from the invoice, where the clause says so",
    claim({
      clauses: [{ ...DRIVES, startBasis: "invoiced" }],
      sale: { invoicedOn: "2026-01-03" },
      claimOn: "2029-01-03",
    }),
    "covered",
    "2029-01-03",
    "cover_window",
  ],
  [
    "counted from setting it up, with no day of that known: ship day and five",
    claim({ clauses: [{ ...DRIVES, startBasis: "installed" }], claimOn: "2029-01-10" }),
    "covered",
    "2029-01-10",
    "cover_window",
  ],
  [
    "given on, and the terms do not name it",
    claim({ sale: { transfers: [{ on: "2026-05-04", noticedOn: null }] } }),
    "needs_person",
    "2029-01-07",
    "given_on_unnamed",
  ],
  [
    "given on, and cover is the first buyer's",
    claim({
      clauses: [...CLAUSES, { ...GIVEN, transferRule: "first_buyer", period: null }],
      sale: { transfers: [{ on: "2026-05-04", noticedOn: "2026-05-04" }] },
    }),
    "not_covered",
    "2026-05-04",
    "given_on_first_buyer",
  ],
  [
    "given on that same day, by the first buyer still",
    claim({
      clauses: [...CLAUSES, { ...GIVEN, transferRule: "first_buyer", period: null }],
      sale: { transfers: [{ on: "2026-05-04", noticedOn: null }] },
      claimOn: "2026-05-04",
    }),
    "covered",
    "2026-05-04",
    "cover_window",
  ],
  [
    "given on with notice in time",
    claim({
      clauses: [...CLAUSES, GIVEN],
      sale: { transfers: [{ on: "2026-05-04", noticedOn: "2026-06-03" }] },
    }),
    "covered",
    "2029-01-07",
    "given_on_noticed",
  ],
  [
    "given on, the notice may still come",
    claim({
      clauses: [...CLAUSES, GIVEN],
      sale: { transfers: [{ on: "2026-05-04", noticedOn: null }] },
      claimOn: "2026-06-03",
    }),
    "needs_person",
    "2026-05-04",
    "given_on_notice_open",
  ],
  [
    "given on, and no notice came in time",
    claim({
      clauses: [...CLAUSES, GIVEN],
      sale: { transfers: [{ on: "2026-05-04", noticedOn: null }] },
      claimOn: "2026-06-04",
    }),
    "not_covered",
    "2026-05-04",
    "given_on_not_noticed",
  ],
  [
    "given on, notice a day late",
    claim({
      clauses: [...CLAUSES, GIVEN],
      sale: { transfers: [{ on: "2026-05-04", noticedOn: "2026-06-04" }] },
      claimOn: "2026-06-10",
    }),
    "not_covered",
    "2026-05-04",
    "given_on_not_noticed",
  ],
  [
    "given on, but its days are over whatever came",
    claim({
      clauses: [...CLAUSES, GIVEN],
      sale: { transfers: [{ on: "2029-01-06", noticedOn: null }] },
      claimOn: "2029-01-20",
    }),
    "not_covered",
    "2029-01-06",
    "cover_window",
  ],
  [
    "cover follows the serial",
    claim({
      clauses: [...CLAUSES, { ...GIVEN, transferRule: "follows_serial", period: null }],
      sale: { transfers: [{ on: "2026-05-04", noticedOn: null }] },
    }),
    "covered",
    "2029-01-07",
    "given_on_follows",
  ],
  [
    "moved here from a sale that the one who asks may not see",
    claim({ part: { originKnown: false } }),
    "needs_person",
    null,
    "sold_elsewhere",
  ],
  [
    "claimed before, under this sale",
    claim({ earlier: [{ ticket: 3007, on: "2026-04-07", outcome: "covered" }] }),
    "covered",
    "2029-01-07",
    "earlier_claims",
  ],
  ["another open RMA is said", claim({ openRma: "RMA-1207-K" }), "covered", "2029-01-07", "open_rma"],
];

describe("decide", () => {
  it.each(CASES)("%s", (_what, input, outcome, lastCoveredOn, rule) => {
    const d = decide(input);
    expect({ outcome: d.outcome, lastCoveredOn: d.lastCoveredOn }).toEqual({ outcome, lastCoveredOn });
    expect(rules(d)).toContain(rule);
    expect(d.engine).toBe(ENGINE);
    // Something is always offered to read, to staff and to the customer alike, and to do about it.
    for (const r of d.reasons)
      expect([r.staff, r.customer].every((w) => /^[A-Z0-9].*\.$/.test(w))).toBe(true);
    expect(d.reasons.length).toBeGreaterThan(0);
    if (outcome !== "covered" && outcome !== "covered_doa") expect(d.wouldChange.length).toBeGreaterThan(0);
    if (outcome === "not_covered") expect(d.remedies).toEqual([]);
  });

  it("says by its facts alone what each reason says", () => {
    const told = new Set<string>();
    for (const [, input] of CASES)
      for (const r of decide(input).reasons) {
        told.add(r.rule);
        const { staff, customer, ...facts } = r;
        expect(sentences(facts)).toEqual({ staff, customer });
      }
    expect([...REASON_RULES].filter((r) => !told.has(r))).toEqual([]);
  });

  it("names the hold, the freight and the day back of the clause, to a business only what it may be asked for", () => {
    const of = (buyerKind: "business" | "consumer" | "unknown") =>
      decide(claim({ clauses: [WRITES], sale: { buyerKind } })).handling;
    expect(of("business")).toEqual({
      dueBackDays: 14,
      holdCents: 25_000,
      freight: "customer_in",
      responseHours: 8,
    });
    for (const kind of ["consumer", "unknown"] as const)
      expect(of(kind)).toMatchObject({ holdCents: null, freight: "seller_both" });
  });

  it("reads what an earlier engine stored, in today's shape", () => {
    const { sale, part, ...rest } = claim({ part: { swaps: ["2028-12-20"] }, claimOn: "2029-03-20" });
    const { installedOn: _i, transfers: _t, ...oldSale } = sale;
    const { earlier: _e, ruledOut: _r, ...oldRest } = rest;
    const old = { ...oldRest, sale: oldSale, part: { family: part.family, swappedOn: "2028-12-20" } };
    expect(decide(readInputs(JSON.parse(JSON.stringify(old))))).toMatchObject({
      outcome: "covered",
      lastCoveredOn: "2029-03-20",
    });
  });

  it("gives the remedies of the clause that decides", () => {
    expect(decide(claim()).remedies).toEqual(["advance_replacement"]);
    expect(decide(claim({ claimOn: "2026-01-20" })).remedies).toEqual(["advance_replacement", "refund"]);
    expect(decide(claim({ part: { family: "board" }, faultClass: "no_power" })).remedies).toEqual(["repair"]);
  });

  it("takes the claim's day in the seller's zone", () => {
    const at = (instant: string) =>
      decide(claim({ claimOn: civilDayIn(new Date(instant), "Europe/London") })).outcome;
    // 23:30 on the last covered day: in London it is still that day, in New York London's is over.
    expect(at("2029-01-07T23:30:00+00:00")).toBe("covered");
    expect(at("2029-01-07T23:30:00-05:00")).toBe("not_covered");
    // And 00:30 the next day in Sydney is well within it.
    expect(at("2029-01-08T00:30:00+11:00")).toBe("covered");
  });

  it("never shows a fee to a consumer or an unknown buyer, nor where nothing is covered", () => {
    const fees = (more: Parameters<typeof claim>[0]) => decide(claim(more)).fees.map((f) => f.kind);
    expect(fees({})).toEqual(["no_fault_found"]);
    expect(fees({ sale: { buyerKind: "consumer" } })).toEqual([]);
    expect(fees({ sale: { buyerKind: "unknown" } })).toEqual([]);
    expect(fees({ claimOn: "2029-02-01" })).toEqual([]);
    for (const [, input] of CASES)
      for (const buyerKind of ["consumer", "unknown"] as const) {
        const d = decide({ ...input, sale: { ...input.sale, buyerKind } });
        const words = JSON.stringify([d.reasons, d.wouldChange, d.headline]);
        expect(d.fees).toEqual([]);
        expect(words).not.toMatch(/cost|fee\b|€|EUR/);
      }
  });

  it("says what is still wanted, and not what came", () => {
    const wanted = (photos: number, logs: number) =>
      decide(claim({ faultClass: "no_power", evidence: { photos, logs } })).evidenceWanted;
    expect(wanted(0, 0)).toEqual(["photo of the lamps and the label", "event log"]);
    expect(wanted(1, 0)).toEqual(["event log"]);
    expect(wanted(1, 1)).toEqual([]);
  });
});

describe("inherited cover", () => {
  const of = (swapOn: string) =>
    inherited({
      sale: claim().sale,
      clauses: CLAUSES,
      week: claim().week,
      part: { family: "drive", within: null, swaps: [] },
      swapOn,
    });
  it.each([
    ["2026-06-03", "2029-01-07", false],
    ["2028-10-09", "2029-01-07", false],
    ["2028-10-10", "2029-01-08", true],
  ])("of a part fitted on %s runs to %s", (swapOn, lastCoveredOn, byFloor) => {
    expect(of(swapOn)).toMatchObject({ lastCoveredOn, byFloor });
  });
  it("is none where the terms name no such part", () =>
    expect(
      inherited({
        sale: claim().sale,
        clauses: CLAUSES,
        week: claim().week,
        part: { family: "fan", within: null, swaps: [] },
        swapOn: "2026-06-03",
      }),
    ).toBeNull());
});
