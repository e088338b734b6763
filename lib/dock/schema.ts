import { z } from "zod";

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

export const PHOTO_SLOTS = ["label", "arrived", "socket", "damage", "outbound", "finding"] as const;
export type PhotoSlot = (typeof PHOTO_SLOTS)[number];
export const PHOTO_SLOT_WORDS: Record<PhotoSlot, string> = {
  label: "Serial label",
  arrived: "As it arrived",
  socket: "Sockets, caps off",
  damage: "Any damage",
  outbound: "Before shipping",
  finding: "The finding",
};

export const KeepPhoto = z.object({
  fileId: z.uuid(),
  subject: z.enum(PHOTO_SUBJECTS),
  subjectId: z.uuid(),
  slot: z.enum(PHOTO_SLOTS),
});
export const ReceiveLine = z.object({
  lineId: z.uuid(),
  scanned: z.string().min(1, "Scan the serial first.").max(120),
  place: z.string().trim().min(1, "Scan or type the bay it goes to.").max(40),
  condition: z.enum(RECEIVED_CONDITIONS).default("good"),
  note: z.string().trim().max(1000).default(""),
  clientId: z.uuid(),
});
export const SetAside = z.object({
  scanned: z.string().min(1).max(120),
  rmaId: z.uuid().nullish(),
  expected: z.string().max(120).nullish(),
  kind: z.enum(DISCREPANCY_KINDS),
  place: z.string().trim().min(1).max(40).default("Q-2"),
  note: z.string().trim().max(1000).default(""),
  clientId: z.uuid(),
});
export const StartBench = z.object({
  lineId: z.uuid(),
  scan: z.string().min(1, "Scan the unit in first.").max(120),
});
export const KeepReading = z.object({
  testId: z.uuid(),
  step: z.number().int().min(1).max(40),
  value: z.string().trim().max(200).default(""),
  verdict: z.enum(STEP_VERDICTS).nullish(),
  note: z.string().trim().max(500).default(""),
});
export const CloseBench = z.object({
  testId: z.uuid(),
  scan: z.string().min(1, "Scan the unit out: two alike on one bench get swapped.").max(120),
  outcome: z.enum(TEST_OUTCOMES, { error: "Choose the outcome." }),
  disposition: z.enum(DISPOSITIONS, { error: "Choose what becomes of it." }),
  finding: z.string().trim().min(3, "Say what was found, in a sentence the customer can read.").max(2000),
  secondPerson: z.string().trim().max(120).default(""),
  sanitization: z
    .object({
      method: z.enum(SANITIZE_METHODS),
      technique: z.string().trim().min(2),
      tool: z.string().trim().min(1),
      verification: z.string().trim().min(1),
    })
    .nullish(),
});
export const ShipOut = z.object({
  lineId: z.uuid(),
  serial: z.string().min(1, "Scan the replacement first.").max(120),
  carrier: z.string().trim().min(2, "Name the carrier.").max(80),
  tracking: z.string().trim().max(80).default(""),
  acceptWarnings: z.boolean().default(false),
});
export const SendBack = z.object({
  lineId: z.uuid(),
  carrier: z.string().trim().min(2, "Name the carrier.").max(80),
  tracking: z.string().trim().max(80).default(""),
});
