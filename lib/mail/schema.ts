// Lists here become PostgreSQL enums in db/schema/mail.ts: add at the end, with a migration.

export const RAW_STATES = ["received", "parsed", "unreadable", "duplicate"] as const;
export const DIRECTIONS = ["in", "out"] as const;
/** What kind of mail it is; only `person` is ever answered. */
export const MAIL_KINDS = ["person", "auto_reply", "bounce", "list", "calendar", "unreadable"] as const;
export type MailKind = (typeof MAIL_KINDS)[number];
export const HELD_STATES = ["held", "admitted", "discarded"] as const;
export const OUTBOX_STATES = ["pending", "sending", "sent", "dead"] as const;
export type OutboxState = (typeof OUTBOX_STATES)[number];

export const TEMPLATES = [
  "acknowledgement",
  "sign_in",
  "decision",
  "evidence_wanted",
  "rma_authorized",
  "rma_declined",
  "received",
  "bench_result",
  "shipped",
  "settled",
  "reply",
] as const;
export type TemplateName = (typeof TEMPLATES)[number];
