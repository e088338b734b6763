import type { publishTerms } from "@/lib/coverage/commands";

type Terms = Parameters<typeof publishTerms>[1];

/** Terms of the invented seller: every kind of clause once, with periods that tests can count on. */
export const BUSINESS_TERMS: Terms = {
  code: "OSW-B",
  name: "Business terms",
  effectiveOn: "2020-01-01",
  clauses: [
    {
      number: "2.1",
      kind: "doa",
      title: "Dead on arrival",
      period: "P30D",
      startBasis: "delivered",
      deliveryGraceDays: 5,
      remedies: ["advance_replacement", "refund"],
      dueBackDays: 14,
    },
    {
      number: "3.1",
      kind: "cover",
      title: "Systems and boards",
      families: ["system", "board"],
      period: "P36M",
      startBasis: "shipped",
      remedies: ["advance_replacement", "replacement_on_receipt", "repair"],
    },
    {
      number: "3.2",
      kind: "cover",
      title: "Drives",
      families: ["drive"],
      period: "P36M",
      startBasis: "delivered",
      deliveryGraceDays: 5,
      enduranceHours: 30_000,
      remedies: ["advance_replacement", "replacement_on_receipt"],
    },
    {
      number: "3.3",
      kind: "cover",
      title: "Power supplies",
      families: ["power_supply"],
      period: "P24M",
      startBasis: "shipped",
      remedies: ["replacement_on_receipt", "credit"],
    },
    { number: "4.1", kind: "replaced_part", title: "Parts we fit", period: "P90D" },
    {
      number: "7.1",
      kind: "exclusion",
      title: "Physical damage",
      exclusion: "physical_damage",
      evidence: ["photo of the damage"],
    },
    {
      number: "7.2",
      kind: "exclusion",
      title: "Bent socket contacts",
      exclusion: "bent_contacts",
      evidence: ["photo of the socket"],
    },
    {
      number: "8.1",
      kind: "fee",
      title: "No fault found",
      feeKind: "no_fault_found",
      feeCents: 4500,
      words: "If our bench finds no fault, the test costs",
    },
  ],
};
