// Lists here become PostgreSQL enums in db/schema/evidence.ts: add at the end, with a migration.

export const EVIDENCE_KINDS = ["photo", "video", "log", "document"] as const;
export type EvidenceKind = (typeof EVIDENCE_KINDS)[number];
export const EVIDENCE_SOURCES = ["mail", "portal", "staff", "dock", "bench"] as const;
export type EvidenceSource = (typeof EVIDENCE_SOURCES)[number];
