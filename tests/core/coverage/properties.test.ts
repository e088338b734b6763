import fc from "fast-check";
import { afterEach, describe, expect, it } from "vitest";
import { addDays } from "@/lib/base/civil";
import { applyChange, decide } from "@/lib/coverage/rules";
import { FAULT_CLASSES, type DecideInput } from "@/lib/coverage/schema";
import { claim, CLAUSES, GIVEN } from "./facts";

const day = fc.nat(3000).map((n) => addDays("2020-01-01", n));
const pause = fc.tuple(fc.nat(900), fc.nat(40));

/** Any sale, part, fault and claim day that the ledger could hold. */
const anyClaim: fc.Arbitrary<DecideInput> = fc
  .record({
    shippedOn: day,
    delivered: fc.option(fc.nat(20)),
    condition: fc.constantFrom("new", "refurbished"),
    buyerKind: fc.constantFrom("business", "consumer", "unknown"),
    pauses: fc.array(pause, { maxLength: 4 }),
    family: fc.constantFrom("drive", "system", "board", "fan"),
    swapped: fc.option(fc.nat(1400)),
    faultClass: fc.constantFrom(...FAULT_CLASSES),
    // Anywhere, and often near an end.
    after: fc.oneof(fc.integer({ min: -20, max: 1500 }), fc.integer({ min: 1085, max: 1140 })),
    photos: fc.nat(2),
    logs: fc.nat(2),
    shown: fc.boolean(),
    hours: fc.option(fc.constantFrom(100, 30_000, 30_001, 50_000), { nil: undefined }),
    matches: fc.option(fc.boolean(), { nil: undefined }),
    openRma: fc.option(fc.constant("RMA-1207-K")),
    given: fc.option(fc.tuple(fc.nat(1400), fc.option(fc.nat(60)))),
    giving: fc.constantFrom("first_buyer", "with_notice", "follows_serial", null),
    within: fc.option(fc.constant("system")),
    ruledOut: fc.boolean(),
  })
  .map((f) =>
    claim({
      clauses: f.giving ? [...CLAUSES, { ...GIVEN, transferRule: f.giving as "with_notice" }] : CLAUSES,
      ruledOut: f.ruledOut ? ["liquid", "physical_damage"] : [],
      sale: {
        transfers: f.given
          ? [
              {
                on: addDays(f.shippedOn, f.given[0]),
                noticedOn: f.given[1] === null ? null : addDays(f.shippedOn, f.given[0] + f.given[1]),
              },
            ]
          : [],
        shippedOn: f.shippedOn,
        deliveredOn: f.delivered === null ? null : addDays(f.shippedOn, f.delivered),
        condition: f.condition,
        buyerKind: f.buyerKind as "business",
        pauses: f.pauses.map(([from, n]) => ({
          from: addDays(f.shippedOn, from),
          to: addDays(f.shippedOn, from + n),
        })),
      },
      part: {
        family: f.family,
        within: f.within,
        swaps: f.swapped === null ? [] : [addDays(f.shippedOn, f.swapped)],
      },
      faultClass: f.faultClass,
      claimOn: addDays(f.shippedOn, f.after),
      evidence: { photos: f.photos, logs: f.logs },
      established: f.shown ? ["physical_damage", "bent_contacts"] : [],
      readings: { powerOnHours: f.hours, serialMatches: f.matches },
      openRma: f.openRma,
    }),
  );

const zone = process.env.TZ;
afterEach(() => {
  if (zone === undefined) delete process.env.TZ;
  else process.env.TZ = zone;
});

