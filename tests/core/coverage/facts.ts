import type { ClauseFact, DecideInput } from "@/lib/coverage/schema";

export const clause = (
  number: string,
  kind: ClauseFact["kind"],
  title: string,
  more: Partial<ClauseFact>,
): ClauseFact => ({
  id: number,
  number,
  kind,
  title,
  families: [],
  condition: null,
  period: null,
  startBasis: null,
  deliveryGraceDays: 0,
  dayRule: "event_day_excluded",
  rolls: true,
  clockStops: true,
  replacedRule: "later_of_both",
  transferRule: null,
  remedies: [],
  dueBackDays: null,
  holdCents: null,
  freight: null,
  responseHours: null,
  enduranceHours: null,
  enduranceTb: null,
  exclusion: null,
  evidence: [],
  feeKind: null,
  feeCents: null,
  words: "",
  ...more,
});

export const DOA = clause("2.1", "doa", "Dead on arrival", {
  period: "P30D",
  startBasis: "delivered",
  deliveryGraceDays: 5,
  remedies: ["advance_replacement", "refund"],
});
export const SYSTEMS = clause("3.1", "cover", "Systems", {
  families: ["system", "board"],
  period: "P36M",
  startBasis: "shipped",
  remedies: ["repair"],
});
export const DRIVES = clause("3.2", "cover", "Drives", {
  families: ["drive"],
  period: "P36M",
  startBasis: "delivered",
  deliveryGraceDays: 5,
  enduranceHours: 30_000,
  remedies: ["advance_replacement"],
});
export const USED = clause("3.3", "cover", "Refurbished drives", {
  families: ["drive"],
  condition: "refurbished",
  period: "P12M",
  startBasis: "shipped",
  remedies: ["credit"],
});
export const FLOOR = clause("4.1", "replaced_part", "Parts we fit", { period: "P90D" });
export const DAMAGE = clause("7.1", "exclusion", "Physical damage", {
  exclusion: "physical_damage",
  evidence: ["photo of the damage"],
});
export const BENT = clause("7.2", "exclusion", "Bent socket contacts", {
  exclusion: "bent_contacts",
  evidence: ["photo of the socket"],
});
export const FEE = clause("8.1", "fee", "No fault found", {
  feeKind: "no_fault_found",
  feeCents: 4500,
  words: "If our bench finds no fault, the test costs",
});
export const WRITES = clause("3.4", "cover", "Written drives", {
  families: ["drive"],
  period: "P36M",
  startBasis: "shipped",
  enduranceHours: 30_000,
  enduranceTb: 1_800,
  remedies: ["advance_replacement"],
  dueBackDays: 14,
  holdCents: 25_000,
  freight: "customer_in",
  responseHours: 8,
});
export const GIVEN = clause("6.1", "transfer", "Given on", {
  transferRule: "with_notice",
  period: "P30D",
});
export const LIQUID = clause("7.3", "exclusion", "Liquid", {
  exclusion: "liquid",
  evidence: ["photo of the traces"],
});
export const CLAUSES = [DOA, SYSTEMS, DRIVES, USED, FLOOR, DAMAGE, BENT, FEE];

/** A drive, shipped Monday 5 January 2026, delivered two days later, claimed in June. */
export function claim(
  more: Partial<Omit<DecideInput, "sale" | "part">> & {
    sale?: Partial<DecideInput["sale"]>;
    part?: Partial<DecideInput["part"]>;
  } = {},
): DecideInput {
  return {
    clauses: CLAUSES,
    what: "drive bay 1, VS-19F4-7K3Q",
    faultClass: "failed_drive",
    claimOn: "2026-06-03",
    evidence: { photos: 0, logs: 1 },
    established: [],
    ruledOut: [],
    readings: {},
    earlier: [],
    openRma: null,
    week: { workdays: [1, 2, 3, 4, 5], holidays: ["2026-12-25"] },
    ...more,
    sale: {
      shippedOn: "2026-01-05",
      deliveredOn: "2026-01-07",
      invoicedOn: null,
      installedOn: null,
      condition: "new",
      buyerKind: "business",
      country: "IE",
      pauses: [],
      transfers: [],
      ...more.sale,
    },
    part: { family: "drive", within: null, swaps: [], originKnown: true, ...more.part },
  };
}
