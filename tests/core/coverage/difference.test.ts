import { describe, expect, it } from "vitest";
import { differenceOf } from "@/lib/coverage/difference";
import { decide } from "@/lib/coverage/rules";
import type { DecideInput } from "@/lib/coverage/schema";
import { claim, CLAUSES, DRIVES } from "./facts";

const stored = (inputs: DecideInput) => ({ inputs, answer: decide(inputs) });
const of = (a: DecideInput, b: DecideInput) => differenceOf(stored(a), stored(b));

describe("what a new decision says that the last did not", () => {
  it("is nothing when the same facts are decided again", () =>
    expect(of(claim(), claim())).toEqual({ facts: [], answer: [] }));

  it("names the fact that changed and what became of the answer", () => {
    const unknown = claim({ sale: { deliveredOn: null }, claimOn: "2029-01-12" });
    expect(of(unknown, { ...unknown, sale: { ...unknown.sale, deliveredOn: "2026-01-14" } })).toEqual({
      facts: ["Delivered: not known, now 14 January 2026"],
      answer: ["Not covered, now covered", "Last covered day: 10 January 2029, now 14 January 2029"],
    });
  });

  it.each<[string, DecideInput, string]>([
    [
      "a fault",
      claim({ faultClass: "no_power" }),
      "Fault: a drive has failed or drops out, now it does not power on",
    ],
    ["a claim day", claim({ claimOn: "2026-06-02" }), "Claim day: 3 June 2026, now 2 June 2026"],
    ["a photo", claim({ evidence: { photos: 1, logs: 1 } }), "Photos: 0, now 1"],
    ["a finding", claim({ established: ["liquid"] }), "Shown by the evidence: none, now liquid inside"],
    ["what was ruled out", claim({ ruledOut: ["physical_damage"] }), "Ruled out: none, now physical damage"],
    [
      "a log",
      claim({
        readings: { powerOnHours: 31_200, bytesWritten: 1.5e12, serial: "VS-19F4-7K3Q", serialMatches: true },
      }),
      "The log: nothing read, now 31\u00a0200 h, 1.5 TB written, of VS-19F4-7K3Q",
    ],
    [
      "a pause",
      claim({ sale: { pauses: [{ from: "2026-03-01", to: "2026-03-10" }] } }),
      "Pauses: none, now 1 March 2026 to 10 March 2026",
    ],
    [
      "being given on",
      claim({ sale: { transfers: [{ on: "2026-05-04", noticedOn: null }] } }),
      "Given on: never, now 4 May 2026, no notice",
    ],
    ["a swap", claim({ part: { swaps: ["2026-05-04"] } }), "Fitted anew: never, now 4 May 2026"],
    ["an RMA", claim({ openRma: "RMA-1207-K" }), "Open RMA: none, now RMA-1207-K"],
    [
      "terms",
      claim({ clauses: CLAUSES.map((c) => (c === DRIVES ? { ...c, period: "P60M" } : c)) }),
      "Clause 3.2: period 36 months (P36M), now 60 months (P60M)",
    ],
  ])("names %s", (_what, after, line) => {
    expect(of(claim(), after).facts).toEqual([line]);
  });
});
