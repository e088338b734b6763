import { bigint, index, integer, pgEnum, pgTable, text, uniqueIndex, uuid } from "drizzle-orm/pg-core";
import { FILE_PURPOSES, FILE_STATES } from "../../lib/files/schema";
import { id, instant } from "./columns";
import { accounts } from "./ledger";

export const fileState = pgEnum("file_state", FILE_STATES);
export const filePurpose = pgEnum("file_purpose", FILE_PURPOSES);

/** What we know of a file. Its bytes lie at the upload host under `key`. */
export const files = pgTable(
  "file",
  {
    id: id(),
    /** Empty until the upload host has named it. Not a secret, so never in a URL. */
    key: text("key"),
    purpose: filePurpose("purpose").notNull(),
    /** The account whose people may see it; none for what is ours alone. */
    accountId: uuid("account_id").references(() => accounts.id),
    state: fileState("state").notNull(),
    /** As sent: display text, never a path. */
    name: text("name").notNull(),
    declaredType: text("declared_type").notNull(),
    declaredSize: bigint("declared_size", { mode: "number" }).notNull(),
    /** After the check. */
    type: text("type"),
    size: bigint("size", { mode: "number" }),
    sha256: text("sha256"),
    width: integer("width"),
    height: integer("height"),
    reason: text("reason"),
    uploadedBy: uuid("uploaded_by"),
    createdAt: instant("created_at").notNull(),
    checkedAt: instant("checked_at"),
  },
  (t) => [uniqueIndex("file_key_once").on(t.key), index("file_of_account").on(t.accountId)],
);
