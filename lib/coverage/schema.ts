// Lists here become PostgreSQL enums in db/schema/coverage.ts: add at the end, with a migration.

export const CLAUSE_KINDS = ["doa", "cover", "replaced_part", "exclusion", "fee", "transfer"] as const;
export type ClauseKind = (typeof CLAUSE_KINDS)[number];

export const START_BASES = ["shipped", "delivered", "invoiced", "installed"] as const;
export type StartBasis = (typeof START_BASES)[number];

export const DAY_RULES = ["event_day_excluded", "start_day_included"] as const;
export type DayRule = (typeof DAY_RULES)[number];

export const REMEDIES = [
  "advance_replacement",
  "replacement_on_receipt",
  "repair",
  "credit",
  "refund",
] as const;
export type Remedy = (typeof REMEDIES)[number];

export const REMEDY_WORDS: Record<Remedy, string> = {
  advance_replacement: "advance replacement",
  replacement_on_receipt: "replacement on receipt",
  repair: "repair",
  credit: "credit",
  refund: "refund",
};

export const OUTCOMES = ["covered", "covered_doa", "not_covered", "needs_person"] as const;
export type Outcome = (typeof OUTCOMES)[number];

export const WINDOW_KINDS = ["doa", "cover"] as const;
export type WindowKind = (typeof WINDOW_KINDS)[number];

export const FAULT_CLASSES = [
  "no_power",
  "not_detected",
  "errors_logged",
  "failed_drive",
  "noise_or_heat",
  "network_port",
  "bent_contacts",
  "physical_damage",
  "liquid",
  "restarts",
  "other",
] as const;
export type FaultClass = (typeof FAULT_CLASSES)[number];
