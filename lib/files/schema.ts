// Lists here become PostgreSQL enums in db/schema/files.ts: add at the end, with a migration.

/** pending: promised, no bytes yet. quarantined: bytes are there, nobody but the check job reads them. */
export const FILE_STATES = ["pending", "quarantined", "clean", "rejected"] as const;
export type FileState = (typeof FILE_STATES)[number];
/** What a file was sent for; decides who may see it and which types it may have. */
export const FILE_PURPOSES = ["evidence", "dock_photo", "bench_photo", "paper", "import"] as const;
export type FilePurpose = (typeof FILE_PURPOSES)[number];
