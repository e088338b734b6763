import { sql } from "drizzle-orm";
import { date, index, integer, jsonb, pgEnum, pgTable, text, uniqueIndex, uuid } from "drizzle-orm/pg-core";
import {
  DISCREPANCY_KINDS,
  DISPOSITIONS,
  PARCEL_STATES,
  PHOTO_SUBJECTS,
  RECEIVED_CONDITIONS,
  SANITIZE_METHODS,
  SHIPMENT_DIRECTIONS,
  STEP_VERDICTS,
  TEST_OUTCOMES,
} from "../../lib/dock/schema";
import { id, instant } from "./columns";
import { files } from "./files";
import { accounts, installations, sites, units } from "./ledger";
import { rmaLines, rmas } from "./rma";

export const parcelState = pgEnum("parcel_state", PARCEL_STATES);
export const discrepancyKind = pgEnum("discrepancy_kind", DISCREPANCY_KINDS);
export const receivedCondition = pgEnum("received_condition", RECEIVED_CONDITIONS);
export const photoSubject = pgEnum("photo_subject", PHOTO_SUBJECTS);
export const testOutcome = pgEnum("test_outcome", TEST_OUTCOMES);
export const disposition = pgEnum("disposition", DISPOSITIONS);
export const stepVerdict = pgEnum("step_verdict", STEP_VERDICTS);
export const shipmentDirection = pgEnum("shipment_direction", SHIPMENT_DIRECTIONS);
export const sanitizeMethod = pgEnum("sanitize_method", SANITIZE_METHODS);

export const parcels = pgTable(
  "parcel",
  {
    id: id(),
    rmaId: uuid("rma_id").references(() => rmas.id),
    siteId: uuid("site_id")
      .notNull()
      .references(() => sites.id),
    state: parcelState("state").notNull(),
    carrier: text("carrier"),
    tracking: text("tracking"),
    expectedOn: date("expected_on"),
    arrivedAt: instant("arrived_at"),
    place: text("place"),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    index("parcel_of_rma").on(t.rmaId),
    index("parcel_expected")
      .on(t.expectedOn)
      .where(sql`state = 'expected'`),
  ],
);

