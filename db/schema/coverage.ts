import { sql } from "drizzle-orm";
import {
  boolean,
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
  FREIGHT_RULES,
  GOODWILL_STATES,
  LAW_REGIONS,
  OUTCOMES,
  PREVIEW_STATES,
  REMEDIES,
  REPLACED_RULES,
  START_BASES,
  TRANSFER_RULES,
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
export const replacedRule = pgEnum("replaced_rule", REPLACED_RULES);
export const transferRule = pgEnum("transfer_rule", TRANSFER_RULES);
export const freightRule = pgEnum("freight_rule", FREIGHT_RULES);
export const goodwillState = pgEnum("goodwill_state", GOODWILL_STATES);
export const previewState = pgEnum("preview_state", PREVIEW_STATES);
export const lawRegion = pgEnum("law_region", LAW_REGIONS);

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
    /** Counts the changes of a draft: who saves over another's change is told. */
    version: integer("version").notNull().default(1),
    madeByName: text("made_by_name").notNull().default(""),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("terms_issue_once").on(t.termsId, t.issue),
    uniqueIndex("terms_one_draft")
      .on(t.termsId)
      .where(sql`published_at is null`),
  ],
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
    rolls: boolean("rolls").notNull().default(true),
    clockStops: boolean("clock_stops").notNull().default(true),
    replacedRule: replacedRule("replaced_rule").notNull().default("later_of_both"),
    transferRule: transferRule("transfer_rule"),
    remedies: remedy("remedies").array().notNull().default([]),
    dueBackDays: integer("due_back_days"),
    holdCents: integer("hold_cents"),
    freight: freightRule("freight"),
    responseHours: integer("response_hours"),
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
    // Limits that a changed holiday may move.
    index("window_doa_end")
      .on(t.lastOn, t.saleLineId)
      .where(sql`kind = 'doa'`),
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

/** What a draft would do to what was sold, reckoned by the worker in steps that can be stopped. */
export const termsPreviews = pgTable(
  "terms_preview",
  {
    id: id(),
    termsVersionId: uuid("terms_version_id")
      .notNull()
      .references(() => termsVersions.id, { onDelete: "cascade" }),
    /** The draft's version that was reckoned: a later change makes the answer an old one. */
    ofVersion: integer("of_version").notNull(),
    state: previewState("state").notNull(),
    total: integer("total").notNull(),
    done: integer("done").notNull().default(0),
    /** Where the next step goes on. */
    afterId: uuid("after_id"),
    answer: jsonb("answer").notNull(),
    error: text("error"),
    createdByName: text("created_by_name").notNull(),
    createdAt: instant("created_at").notNull(),
    finishedAt: instant("finished_at"),
  },
  (t) => [index("preview_of_version").on(t.termsVersionId, t.createdAt)],
);

/** Cover that a manager grants, or not, where the decision was no. Asked by one person, granted by another. */
export const goodwills = pgTable(
  "goodwill",
  {
    id: id(),
    ticketId: uuid("ticket_id")
      .notNull()
      .references(() => tickets.id),
    ticketUnitId: uuid("ticket_unit_id")
      .notNull()
      .references(() => ticketUnits.id),
    accountId: uuid("account_id").references(() => accounts.id),
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    decisionId: uuid("decision_id")
      .notNull()
      .references(() => coverageDecisions.id),
    state: goodwillState("state").notNull(),
    askedBy: uuid("asked_by").notNull(),
    askedByName: text("asked_by_name").notNull(),
    askedAt: instant("asked_at").notNull(),
    reason: text("reason").notNull(),
    wantedRemedy: remedy("wanted_remedy").notNull(),
    answeredBy: uuid("answered_by"),
    answeredByName: text("answered_by_name"),
    answeredAt: instant("answered_at"),
    answer: text("answer").notNull().default(""),
    remedy: remedy("remedy"),
    /** The most it may cost us. */
    limitCents: integer("limit_cents"),
  },
  (t) => [
    index("goodwill_of_ticket").on(t.ticketId),
    index("goodwill_by_state").on(t.state, t.askedAt),
    uniqueIndex("goodwill_one_open")
      .on(t.ticketUnitId)
      .where(sql`state = 'asked'`),
    check(
      "goodwill_nobody_grants_their_own",
      sql`${t.answeredBy} is null or ${t.answeredBy} <> ${t.askedBy}`,
    ),
    check("goodwill_answered", sql`(${t.state} = 'asked') = (${t.answeredBy} is null)`),
    check(
      "goodwill_granted_with",
      sql`${t.state} <> 'granted' or (${t.remedy} is not null and ${t.limitCents} is not null)`,
    ),
  ],
);

/** A notice of rights by law, by region and buyer, from a day on. It warns beside the terms; it decides nothing. */
export const lawNotices = pgTable(
  "law_notice",
  {
    id: id(),
    region: lawRegion("region").notNull(),
    /** For consumers (and buyers we do not know), or for businesses. */
    forConsumers: boolean("for_consumers").notNull(),
    effectiveOn: date("effective_on").notNull(),
    title: text("title").notNull(),
    words: text("words").notNull(),
    source: text("source").notNull(),
    madeByName: text("made_by_name").notNull(),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [uniqueIndex("law_notice_once").on(t.region, t.forConsumers, t.effectiveOn)],
);
