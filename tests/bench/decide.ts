import fc from "fast-check";
import { addDays, addPeriod } from "@/lib/base/civil";
import { decide } from "@/lib/coverage/rules";
import { FAULT_CLASSES, type DecideInput } from "@/lib/coverage/schema";
import { claim, CLAUSES, GIVEN, WRITES } from "../core/coverage/facts";

/**
 * What a whole decision costs beside the date addition it cannot do without: random claims, decided
 * in one process, interleaved with `start + period` alone for the same starts and periods. Reports
 * the ratio of the medians; absolute times mean nothing on a shared machine.
 *
 *     npm run bench:decide
 */
const CLAIMS = 100_000;
const ROUNDS = 5;

const anyClaim: fc.Arbitrary<DecideInput> = fc
  .record({
    day: fc.nat(3000),
    delivered: fc.option(fc.nat(20)),
    family: fc.constantFrom("drive", "system", "board", "memory"),
    swaps: fc.array(fc.nat(1400), { maxLength: 2 }),
    fault: fc.constantFrom(...FAULT_CLASSES),
    after: fc.nat(1500),
    hours: fc.option(fc.nat(50_000), { nil: undefined }),
    given: fc.option(fc.nat(900)),
    pauses: fc.array(fc.tuple(fc.nat(900), fc.nat(20)), { maxLength: 3 }),
  })
  .map((f) => {
    const shippedOn = addDays("2020-01-01", f.day);
    return claim({
      clauses: [...CLAUSES, GIVEN, { ...WRITES, condition: "refurbished" }],
      faultClass: f.fault,
      claimOn: addDays(shippedOn, f.after),
      readings: { powerOnHours: f.hours, serialMatches: f.hours === undefined ? undefined : true },
      sale: {
        shippedOn,
        deliveredOn: f.delivered === null ? null : addDays(shippedOn, f.delivered),
        pauses: f.pauses.map(([from, n]) => ({
          from: addDays(shippedOn, from),
          to: addDays(shippedOn, from + n),
        })),
        transfers: f.given === null ? [] : [{ on: addDays(shippedOn, f.given), noticedOn: null }],
      },
      part: {
        family: f.family,
        within: "system",
        swaps: f.swaps.sort((a, b) => a - b).map((n) => addDays(shippedOn, n)),
      },
    });
  });

const claims = fc.sample(anyClaim, { numRuns: CLAIMS, seed: 20_261_201 });
const median = (of: number[]) => [...of].sort((a, b) => a - b)[Math.floor(of.length / 2)]!;
const time = (run: () => void) => {
  const from = process.hrtime.bigint();
  run();
  return Number(process.hrtime.bigint() - from) / 1e6;
};

const whole: number[] = [];
const plain: number[] = [];
const outcomes = new Map<string, number>();
let last = "";
for (let round = 0; round < ROUNDS; round++) {
  plain.push(
    time(() => {
      for (const c of claims) last = addPeriod(c.sale.deliveredOn ?? c.sale.shippedOn, "P36M");
    }),
  );
  whole.push(
    time(() => {
      for (const c of claims) {
        const { outcome } = decide(c);
        if (round === 0) outcomes.set(outcome, (outcomes.get(outcome) ?? 0) + 1);
      }
    }),
  );
}
const ratio = median(whole) / median(plain);
console.log(
  `${CLAIMS.toLocaleString("en-US")} random claims, ${ROUNDS} rounds, ${last.length === 10 ? "ok" : "wrong"}`,
);
for (const [outcome, n] of [...outcomes].sort()) console.log(`  ${outcome}: ${n.toLocaleString("en-US")}`);
console.log(`a whole decision / one date addition: ${ratio.toFixed(1)} (median of ${ROUNDS})`);
