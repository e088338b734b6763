import { index, jsonb, pgEnum, pgTable, text, uniqueIndex, uuid } from "drizzle-orm/pg-core";
import { EVIDENCE_KINDS, EVIDENCE_SOURCES } from "../../lib/evidence/schema";
import { id, instant } from "./columns";
import { files } from "./files";
import { accounts } from "./ledger";
import { tickets, ticketUnits } from "./tickets";

export const evidenceKind = pgEnum("evidence_kind", EVIDENCE_KINDS);
export const evidenceSource = pgEnum("evidence_source", EVIDENCE_SOURCES);

/** A file that shows something about a fault. Ticketless while a portal report is being written. */
export const evidence = pgTable(
  "evidence",
  {
    id: id(),
    fileId: uuid("file_id")
      .notNull()
      .references(() => files.id),
    ticketId: uuid("ticket_id").references(() => tickets.id),
    ticketUnitId: uuid("ticket_unit_id").references(() => ticketUnits.id),
    accountId: uuid("account_id").references(() => accounts.id),
    /** The portal report it was sent for, before there is a ticket. */
    reportId: uuid("report_id"),
    kind: evidenceKind("kind").notNull(),
    source: evidenceSource("source").notNull(),
    /** What it was asked for, such as "photo of the socket". */
    wanted: text("wanted"),
    caption: text("caption").notNull().default(""),
    fromName: text("from_name").notNull(),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("evidence_one_per_file").on(t.fileId),
    index("evidence_of_ticket").on(t.ticketId),
    index("evidence_of_report").on(t.reportId),
  ],
);

/** A fact the machine read out of a log, with the lines it came from. */
export const readings = pgTable(
  "reading",
  {
    id: id(),
    evidenceId: uuid("evidence_id")
      .notNull()
      .references(() => evidence.id),
    accountId: uuid("account_id").references(() => accounts.id),
    field: text("field").notNull(),
    value: text("value").notNull(),
    measure: text("measure"),
    lines: jsonb("lines").$type<{ no: number; text: string }[]>().notNull(),
  },
  (t) => [index("reading_of_evidence").on(t.evidenceId)],
);

/** A portal report while it is being written: answers kept page by page, then turned into a ticket. */
export const reports = pgTable(
  "report",
  {
    id: id(),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    userId: uuid("user_id").notNull(),
    answers: jsonb("answers").$type<Record<string, string>>().notNull().default({}),
    ticketId: uuid("ticket_id").references(() => tickets.id),
    createdAt: instant("created_at").notNull(),
    updatedAt: instant("updated_at").notNull(),
    sentAt: instant("sent_at"),
  },
  (t) => [index("report_of_account").on(t.accountId, t.createdAt)],
);
