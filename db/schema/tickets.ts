import { sql } from "drizzle-orm";
import {
  boolean,
  check,
  date,
  index,
  integer,
  jsonb,
  pgEnum,
  pgSequence,
  pgTable,
  text,
  uniqueIndex,
  uuid,
} from "drizzle-orm/pg-core";
import { CHANNELS, ENTRY_KINDS, ENTRY_LETTERS, TIE_STATES, WAITING_ON } from "../../lib/tickets/schema";
import { id, instant } from "./columns";
import { accounts, contacts, units } from "./ledger";

export const channel = pgEnum("channel", CHANNELS);
export const waitingOn = pgEnum("waiting_on", WAITING_ON);
export const entryLetter = pgEnum("entry_letter", ENTRY_LETTERS);
export const entryKind = pgEnum("entry_kind", ENTRY_KINDS);
export const tieState = pgEnum("tie_state", TIE_STATES);

export const ticketNumber = pgSequence("ticket_number", { startWith: 3001 });

export const tickets = pgTable(
  "ticket",
  {
    id: id(),
    number: integer("number").notNull(),
    accountId: uuid("account_id").references(() => accounts.id),
    contactId: uuid("contact_id").references(() => contacts.id),
    /** Where answers go; kept also for a person who is no contact of any account. */
    personName: text("person_name").notNull(),
    personEmail: text("person_email").notNull(),
    channel: channel("channel").notNull(),
    subject: text("subject").notNull(),
    /** In the customer's words. */
    faultWords: text("fault_words").notNull(),
    receivedAt: instant("received_at").notNull(),
    /** Day of first receipt in the seller's zone: the day a claim counts on. */
    claimOn: date("claim_on").notNull(),
    // The next six are derived from the record by tickets/rules.ts and can be recomputed.
    waitingOn: waitingOn("waiting_on").notNull(),
    waitingFor: text("waiting_for").notNull(),
    clockStartedAt: instant("clock_started_at"),
    dueAt: instant("due_at"),
    chaseOn: date("chase_on"),
    closedAt: instant("closed_at"),
    lastEntryAt: instant("last_entry_at").notNull(),
    lastEntryLine: text("last_entry_line").notNull(),
    /** How many pieces of evidence were asked for and how many of those came. */
    evidenceWanted: integer("evidence_wanted").notNull().default(0),
    evidenceCame: integer("evidence_came").notNull().default(0),
    version: integer("version").notNull().default(1),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("ticket_number_once").on(t.number),
    index("ticket_queue")
      .on(t.waitingOn, t.dueAt, t.id)
      .where(sql`closed_at is null`),
    index("ticket_of_account").on(t.accountId, t.lastEntryAt),
    index("ticket_of_email").on(t.personEmail),
    index("ticket_by_entry").on(t.lastEntryAt, t.id),
  ],
);

/** A unit on a ticket: proposed by the machine, tied by a person, or dismissed. */
export const ticketUnits = pgTable(
  "ticket_unit",
  {
    id: id(),
    ticketId: uuid("ticket_id")
      .notNull()
      .references(() => tickets.id),
    accountId: uuid("account_id").references(() => accounts.id),
    /** What the claim is about: a system, or a part in one. */
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    /** The system it stands in, when it is a part. */
    systemUnitId: uuid("system_unit_id").references(() => units.id),
    slot: text("slot"),
    faultClass: text("fault_class"),
    faultWords: text("fault_words").notNull().default(""),
    /** Guided answers of the portal: question to answer. */
    answers: jsonb("answers").$type<Record<string, string>>().notNull().default({}),
    /** The day of the receipt that first named this unit; none: the ticket's own. */
    claimOn: date("claim_on"),
    state: tieState("state").notNull(),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("ticket_unit_once").on(t.ticketId, t.unitId),
    index("ticket_unit_of_unit").on(t.unitId),
    index("ticket_unit_of_system").on(t.systemUnitId),
  ],
);

/** The record: one line of a ticket's log. A trigger refuses every change of it. */
export const entries = pgTable(
  "entry",
  {
    id: id(),
    ticketId: uuid("ticket_id")
      .notNull()
      .references(() => tickets.id),
    accountId: uuid("account_id").references(() => accounts.id),
    letter: entryLetter("letter").notNull(),
    number: integer("number").notNull(),
    kind: entryKind("kind").notNull(),
    at: instant("at").notNull(),
    actorKind: text("actor_kind").notNull(),
    actorId: uuid("actor_id"),
    actorName: text("actor_name").notNull(),
    customerSees: boolean("customer_sees").notNull(),
    /** One plain line. */
    line: text("line").notNull(),
    /** Facts by kind; shape in lib/tickets/schema.ts. Holds ids of what the module's own tables keep. */
    data: jsonb("data").$type<Record<string, unknown>>().notNull().default({}),
    /** Order within the ticket, for two entries at one instant. */
    seq: integer("seq").notNull(),
  },
  (t) => [
    uniqueIndex("entry_reference_once").on(t.ticketId, t.letter, t.number),
    uniqueIndex("entry_order_once").on(t.ticketId, t.seq),
    check("entry_number_from_one", sql`${t.number} >= 1`),
  ],
);

/** Who may write into the record by mail. */
export const ticketParticipants = pgTable(
  "ticket_participant",
  {
    id: id(),
    ticketId: uuid("ticket_id")
      .notNull()
      .references(() => tickets.id),
    email: text("email").notNull(),
    name: text("name").notNull(),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [uniqueIndex("participant_once").on(t.ticketId, t.email)],
);
