import { sql } from "drizzle-orm";
import {
  char,
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
import { FEE_KINDS, LINE_STATES, RMA_STATES } from "../../lib/rma/schema";
import { id, instant } from "./columns";
import { coverageDecisions, remedy } from "./coverage";
import { accounts, sites, units } from "./ledger";
import { tickets, ticketUnits } from "./tickets";

export const rmaState = pgEnum("rma_state", RMA_STATES);
export const lineState = pgEnum("rma_line_state", LINE_STATES);
export const feeKind = pgEnum("fee_kind", FEE_KINDS);

export const rmaNumber = pgSequence("rma_number", { startWith: 1201 });

export const rmas = pgTable(
  "rma",
  {
    id: id(),
    /** RMA-1207-K: a count and its check character. */
    number: text("number").notNull(),
    ticketId: uuid("ticket_id")
      .notNull()
      .references(() => tickets.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    state: rmaState("state").notNull(),
    remedy: remedy("remedy").notNull(),
    siteId: uuid("site_id")
      .notNull()
      .references(() => sites.id),
    authorizedAt: instant("authorized_at"),
    authorizedByName: text("authorized_by_name"),
    /** Send it by this day, rolled to a working day of the site. */
    expiresOn: date("expires_on"),
    dueBackOn: date("due_back_on"),
    shipTo: text("ship_to").array().notNull().default([]),
    /** Answers about batteries: a damaged one blocks every label. */
    battery: jsonb("battery").$type<{ present: boolean; damaged: boolean }>(),
    reason: text("reason"),
    settledAt: instant("settled_at"),
    version: integer("version").notNull().default(1),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("rma_number_once").on(t.number),
    index("rma_of_ticket").on(t.ticketId),
    index("rma_of_account").on(t.accountId, t.createdAt),
    index("rma_by_state").on(t.state, t.expiresOn),
  ],
);

export const rmaLines = pgTable(
  "rma_line",
  {
    id: id(),
    rmaId: uuid("rma_id")
      .notNull()
      .references(() => rmas.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    ticketUnitId: uuid("ticket_unit_id")
      .notNull()
      .references(() => ticketUnits.id),
    /** What comes back: its serial is what the dock must scan. */
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    decisionId: uuid("decision_id").references(() => coverageDecisions.id),
    remedy: remedy("remedy").notNull(),
    faultWords: text("fault_words").notNull(),
    state: lineState("state").notNull(),
    sort: integer("sort").notNull(),
  },
  (t) => [
    // At most one open line per unit: two agents cannot authorize one serial.
    uniqueIndex("rma_line_one_open")
      .on(t.unitId)
      .where(sql`state in ('open','received','tested')`),
    index("line_of_rma").on(t.rmaId),
  ],
);

export const feeNotices = pgTable(
  "fee_notice",
  {
    id: id(),
    rmaLineId: uuid("rma_line_id")
      .notNull()
      .references(() => rmaLines.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    kind: feeKind("kind").notNull(),
    cents: integer("cents").notNull(),
    currency: char("currency", { length: 3 }).notNull(),
    words: text("words").notNull(),
    noticedAt: instant("noticed_at").notNull(),
  },
  (t) => [uniqueIndex("fee_once").on(t.rmaLineId, t.kind)],
);
