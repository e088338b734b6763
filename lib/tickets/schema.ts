// Lists here become PostgreSQL enums in db/schema/tickets.ts: add at the end, with a migration.

export const CHANNELS = ["mail", "portal", "staff"] as const;
export type Channel = (typeof CHANNELS)[number];

/** Whose move it is. Derived from the record by rules.ts, never set by hand. */
export const WAITING_ON = ["us", "customer", "carrier", "dock", "bench", "supplier", "nobody"] as const;
export type WaitingOn = (typeof WAITING_ON)[number];

/** The letter of an entry's reference: M1, E1, C1. Numbers count per letter and never change. */
export const ENTRY_LETTERS = ["M", "E", "C", "R", "D", "B", "S", "N"] as const;
export type EntryLetter = (typeof ENTRY_LETTERS)[number];

/** What happened. Each kind has one letter (rules.ts) and says whose move follows. */
export const ENTRY_KINDS = [
  "mail_in", // M: the customer wrote, by mail or in the portal
  "mail_out", // M: a person of the desk wrote
  "mail_auto", // M: an automatic mail of ours: acknowledgement, notice
  "mail_noted", // M: auto-reply, bounce or carrier notice filed without a change
  "fault_reported", // E: portal report with the customer's answers
  "evidence_added", // E
  "evidence_wanted", // E
  "unit_tied", // N
  "note", // N: for us only
  "decision", // C
  "rma_requested", // R
  "rma_authorized", // R
  "rma_declined", // R
  "rma_expired", // R
  "rma_withdrawn", // R
  "rma_settled", // R
  "parcel_sent", // S: the customer's parcel is on its way to us
  "dock_received", // D
  "dock_stopped", // D: a wrong or unknown serial was set aside
  "bench_started", // B
  "bench_closed", // B
  "replacement_shipped", // S
  "closed", // N
] as const;
export type EntryKind = (typeof ENTRY_KINDS)[number];

export const TIE_STATES = ["proposed", "tied", "dismissed"] as const;
export type TieState = (typeof TIE_STATES)[number];
