import { parse as parseCsv } from "csv-parse/sync";
import { isDay } from "../base/civil";
import { ok, refuse, type Result } from "../base/result";
import { serialKey } from "../base/serial";
import {
  BUYER_KINDS,
  CONDITIONS,
  FAMILIES,
  type BuyerKind,
  type Condition,
  type Family,
  type UnitKind,
} from "./schema";

/** Columns of a shipments file, in plain words. Order does not matter; names do. */
export const COLUMNS = [
  "order",
  "account code",
  "account name",
  "buyer kind",
  "country",
  "contact name",
  "contact e-mail",
  "serial",
  "model",
  "model name",
  "kind",
  "family",
  "maker",
  "condition",
  "parent serial",
  "slot",
  "ship date",
  "delivery date",
  "invoice date",
  "setup date",
  "terms",
  "site note",
  "lot",
  "supplier",
] as const;
const NEEDED = [
  "order",
  "account code",
  "account name",
  "buyer kind",
  "country",
  "serial",
  "model",
  "kind",
  "family",
  "condition",
  "ship date",
  "terms",
] as const;

export const MAX_BYTES = 64 * 1024 * 1024;
export const MAX_ROWS = 250_000;

export type ShipmentRow = {
  /** Line in the file, the head is line 1. */
  row: number;
  order: string;
  accountCode: string;
  accountName: string;
  buyerKind: BuyerKind;
  country: string;
  contactName: string;
  contactEmail: string;
  serial: string;
  model: string;
  modelName: string;
  kind: UnitKind;
  family: Family;
  maker: string;
  condition: Condition;
  parentSerial: string;
  slot: string;
  shippedOn: string;
  deliveredOn: string;
  invoicedOn: string;
  /** Set up at the customer's, where terms count from there. */
  installedOn: string;
  terms: string;
  siteNote: string;
  lot: string;
  supplier: string;
};
export type Problem = { row: number; column: string | null; message: string };
export type ReadShipments = { rows: ShipmentRow[]; problems: Problem[]; rowsTotal: number };

/** Bytes to text: UTF-8 (with or without mark) and UTF-16 with its mark. */
export function decodeText(bytes: Uint8Array): Result<string> {
  const [a, b] = [bytes[0], bytes[1]];
  if (a === 0xff && b === 0xfe) return ok(new TextDecoder("utf-16le").decode(bytes));
  if (a === 0xfe && b === 0xff) return ok(new TextDecoder("utf-16be").decode(bytes));
  if (bytes.subarray(0, 2000).includes(0)) {
    return refuse("unsupported", "This is not a text file. Save the sheet as CSV in UTF-8 and send that.");
  }
  try {
    return ok(new TextDecoder("utf-8", { fatal: true }).decode(bytes));
  } catch {
    return refuse(
      "unsupported",
      "Some characters cannot be read. Save the sheet as CSV in UTF-8 and send that.",
    );
  }
}

function delimiterOf(head: string): string {
  const count = (d: string) => head.split(d).length;
  return [",", ";", "\t"].sort((a, b) => count(b) - count(a))[0]!;
}

/**
 * Reads a shipments file whole. Rows that are wrong are told, with line and column; the good
 * ones stay usable. Refuses only what cannot be read as such a file at all.
 */
