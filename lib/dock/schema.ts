// Lists here become PostgreSQL enums in db/schema/dock.ts: add at the end, with a migration.

export const PARCEL_STATES = ["expected", "arrived", "set_aside"] as const;
export const DISCREPANCY_KINDS = [
  "wrong_unit",
  "missing",
  "extra",
  "damaged_by_carrier",
  "no_rma",
  "unknown_serial",
] as const;
export type DiscrepancyKind = (typeof DISCREPANCY_KINDS)[number];
export const RECEIVED_CONDITIONS = ["good", "packaging_poor", "damaged", "incomplete"] as const;
export type ReceivedCondition = (typeof RECEIVED_CONDITIONS)[number];
export const PHOTO_SUBJECTS = ["receipt_line", "discrepancy", "bench_test", "shipment"] as const;
export const TEST_OUTCOMES = ["fault_confirmed", "no_fault_found", "damage_not_covered"] as const;
export type TestOutcome = (typeof TEST_OUTCOMES)[number];
export const TEST_OUTCOME_WORDS: Record<TestOutcome, string> = {
  fault_confirmed: "fault confirmed",
  no_fault_found: "no fault found",
  damage_not_covered: "damage not covered",
};
export const DISPOSITIONS = ["restock", "repair", "return_to_supplier", "scrap", "send_back"] as const;
export type Disposition = (typeof DISPOSITIONS)[number];
export const STEP_VERDICTS = ["pass", "fail", "not_run"] as const;
export type StepVerdict = (typeof STEP_VERDICTS)[number];
export const SHIPMENT_DIRECTIONS = ["out", "in"] as const;
export const SANITIZE_METHODS = ["clear", "purge", "destroy"] as const;