/** One line of an RMA taken in: at most one receipt per line, whoever scans first. */
export const receiptLines = pgTable(
  "receipt_line",
  {
    id: id(),
    rmaLineId: uuid("rma_line_id")
      .notNull()
      .references(() => rmaLines.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    parcelId: uuid("parcel_id").references(() => parcels.id),
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    scanned: text("scanned").notNull(),
    condition: receivedCondition("condition").notNull(),
    place: text("place").notNull(),
    note: text("note").notNull().default(""),
    receivedAt: instant("received_at").notNull(),
    receivedByName: text("received_by_name").notNull(),
    /** Given by the scanning station, so that a resend is the same receipt. */
    clientId: uuid("client_id").notNull(),
  },
  (t) => [
    uniqueIndex("receipt_one_per_line").on(t.rmaLineId),
    uniqueIndex("receipt_client_once").on(t.clientId),
  ],
);

export const discrepancies = pgTable(
  "discrepancy",
  {
    id: id(),
    kind: discrepancyKind("kind").notNull(),
    rmaId: uuid("rma_id").references(() => rmas.id),
    parcelId: uuid("parcel_id").references(() => parcels.id),
    /** What the scanner read. */
    scanned: text("scanned").notNull(),
    expected: text("expected"),
    /** The unit it is, when we know it. */
    unitId: uuid("unit_id").references(() => units.id),
    place: text("place").notNull(),
    note: text("note").notNull().default(""),
    foundAt: instant("found_at").notNull(),
    foundByName: text("found_by_name").notNull(),
    clearedAt: instant("cleared_at"),
    clientId: uuid("client_id").notNull(),
  },
  (t) => [
    uniqueIndex("discrepancy_client_once").on(t.clientId),
    index("discrepancy_open")
      .on(t.foundAt)
      .where(sql`cleared_at is null`),
  ],
);

export const photos = pgTable(
  "photo",
  {
    id: id(),
    fileId: uuid("file_id")
      .notNull()
      .references(() => files.id),
    subject: photoSubject("subject").notNull(),
    /** Id of the receipt line, discrepancy, bench test or shipment; for a line being received, the RMA line. */
    subjectId: uuid("subject_id").notNull(),
    /** Which photo was asked for: "label", "arrived", "socket", "damage", "outbound". */
    slot: text("slot").notNull(),
    takenAt: instant("taken_at").notNull(),
    takenByName: text("taken_by_name").notNull(),
  },
  (t) => [uniqueIndex("photo_once").on(t.fileId), index("photo_of_subject").on(t.subject, t.subjectId)],
);

export const benchTests = pgTable(
  "bench_test",
  {
    id: id(),
    rmaLineId: uuid("rma_line_id")
      .notNull()
      .references(() => rmaLines.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    /** The checklist and its issue, as data in lib/dock. */
    sheet: text("sheet").notNull(),
    sheetIssue: integer("sheet_issue").notNull(),
    startedAt: instant("started_at").notNull(),
    startedByName: text("started_by_name").notNull(),
    scanIn: text("scan_in").notNull(),
    scanOut: text("scan_out"),
    outcome: testOutcome("outcome"),
    finding: text("finding").notNull().default(""),
    disposition: disposition("disposition"),
    secondPersonName: text("second_person_name"),
    closedAt: instant("closed_at"),
    closedByName: text("closed_by_name"),
    version: integer("version").notNull().default(1),
  },
  (t) => [
    uniqueIndex("bench_one_per_line").on(t.rmaLineId),
    index("bench_of_unit").on(t.unitId),
    index("bench_open")
      .on(t.startedAt)
      .where(sql`closed_at is null`),
  ],
);

export const stepReadings = pgTable(
  "step_reading",
  {
    id: id(),
    benchTestId: uuid("bench_test_id")
      .notNull()
      .references(() => benchTests.id),
    step: integer("step").notNull(),
    value: text("value").notNull().default(""),
    verdict: stepVerdict("verdict").notNull(),
    note: text("note").notNull().default(""),
    at: instant("at").notNull(),
    byName: text("by_name").notNull(),
  },
  (t) => [uniqueIndex("reading_once").on(t.benchTestId, t.step)],
);

export const sanitizationRecords = pgTable(
  "sanitization_record",
  {
    id: id(),
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    benchTestId: uuid("bench_test_id").references(() => benchTests.id),
    method: sanitizeMethod("method").notNull(),
    technique: text("technique").notNull(),
    tool: text("tool").notNull(),
    verification: text("verification").notNull(),
    doneAt: instant("done_at").notNull(),
    doneByName: text("done_by_name").notNull(),
  },
  (t) => [index("sanitized_unit").on(t.unitId)],
);

export const shipments = pgTable(
  "shipment",
  {
    id: id(),
    rmaId: uuid("rma_id")
      .notNull()
      .references(() => rmas.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    direction: shipmentDirection("direction").notNull(),
    carrier: text("carrier").notNull(),
    tracking: text("tracking").notNull().default(""),
    shippedAt: instant("shipped_at").notNull(),
    shippedByName: text("shipped_by_name").notNull(),
  },
  (t) => [index("shipment_of_rma").on(t.rmaId)],
);

/** The unit that went out for the one that came back, and the cover it took over. */
export const replacements = pgTable(
  "replacement",
  {
    id: id(),
    rmaLineId: uuid("rma_line_id")
      .notNull()
      .references(() => rmaLines.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    unitOutId: uuid("unit_out_id")
      .notNull()
      .references(() => units.id),
    unitReplacedId: uuid("unit_replaced_id")
      .notNull()
      .references(() => units.id),
    installationId: uuid("installation_id").references(() => installations.id),
    shipmentId: uuid("shipment_id").references(() => shipments.id),
    lastCoveredOn: date("last_covered_on"),
    /** How the engine came to that day. */
    reasons: jsonb("reasons").notNull().default([]),
    warnings: jsonb("warnings").$type<string[]>().notNull().default([]),
    scannedOutAt: instant("scanned_out_at").notNull(),
    scannedOutByName: text("scanned_out_by_name").notNull(),
  },
  (t) => [uniqueIndex("replacement_one_per_line").on(t.rmaLineId), index("replacement_out").on(t.unitOutId)],
);
