import { sql } from "drizzle-orm";
import {
  check,
  date,
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
  CLAUSE_KINDS,
  DAY_RULES,
  OUTCOMES,
  REMEDIES,
  START_BASES,
  WINDOW_KINDS,
} from "../../lib/coverage/schema";
import { id, instant } from "./columns";
import { accounts, condition, family, installations, saleLines, units } from "./ledger";
import { tickets, ticketUnits } from "./tickets";

export const clauseKind = pgEnum("clause_kind", CLAUSE_KINDS);
export const startBasis = pgEnum("start_basis", START_BASES);
export const dayRule = pgEnum("day_rule", DAY_RULES);
export const remedy = pgEnum("remedy", REMEDIES);
export const outcome = pgEnum("outcome", OUTCOMES);
export const windowKind = pgEnum("window_kind", WINDOW_KINDS);

export const terms = pgTable(
  "terms",
  { id: id(), code: text("code").notNull(), name: text("name").notNull() },
  (t) => [uniqueIndex("terms_code_once").on(t.code)],
);

/** One issue of terms. Once published, a trigger refuses every change of it and its clauses. */
export const termsVersions = pgTable(
  "terms_version",
  {
    id: id(),
    termsId: uuid("terms_id")
      .notNull()
      .references(() => terms.id),
    issue: integer("issue").notNull(),
    effectiveOn: date("effective_on").notNull(),
    publishedAt: instant("published_at"),
    note: text("note").notNull().default(""),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [uniqueIndex("terms_issue_once").on(t.termsId, t.issue)],
);

export const clauses = pgTable(
  "clause",
  {
    id: id(),
    termsVersionId: uuid("terms_version_id")
      .notNull()
      .references(() => termsVersions.id),
    /** As people cite it: "3.1". */
    number: text("number").notNull(),
    kind: clauseKind("kind").notNull(),
    title: text("title").notNull(),
    /** Empty: every family. */
    families: family("families").array().notNull().default([]),
    /** None: any condition. */
    condition: condition("condition"),
    /** ISO 8601, such as P36M. */
    period: text("period"),
    startBasis: startBasis("start_basis"),
    /** Delivery counts as ship day plus this many days when there is no proof of delivery. */
    deliveryGraceDays: integer("delivery_grace_days").notNull().default(0),
    dayRule: dayRule("day_rule").notNull().default("event_day_excluded"),
    remedies: remedy("remedies").array().notNull().default([]),
    dueBackDays: integer("due_back_days"),
    enduranceHours: integer("endurance_hours"),
    enduranceTb: integer("endurance_tb"),
    /** For an exclusion: which fault it is about, and the evidence that must show it. */
    exclusion: text("exclusion"),
    evidence: text("evidence").array().notNull().default([]),
    feeKind: text("fee_kind"),
    feeCents: integer("fee_cents"),
    /** In our own plain words, shown to the customer. */
    words: text("words").notNull().default(""),
    sort: integer("sort").notNull(),
  },
  (t) => [uniqueIndex("clause_number_once").on(t.termsVersionId, t.number)],
);

/**
 * What the engine says a sale gives, clause by clause and part by part: a cache for rulers,
 * lists and rates, rebuilt by coverage/commands.refreshCover and equal to rules.windows().
 */
export const coverWindows = pgTable(
  "cover_window",
  {
    id: id(),
    saleLineId: uuid("sale_line_id")
      .notNull()
      .references(() => saleLines.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    /** None: the sold unit itself. */
    installationId: uuid("installation_id").references(() => installations.id),
    clauseId: uuid("clause_id")
      .notNull()
      .references(() => clauses.id),
    kind: windowKind("kind").notNull(),
    firstOn: date("first_on").notNull(),
    lastOn: date("last_on").notNull(),
    /** True where the floor of the replaced-part clause decides, not the remainder. */
    byFloor: integer("by_floor").notNull().default(0),
    engine: text("engine").notNull(),
  },
  (t) => [
    index("window_of_sale").on(t.saleLineId),
    index("window_of_unit").on(t.unitId),
    index("window_of_installation").on(t.installationId),
    check("window_days", sql`${t.lastOn} >= ${t.firstOn}`),
  ],
);

/** The engine's answer as it was made. A trigger refuses every change of it. */
export const coverageDecisions = pgTable(
  "coverage_decision",
  {
    id: id(),
    ticketId: uuid("ticket_id")
      .notNull()
      .references(() => tickets.id),
    ticketUnitId: uuid("ticket_unit_id").references(() => ticketUnits.id),
    accountId: uuid("account_id").references(() => accounts.id),
    unitId: uuid("unit_id").references(() => units.id),
    saleLineId: uuid("sale_line_id").references(() => saleLines.id),
    engine: text("engine").notNull(),
    inputs: jsonb("inputs").notNull(),
    outcome: outcome("outcome").notNull(),
    /** What rules.decide() gave, whole. */
    answer: jsonb("answer").notNull(),
    remedies: remedy("remedies").array().notNull(),
    claimOn: date("claim_on").notNull(),
    lastCoveredOn: date("last_covered_on"),
    previousId: uuid("previous_id"),
    madeBy: uuid("made_by"),
    madeByName: text("made_by_name").notNull(),
    madeAt: instant("made_at").notNull(),
  },
  (t) => [index("decision_of_ticket").on(t.ticketId, t.madeAt), index("decision_of_unit").on(t.unitId)],
);