describe("any claim", () => {
  it("gets one answer, in any zone of the machine, and is left as it was", () => {
    fc.assert(
      fc.property(
        anyClaim,
        fc.constantFrom("UTC", "Pacific/Kiritimati", "Pacific/Pago_Pago"),
        (input, tz) => {
          const kept = structuredClone(input);
          const first = decide(input);
          process.env.TZ = tz;
          expect(decide(JSON.parse(JSON.stringify(kept)) as DecideInput)).toEqual(first);
          expect(input).toEqual(kept);
        },
      ),
      { numRuns: 400 },
    );
  });

  it("that is not covered is not covered on any later day", () => {
    fc.assert(
      fc.property(anyClaim, fc.integer({ min: 1, max: 800 }), (input, later) => {
        fc.pre(decide(input).outcome === "not_covered");
        const then = decide({ ...input, claimOn: addDays(input.claimOn, later) }).outcome;
        expect(["covered", "covered_doa"]).not.toContain(then);
      }),
      { numRuns: 400 },
    );
  });

  it("does not mind in which order its pauses were written down", () => {
    fc.assert(
      fc.property(anyClaim, (input) => {
        const turned = { ...input, sale: { ...input.sale, pauses: [...input.sale.pauses].reverse() } };
        expect(decide(turned)).toEqual(decide(input));
      }),
      { numRuns: 400 },
    );
  });

  it("is never covered outside the windows it names, nor refused for its day inside them", () => {
    fc.assert(
      fc.property(anyClaim, (input) => {
        const d = decide(input);
        const inside = d.windows.some((w) => input.claimOn <= w.lastOn);
        if (d.outcome === "covered" || d.outcome === "covered_doa") expect(inside).toBe(true);
        if (d.outcome === "not_covered" && inside)
          expect(d.reasons.some((r) => /^(endurance|exclusion_shown|given_on_)/.test(r.rule))).toBe(true);
      }),
      { numRuns: 400 },
    );
  });
});

describe("what would change it", () => {
  it("does change it, to just what is told", () => {
    const facts = new Set<string>();
    fc.assert(
      fc.property(anyClaim, (input) => {
        const d = decide(input);
        for (const c of d.wouldChange) {
          facts.add(c.fact);
          if (c.patch === null) continue;
          expect(c.to).not.toBe(d.outcome);
          expect(decide(applyChange(input, c.patch)).outcome).toBe(c.to);
          // And what is told can be kept and read back.
          expect(JSON.parse(JSON.stringify(c))).toEqual(c);
        }
        if (d.outcome === "not_covered" || d.outcome === "needs_person")
          expect(d.wouldChange.length).toBeGreaterThan(0);
      }),
      { numRuns: 3000 },
    );
    expect([...facts].sort()).toEqual(
      expect.arrayContaining([
        "earlier_report",
        "exclusion_ruled_out",
        "exclusion_shown",
        "log_of_this_serial",
        "pause",
        "physical_damage_found",
        "ship_day",
        "use",
      ]),
    );
  });

  it("names the first day of delivery that would cover it, which the engine then does", () => {
    let seen = 0;
    fc.assert(
      fc.property(day, fc.integer({ min: 1, max: 55 }), (shippedOn, late) => {
        const input = claim({ sale: { shippedOn, deliveredOn: null }, faultClass: "failed_drive" });
        const end = decide(input).windows.find((w) => w.kind === "cover")!.lastOn;
        const claimOn = addDays(end, late);
        const d = decide({ ...input, claimOn });
        expect(d.outcome).toBe("not_covered");
        const said = d.wouldChange.find((w) => w.fact === "delivery_proof")?.staff;
        if (said === undefined) return;
        seen++;
        const named = new Date(`${/after (.+)\.$/.exec(said)![1]!} UTC`).toISOString().slice(0, 10);
        const on = (deliveredOn: string) =>
          decide({ ...input, claimOn, sale: { ...input.sale, deliveredOn } }).outcome;
        expect(on(named)).toBe("covered");
        expect(on(addDays(named, -1))).toBe("not_covered");
      }),
      { numRuns: 400 },
    );
    expect(seen).toBeGreaterThan(300);
  });

  it("offers no delivery note where the day of delivery is known", () => {
    const d = decide(claim({ claimOn: "2029-01-08" }));
    expect(d.wouldChange.map((w) => w.fact)).toEqual(["pause", "earlier_report"]);
    expect(d.wouldChange[1]!.customer).toContain("7 January 2029");
  });
});
