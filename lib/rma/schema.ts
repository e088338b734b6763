// Lists here become PostgreSQL enums in db/schema/rma.ts: add at the end, with a migration.

export const RMA_STATES = [
  "requested",
  "authorized",
  "in_transit",
  "received",
  "at_bench",
  "settled",
  "declined",
  "expired",
  "withdrawn",
] as const;
export type RmaState = (typeof RMA_STATES)[number];

export const RMA_STATE_WORDS: Record<RmaState, string> = {
  requested: "requested",
  authorized: "authorized",
  in_transit: "in transit",
  received: "received",
  at_bench: "at the bench",
  settled: "settled",
  declined: "declined",
  expired: "expired",
  withdrawn: "withdrawn",
};

export const LINE_STATES = ["open", "received", "tested", "settled", "cancelled"] as const;
export type LineState = (typeof LINE_STATES)[number];
export const OPEN_LINE_STATES: readonly LineState[] = ["open", "received", "tested"];

export const FEE_KINDS = ["no_fault_found", "restocking", "diagnostic", "not_returned", "freight"] as const;
export type FeeKind = (typeof FEE_KINDS)[number];
