import { sql } from "drizzle-orm";
import {
  boolean,
  customType,
  index,
  integer,
  jsonb,
  pgEnum,
  pgTable,
  text,
  uniqueIndex,
  uuid,
} from "drizzle-orm/pg-core";
import {
  DIRECTIONS,
  HELD_STATES,
  MAIL_KINDS,
  OUTBOX_STATES,
  RAW_STATES,
  TEMPLATES,
} from "../../lib/mail/schema";
import { id, instant } from "./columns";
import { accounts } from "./ledger";
import { tickets } from "./tickets";

const bytea = customType<{ data: Buffer }>({ dataType: () => "bytea" });

export const rawState = pgEnum("raw_state", RAW_STATES);
export const direction = pgEnum("mail_direction", DIRECTIONS);
export const mailKind = pgEnum("mail_kind", MAIL_KINDS);
export const heldState = pgEnum("held_state", HELD_STATES);
export const outboxState = pgEnum("outbox_state", OUTBOX_STATES);
export const template = pgEnum("mail_template", TEMPLATES);

/** Every accepted mail, byte for byte, committed before the 250. */
export const rawMails = pgTable(
  "raw_mail",
  {
    id: id(),
    receivedAt: instant("received_at").notNull(),
    envelopeFrom: text("envelope_from").notNull(),
    envelopeTo: text("envelope_to").array().notNull(),
    remoteAddress: text("remote_address").notNull(),
    size: integer("size").notNull(),
    sha256: text("sha256").notNull(),
    bytes: bytea("bytes").notNull(),
    state: rawState("state").notNull(),
    error: text("error"),
  },
  (t) => [
    index("raw_by_time").on(t.receivedAt),
    // The same bytes to the same people from the same sender are one delivery, resent.
    uniqueIndex("raw_once").on(t.sha256, t.envelopeFrom, sql`envelope_to`),
  ],
);

export const messages = pgTable(
  "message",
  {
    id: id(),
    direction: direction("direction").notNull(),
    ticketId: uuid("ticket_id").references(() => tickets.id),
    accountId: uuid("account_id").references(() => accounts.id),
    rawMailId: uuid("raw_mail_id").references(() => rawMails.id),
    /** With angle brackets, as in the header. */
    messageId: text("message_id").notNull(),
    inReplyTo: text("in_reply_to"),
    references: text("references").array().notNull().default([]),
    kind: mailKind("kind").notNull(),
    fromEmail: text("from_email").notNull(),
    fromName: text("from_name").notNull().default(""),
    toEmails: text("to_emails").array().notNull().default([]),
    subject: text("subject").notNull(),
    sentAt: instant("sent_at").notNull(),
    text: text("text").notNull().default(""),
    /** Sanitized. */
    html: text("html"),
    /** Where folded quotes begin and end, in lines of `text`: [[from, to], …]. */
    folds: jsonb("folds").$type<[number, number][]>().notNull().default([]),
    /** Why we think it is from whom it says: "proved", or the reason it is not. */
    proof: text("proof").notNull().default("not_checked"),
    /** Each step of the threading decision with its reason. */
    filing: jsonb("filing").$type<{ step: string; reason: string }[]>().notNull().default([]),
    contentHash: text("content_hash").notNull(),
  },
  (t) => [
    uniqueIndex("message_out_once")
      .on(t.messageId)
      .where(sql`direction = 'out'`),
    uniqueIndex("message_in_once")
      .on(t.messageId, t.contentHash)
      .where(sql`direction = 'in'`),
    index("message_by_id").on(t.messageId),
    index("message_of_ticket").on(t.ticketId, t.sentAt),
    index("message_from").on(t.fromEmail),
  ],
);

export const heldMails = pgTable(
  "held_mail",
  {
    id: id(),
    messageId: uuid("message_id")
      .notNull()
      .references(() => messages.id),
    /** The ticket it speaks of, if any: shown to staff, never joined by itself. */
    hintTicketId: uuid("hint_ticket_id").references(() => tickets.id),
    reason: text("reason").notNull(),
    state: heldState("state").notNull(),
    heldAt: instant("held_at").notNull(),
    decidedAt: instant("decided_at"),
    decidedBy: uuid("decided_by"),
  },
  (t) => [
    uniqueIndex("held_once").on(t.messageId),
    index("held_open")
      .on(t.heldAt)
      .where(sql`state = 'held'`),
  ],
);

export const outbox = pgTable(
  "outbox",
  {
    id: id(),
    messageRowId: uuid("message_row_id")
      .notNull()
      .references(() => messages.id),
    ticketId: uuid("ticket_id").references(() => tickets.id),
    toEmail: text("to_email").notNull(),
    toName: text("to_name").notNull().default(""),
    template: template("template").notNull(),
    props: jsonb("props").$type<Record<string, unknown>>().notNull(),
    automatic: boolean("automatic").notNull(),
    /** Files sent with it: ids of files or papers to draw. */
    attachments: jsonb("attachments")
      .$type<({ fileId: string; name: string } | { paper: string; id: string; name: string })[]>()
      .notNull()
      .default([]),
    replyTo: text("reply_to"),
    state: outboxState("state").notNull(),
    attempts: integer("attempts").notNull().default(0),
    nextAt: instant("next_at").notNull(),
    leaseUntil: instant("lease_until"),
    lastError: text("last_error"),
    createdAt: instant("created_at").notNull(),
    sentAt: instant("sent_at"),
  },
  (t) => [
    uniqueIndex("outbox_one_per_message").on(t.messageRowId),
    index("outbox_due")
      .on(t.nextAt)
      .where(sql`state in ('pending','sending')`),
    index("outbox_dead")
      .on(t.createdAt)
      .where(sql`state = 'dead'`),
  ],
);
