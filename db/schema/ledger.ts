import { sql } from "drizzle-orm";
import {
  boolean,
  char,
  check,
  customType,
  date,
  index,
  integer,
  jsonb,
  numeric,
  pgEnum,
  pgTable,
  text,
  uniqueIndex,
  uuid,
} from "drizzle-orm/pg-core";
import {
  BUYER_KINDS,
  CONDITIONS,
  FAMILIES,
  IMPORT_STATES,
  INSTALLATION_SOURCES,
  UNIT_KINDS,
  WHEREABOUTS,
} from "../../lib/ledger/schema";
import { users } from "./auth";
import { id, instant } from "./columns";

const bytea = customType<{ data: Buffer }>({ dataType: () => "bytea" });

export const buyerKind = pgEnum("buyer_kind", BUYER_KINDS);
export const unitKind = pgEnum("unit_kind", UNIT_KINDS);
export const condition = pgEnum("condition", CONDITIONS);
export const family = pgEnum("family", FAMILIES);
export const whereabouts = pgEnum("whereabouts", WHEREABOUTS);
export const installationSource = pgEnum("installation_source", INSTALLATION_SOURCES);
export const importState = pgEnum("import_state", IMPORT_STATES);

export const accounts = pgTable(
  "account",
  {
    id: id(),
    code: text("code").notNull(),
    name: text("name").notNull(),
    buyerKind: buyerKind("buyer_kind").notNull(),
    country: char("country", { length: 2 }).notNull(),
    zone: text("zone").notNull().default("Europe/London"),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [uniqueIndex("account_code_once").on(t.code)],
);

export const contacts = pgTable(
  "contact",
  {
    id: id(),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    name: text("name").notNull(),
    /** Lower case. One address belongs to one account: it is how its person signs in. */
    email: text("email").notNull(),
    userId: uuid("user_id").references(() => users.id),
    mayInvite: boolean("may_invite").notNull().default(false),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("contact_email_once").on(t.email),
    uniqueIndex("contact_user_once").on(t.userId),
    index("contact_of_account").on(t.accountId),
    check("contact_email_lower", sql`${t.email} = lower(${t.email})`),
  ],
);

/** Our own places: where parcels arrive, and whose working days count. */
export const sites = pgTable(
  "site",
  {
    id: id(),
    code: text("code").notNull(),
    name: text("name").notNull(),
    zone: text("zone").notNull(),
    addressLines: text("address_lines").array().notNull(),
    country: char("country", { length: 2 }).notNull(),
    /** ISO weekday numbers that are worked. */
    workdays: integer("workdays").array().notNull(),
    opensAt: text("opens_at").notNull(),
    closesAt: text("closes_at").notNull(),
    isDefault: boolean("is_default").notNull().default(false),
  },
  (t) => [
    uniqueIndex("site_code_once").on(t.code),
    uniqueIndex("site_one_default")
      .on(t.isDefault)
      .where(sql`is_default`),
  ],
);

export const holidays = pgTable(
  "holiday",
  {
    id: id(),
    siteId: uuid("site_id")
      .notNull()
      .references(() => sites.id),
    day: date("day").notNull(),
    name: text("name").notNull(),
  },
  (t) => [uniqueIndex("holiday_once").on(t.siteId, t.day)],
);

export const models = pgTable(
  "model",
  {
    id: id(),
    code: text("code").notNull(),
    name: text("name").notNull(),
    kind: unitKind("kind").notNull(),
    family: family("family").notNull(),
    maker: text("maker").notNull().default(""),
    /** Socket, cores, clock, memory type and the like: what a replacement is compared by. */
    facts: jsonb("facts").$type<Record<string, string | number>>().notNull().default({}),
    weightKg: numeric("weight_kg", { precision: 7, scale: 2, mode: "number" }),
    dataBearing: boolean("data_bearing").notNull().default(false),
    battery: text("battery", { enum: ["none", "coin", "ion", "lead"] })
      .notNull()
      .default("none"),
  },
  (t) => [uniqueIndex("model_code_once").on(t.code), index("model_by_family").on(t.family)],
);

export const suppliers = pgTable(
  "supplier",
  { id: id(), code: text("code").notNull(), name: text("name").notNull(), email: text("email") },
  (t) => [uniqueIndex("supplier_code_once").on(t.code)],
);

export const lots = pgTable(
  "lot",
  {
    id: id(),
    code: text("code").notNull(),
    supplierId: uuid("supplier_id")
      .notNull()
      .references(() => suppliers.id),
    modelId: uuid("model_id").references(() => models.id),
  },
  (t) => [uniqueIndex("lot_code_once").on(t.supplierId, t.code)],
);

export const units = pgTable(
  "unit",
  {
    id: id(),
    /** As printed on the label; a foreign serial is never changed. */
    serial: text("serial").notNull(),
    /** Folded for search: see lib/base/serial. */
    serialKey: text("serial_key").notNull(),
    /** Looser fold, look-alike characters made one: suggestions only. */
    serialLoose: text("serial_loose").notNull(),
    modelId: uuid("model_id")
      .notNull()
      .references(() => models.id),
    lotId: uuid("lot_id").references(() => lots.id),
    condition: condition("condition").notNull(),
    whereabouts: whereabouts("whereabouts").notNull(),
    /** Bay, when it is with us. */
    place: text("place"),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("unit_serial_once").on(t.serialKey),
    index("unit_by_loose").on(t.serialLoose),
    index("unit_by_model").on(t.modelId),
    index("unit_in_stock")
      .on(t.modelId, t.whereabouts)
      .where(sql`whereabouts = 'stock'`),
  ],
);

/** One sale of a unit. Cover hangs here; the newest sale of a serial decides. */
export const saleLines = pgTable(
  "sale_line",
  {
    id: id(),
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    accountId: uuid("account_id")
      .notNull()
      .references(() => accounts.id),
    orderNumber: text("order_number").notNull(),
    /** order + serial, folded: the same file twice adds nothing. */
    lineKey: text("line_key").notNull(),
    invoicedOn: date("invoiced_on"),
    shippedOn: date("shipped_on").notNull(),
    deliveredOn: date("delivered_on"),
    /** Set up at the customer's, where terms count from there. */
    installedOn: date("installed_on"),
    /** Days on which a whole unit took over this sale from the one before it. */
    swaps: date("swaps").array().notNull().default([]),
    /** No foreign key here to keep modules apart in the schema; the migration adds it. */
    termsVersionId: uuid("terms_version_id").notNull(),
    condition: condition("condition").notNull(),
    buyerKind: buyerKind("buyer_kind").notNull(),
    country: char("country", { length: 2 }).notNull(),
    /** Where the customer keeps it, in their words. */
    siteNote: text("site_note"),
    endedOn: date("ended_on"),
    endedReason: text("ended_reason"),
    importId: uuid("import_id"),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("sale_line_once").on(t.lineKey),
    index("sale_of_unit").on(t.unitId, t.shippedOn),
    index("sale_of_account").on(t.accountId, t.shippedOn, t.id),
    index("sale_of_order").on(t.orderNumber),
    index("sale_under_terms").on(t.termsVersionId),
    uniqueIndex("sale_line_one_open")
      .on(t.unitId)
      .where(sql`ended_on is null`),
  ],
);

/** A unit in its parent at a slot, from a day to a day: the as-built tree and every swap. */
export const installations = pgTable(
  "installation",
  {
    id: id(),
    parentUnitId: uuid("parent_unit_id")
      .notNull()
      .references(() => units.id),
    unitId: uuid("unit_id")
      .notNull()
      .references(() => units.id),
    slot: text("slot").notNull(),
    /** The sale line of the system under which it stands. */
    saleLineId: uuid("sale_line_id").references(() => saleLines.id),
    source: installationSource("source").notNull(),
    fromOn: date("from_on").notNull(),
    toOn: date("to_on"),
    removedReason: text("removed_reason"),
    /** The installation whose place it took. */
    replacesId: uuid("replaces_id"),
    /** Every swap of this place under the sale up to this part, in order: what its floor runs from. */
    swaps: date("swaps").array().notNull().default([]),
    /** The sale whose terms cover it, where that is not the one it stands under: a part moved here. */
    coverSaleLineId: uuid("cover_sale_line_id").references(() => saleLines.id),
    /** The day it came here from another customer, and the day we were told of it in writing. */
    givenOn: date("given_on"),
    noticedOn: date("noticed_on"),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    uniqueIndex("installation_one_place")
      .on(t.unitId)
      .where(sql`to_on is null`),
    uniqueIndex("installation_one_unit")
      .on(t.parentUnitId, t.slot)
      .where(sql`to_on is null`),
    index("installation_of_parent").on(t.parentUnitId),
    index("installation_of_unit").on(t.unitId),
    index("installation_of_sale").on(t.saleLineId),
    index("installation_covered_elsewhere")
      .on(t.coverSaleLineId)
      .where(sql`cover_sale_line_id is not null`),
    check("installation_days", sql`${t.toOn} is null or ${t.toOn} >= ${t.fromOn}`),
    check("installation_not_self", sql`${t.parentUnitId} <> ${t.unitId}`),
  ],
);

/** A sold unit was given on to another company: who held it until when, and whether we were told. */
export const saleTransfers = pgTable(
  "sale_transfer",
  {
    id: id(),
    saleLineId: uuid("sale_line_id")
      .notNull()
      .references(() => saleLines.id),
    fromAccountId: uuid("from_account_id")
      .notNull()
      .references(() => accounts.id),
    toAccountId: uuid("to_account_id")
      .notNull()
      .references(() => accounts.id),
    onDay: date("on_day").notNull(),
    /** The day of the written notice; none when we were not told. */
    noticedOn: date("noticed_on"),
    createdAt: instant("created_at").notNull(),
  },
  (t) => [
    index("transfer_of_sale").on(t.saleLineId, t.onDay),
    check("transfer_to_another", sql`${t.fromAccountId} <> ${t.toAccountId}`),
  ],
);

export const coverPauses = pgTable(
  "cover_pause",
  {
    id: id(),
    saleLineId: uuid("sale_line_id")
      .notNull()
      .references(() => saleLines.id),
    fromOn: date("from_on").notNull(),
    toOn: date("to_on").notNull(),
    reason: text("reason").notNull(),
  },
  (t) => [index("pause_of_sale").on(t.saleLineId), check("pause_days", sql`${t.toOn} >= ${t.fromOn}`)],
);

export const importBatches = pgTable(
  "import_batch",
  {
    id: id(),
    fileName: text("file_name").notNull(),
    sha256: text("sha256").notNull(),
    content: bytea("content").notNull(),
    state: importState("state").notNull(),
    rowsTotal: integer("rows_total").notNull(),
    rowsGood: integer("rows_good").notNull(),
    rowsDone: integer("rows_done").notNull().default(0),
    added: jsonb("added").$type<Record<string, number>>().notNull().default({}),
    problems: jsonb("problems")
      .$type<{ row: number; column: string | null; message: string }[]>()
      .notNull()
      .default([]),
    problemsTotal: integer("problems_total").notNull().default(0),
    error: text("error"),
    createdBy: uuid("created_by"),
    createdAt: instant("created_at").notNull(),
    finishedAt: instant("finished_at"),
  },
  (t) => [index("import_by_sha").on(t.sha256), index("import_by_time").on(t.createdAt)],
);
