import { bigint, index, jsonb, pgTable, text, uuid, customType, uniqueIndex } from "drizzle-orm/pg-core";
import { id, instant } from "./columns";

const bytea = customType<{ data: Buffer }>({ dataType: () => "bytea" });

/**
 * One row per write, in the write's transaction, without foreign keys: it outlives what it
 * tells of. A deferred trigger chains the rows by hash at commit; the roles may only insert.
 */
export const auditRows = pgTable(
  "audit_row",
  {
    id: id(),
    at: instant("at").notNull(),
    actorKind: text("actor_kind").notNull(),
    actorId: uuid("actor_id"),
    actorName: text("actor_name").notNull(),
    act: text("act").notNull(),
    subjectType: text("subject_type").notNull(),
    subjectId: text("subject_id").notNull(),
    before: jsonb("before"),
    after: jsonb("after"),
    requestId: text("request_id").notNull(),
    /** Place in the chain, its predecessor's hash and its own: filled at commit. */
    chainNo: bigint("chain_no", { mode: "number" }),
    previousHash: bytea("previous_hash"),
    hash: bytea("hash"),
  },
  (t) => [
    uniqueIndex("audit_chain_once").on(t.chainNo),
    index("audit_of_subject").on(t.subjectType, t.subjectId),
    index("audit_by_time").on(t.at),
  ],
);

/** Answers kept for Idempotency-Key replays. */
export const idempotencyKeys = pgTable(
  "idempotency_key",
  {
    id: id(),
    key: text("key").notNull(),
    actorId: uuid("actor_id").notNull(),
    requestHash: text("request_hash").notNull(),
    status: bigint("status", { mode: "number" }),
    body: jsonb("body"),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [uniqueIndex("idempotency_key_once").on(t.actorId, t.key)],
);