export function readShipments(bytes: Uint8Array): Result<ReadShipments> {
  if (bytes.length === 0)
    return refuse("invalid", "The file is empty. Send a CSV with one row for each unit.");
  if (bytes.length > MAX_BYTES)
    return refuse(
      "too_large",
      "The file is over 64 MB. Split it by order and send the parts one after another.",
    );
  const text = decodeText(bytes);
  if (!text.ok) return text;
  const body = text.value.replace(/^\uFEFF/, "");
  const delimiter = delimiterOf(body.slice(0, body.indexOf("\n") < 0 ? undefined : body.indexOf("\n")));
  let table: string[][];
  try {
    table = parseCsv(body, {
      delimiter,
      relax_column_count: true,
      skip_empty_lines: true,
      trim: true,
    }) as string[][];
  } catch (thrown) {
    const line = thrown instanceof Error && "lines" in thrown ? ` near line ${String(thrown.lines)}` : "";
    return refuse(
      "invalid",
      `The file is not readable as CSV${line}: look for a quotation mark that is not closed.`,
    );
  }
  const head = (table[0] ?? []).map((h) => h.toLowerCase().replace(/_/g, " ").trim());
  const missing = NEEDED.filter((n) => !head.includes(n));
  if (missing.length > 0) {
    return refuse(
      "invalid",
      `These columns are missing: ${missing.join(", ")}. The first line must name the columns.`,
    );
  }
  if (table.length === 1) return refuse("invalid", "The file has a head but no rows.");
  if (table.length > MAX_ROWS + 1)
    return refuse("too_large", `The file has more than ${MAX_ROWS} rows. Split it by order.`);
  const at = Object.fromEntries(COLUMNS.map((c) => [c, head.indexOf(c)])) as Record<
    (typeof COLUMNS)[number],
    number
  >;

  const problems: Problem[] = [];
  const rows: ShipmentRow[] = [];
  const seen = new Map<string, number>();
  const bad = new Set<number>();
  table.slice(1).forEach((cells, i) => {
    const row = i + 2;
    const cell = (c: (typeof COLUMNS)[number]) => (at[c] < 0 ? "" : (cells[at[c]] ?? ""));
    const say = (column: string | null, message: string) => {
      problems.push({ row, column, message });
      bad.add(row);
    };
    for (const c of COLUMNS) {
      if (/^[=+@]|^-[^\d]/.test(cell(c)))
        say(c, `"${cell(c).slice(0, 20)}" is a formula. Give the value itself.`);
    }
    for (const c of NEEDED) if (cell(c) === "") say(c, `The ${c} is missing.`);
    const kind = cell("kind").toLowerCase();
    if (kind !== "" && kind !== "system" && kind !== "part")
      say("kind", `"${cell("kind")}" is not a kind. Write system or part.`);
    const family = cell("family").toLowerCase().replace(/[ -]/g, "_");
    if (family !== "" && !(FAMILIES as readonly string[]).includes(family))
      say(
        "family",
        `"${cell("family")}" is not a part family. Write one of: ${FAMILIES.join(", ").replace(/_/g, " ")}.`,
      );
    const condition = cell("condition").toLowerCase();
    if (condition !== "" && !(CONDITIONS as readonly string[]).includes(condition))
      say("condition", `"${cell("condition")}" is not a condition. Write new or refurbished.`);
    const buyerKind = cell("buyer kind").toLowerCase();
    if (buyerKind !== "" && !(BUYER_KINDS as readonly string[]).includes(buyerKind))
      say("buyer kind", `"${cell("buyer kind")}" is not a buyer kind. Write business, consumer or unknown.`);
    const country = cell("country").toUpperCase();
    if (country !== "" && !/^[A-Z]{2}$/.test(country))
      say("country", "Give the country as two letters, such as GB.");
    for (const c of ["ship date", "delivery date", "invoice date", "setup date"] as const) {
      if (cell(c) !== "" && !isDay(cell(c)))
        say(c, `"${cell(c)}" is not a day. Write it as year-month-day, such as 2026-03-04.`);
    }
    if (isDay(cell("ship date")) && isDay(cell("delivery date")) && cell("delivery date") < cell("ship date"))
      say("delivery date", "It was delivered before it was shipped; one of the two days is wrong.");
    if (isDay(cell("ship date")) && isDay(cell("setup date")) && cell("setup date") < cell("ship date"))
      say("setup date", "It was set up before it was shipped; one of the two days is wrong.");
    const email = cell("contact e-mail").toLowerCase();
    if (email !== "" && !/^[^@\s]+@[^@\s]+\.[^@\s]+$/.test(email))
      say("contact e-mail", `"${cell("contact e-mail")}" is not an e-mail address.`);
    if (/^\d+(\.\d+)?E\+?\d+$/i.test(cell("serial")))
      say("serial", "A spreadsheet has turned this serial into a number. Format the column as text.");
    const key = serialKey(cell("serial"));
    if (cell("serial") !== "" && key.length < 4)
      say("serial", "A serial has at least four letters or digits.");
    const before = key === "" ? undefined : seen.get(key);
    if (before !== undefined)
      say("serial", `${cell("serial")} stands in line ${before} already. A serial is one unit.`);
    else if (key !== "") seen.set(key, row);
    if (cell("parent serial") !== "" && cell("slot") === "")
      say("slot", "A part in a system needs its slot.");
    if (kind === "system" && cell("parent serial") !== "") say("parent serial", "A system has no parent.");
    rows.push({
      row,
      order: cell("order").toUpperCase(),
      accountCode: cell("account code").toUpperCase(),
      accountName: cell("account name"),
      buyerKind: buyerKind as BuyerKind,
      country,
      contactName: cell("contact name"),
      contactEmail: email,
      serial: cell("serial"),
      model: cell("model"),
      modelName: cell("model name") || cell("model"),
      kind: kind as UnitKind,
      family: family as Family,
      maker: cell("maker"),
      condition: condition as Condition,
      parentSerial: cell("parent serial"),
      slot: cell("slot"),
      shippedOn: cell("ship date"),
      deliveredOn: cell("delivery date"),
      invoicedOn: cell("invoice date"),
      installedOn: cell("setup date"),
      terms: cell("terms").toUpperCase(),
      siteNote: cell("site note"),
      lot: cell("lot"),
      supplier: cell("supplier"),
    });
  });
  // A part needs its parent in the same file, and the parent must itself be good.
  const keys = new Map(rows.map((r) => [serialKey(r.serial), r]));
  for (const r of rows) {
    if (r.parentSerial === "") continue;
    const parent = keys.get(serialKey(r.parentSerial));
    if (!parent) {
      problems.push({
        row: r.row,
        column: "parent serial",
        message: `Its parent ${r.parentSerial} is not in this file.`,
      });
      bad.add(r.row);
    } else if (parent === r) {
      problems.push({ row: r.row, column: "parent serial", message: "It names itself as its parent." });
      bad.add(r.row);
    }
  }
  for (const r of rows) {
    const seen = new Set<ShipmentRow>();
    let at: ShipmentRow | undefined = r;
    while (at && !seen.has(at)) {
      seen.add(at);
      at = at.parentSerial === "" ? undefined : keys.get(serialKey(at.parentSerial));
    }
    if (at === r && !bad.has(r.row)) {
      problems.push({ row: r.row, column: "parent serial", message: "Its parents lead back to itself." });
      bad.add(r.row);
    }
  }
  for (let again = true; again;) {
    again = false;
    for (const r of rows) {
      const parent = r.parentSerial === "" ? undefined : keys.get(serialKey(r.parentSerial));
      if (parent && bad.has(parent.row) && !bad.has(r.row)) {
        problems.push({
          row: r.row,
          column: "parent serial",
          message: `Left out, because line ${parent.row} (${r.parentSerial}) is not good.`,
        });
        bad.add(r.row);
        again = true;
      }
    }
  }
  problems.sort((a, b) => a.row - b.row);
  return ok({ rows: rows.filter((r) => !bad.has(r.row)), problems, rowsTotal: rows.length });
}

/** Good rows in groups that belong together: a system with all its parts, parents first. */
export function groupShipments(rows: readonly ShipmentRow[]): ShipmentRow[][] {
  const byKey = new Map(rows.map((r) => [serialKey(r.serial), r]));
  const rootOf = (r: ShipmentRow): ShipmentRow => {
    let at = r;
    for (let i = 0; i < 8 && at.parentSerial !== ""; i++) at = byKey.get(serialKey(at.parentSerial)) ?? at;
    return at;
  };
  const depth = (r: ShipmentRow): number => {
    let n = 0;
    for (let at = r; at.parentSerial !== "" && n < 8; n++)
      at = byKey.get(serialKey(at.parentSerial)) ?? { ...at, parentSerial: "" };
    return n;
  };
  const groups = new Map<ShipmentRow, ShipmentRow[]>();
  for (const r of rows) {
    const root = rootOf(r);
    const group = groups.get(root);
    if (group) group.push(r);
    else groups.set(root, [r]);
  }
  return [...groups.values()].map((g) => g.sort((a, b) => depth(a) - depth(b)));
}
