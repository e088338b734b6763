import { parse as parseCsv } from "csv-parse/sync";
import { stringify } from "csv-stringify/sync";
import { capital, countWord, plural, showDay, showDayShort } from "../base/show";
import { ok, refuse, type Result } from "../base/result";
import { serialKey } from "../base/serial";

/** How many serials are answered at once; the rest is counted and said. */
export const MAX_LINES = 5000;
export const MAX_BYTES = 1_048_576;
/** Rows that a page shows; the sheet has all. */
export const SHOWN_ROWS = 500;
/** Units that one report may name: as many as one RMA may have lines. */
export const MAX_CHOSEN = 50;

export type CheckLine = {
  /** Line in what was given, counted from 1, blank ones too. */
  line: number;
  /** As it was given, shortened only where it is longer than any serial's line. */
  given: string;
  /** What is looked for; empty: the line names no serial. */
  key: string;
  /** The line that named this serial first. */
  sameAs: number | null;
};
export type ReadLines = {
  lines: CheckLine[];
  /** Lines after the last one that is checked. */
  left: number;
  /** The column that the serials were read from, where a head names it. */
  column: string | null;
  /** What was read, so that it can be asked again as text. */
  text: string;
};

const GIVEN_LENGTH = 200;
const BLANK = /^[\s\u00A0\u00AD\u200B-\u200F\u2060\uFEFF]*$/;
const BREAK = /\r\n|[\n\r\u0085\u2028\u2029]/;

/** Bytes to text: Unicode with or without its mark, else the old Western code page, where it is text at all. */
function textOf(bytes: Uint8Array): Result<string> {
  const [a, b] = [bytes[0], bytes[1]];
  if (a === 0x50 && b === 0x4b)
    return refuse("unsupported", "This is a workbook or an archive. Save the sheet as CSV and send that.");
  if (a === 0xff && b === 0xfe) return ok(new TextDecoder("utf-16le").decode(bytes));
  if (a === 0xfe && b === 0xff) return ok(new TextDecoder("utf-16be").decode(bytes));
  try {
    return ok(new TextDecoder("utf-8", { fatal: true }).decode(bytes));
  } catch {
    // One letter with an accent in a note shall not lose the serials beside it: those are plain letters.
    return ok(new TextDecoder("windows-1252").decode(bytes));
  }
}

const notText = (text: string): boolean => /[\u0000-\u0008\u000E-\u001B\u007F]/.test(text);

/** A cell without what a spreadsheet, a list or a label puts around a serial. */
function bare(cell: string): string {
  let text = cell.trim().replace(/^'(?==)/, "");
  // ="00123" keeps a spreadsheet from making a number of it; an apostrophe does the same, or escapes a formula.
  const formula = /^=\s*"((?:[^"]|"")*)"$/.exec(text);
  if (formula) text = formula[1]!.replace(/""/g, '"');
  return text
    .replace(/^["'`\u00AB\u00BB\u2018-\u201F]+|["'`\u00AB\u00BB\u2018-\u201F,;]+$/g, "")
    .replace(/^(?:[\u2022\u25CF\u00B7>]|\d{1,4}[.)])\s+/, "")
    .trim();
}

const LABEL =
  /^(?:(?:chassis|system|unit|part|service|product)\s+)?(?:serial(?:\s*(?:numbers?|no|nr))?|ser\.?\s*no|s\s?\/\s?n)\s*(?:[.:#=]\s*|\s+)+/i;

const keyOf = (cell: string): string => {
  const text = bare(cell).normalize("NFKC");
  return serialKey(bare(text.replace(LABEL, "")));
};

const plainHead = (cell: string): string =>
  bare(cell)
    .toLowerCase()
    .replace(/[^a-z]/g, "");
/** First the column of a sheet that we gave out, so that what was asked then can be asked again. */
const HEADS = [
  "asgiven",
  "serial",
  "serialnumber",
  "serialno",
  "serialnr",
  "sn",
  "serno",
  "serialnumbers",
  "serials",
  "unitserial",
];

/** Which cell of a head names the serials; -1 where it is no head. */
function headColumn(cells: readonly string[]): number {
  const heads = cells.map(plainHead);
  for (const name of HEADS) {
    const at = heads.indexOf(name);
    if (at >= 0 && !/\d/.test(cells[at]!)) return at;
  }
  return cells.findIndex((c, i) => !/\d/.test(c) && /^.{0,24}serial(number|no|nr)?$/.test(heads[i]!));
}

const looksLikeSerial = (cell: string): boolean => {
  const text = bare(cell);
  if (!/\d/.test(text) || text.includes("@") || text.includes("/")) return false;
  if (/^\d{4}-\d\d-\d\d$|^\d{1,2}\.\d{1,2}\.\d{2,4}$|^[\d.,\s]*[.,]\d{1,2}$|^\d{1,5}$/.test(text))
    return false;
  const key = keyOf(text);
  return key.length >= 5 && key.length <= 40 && /^[A-Z0-9]+$/.test(key);
};

type Row = { line: number; cells: string[]; text: string };

/** One line's cells; quotation marks hold a separator where they open and close. */
function cellsOf(text: string, separator: string): string[] {
  const cells: string[] = [];
  let cell = "";
  let quoted = false;
  let formula = false;
  for (let i = 0; i < text.length; i++) {
    const c = text[i]!;
    if (c === '"' && (quoted || /^=?\s*$/.test(cell))) {
      if (quoted && text[i + 1] === '"') {
        cell += '"';
        i++;
      } else {
        if (!quoted) formula = cell !== "";
        quoted = !quoted && text.indexOf('"', i + 1) > 0;
        // The marks of ="00123" are what tells it from a formula.
        if (formula) cell += c;
      }
    } else if (c === separator && !quoted) {
      cells.push(cell);
      cell = "";
      formula = false;
    } else cell += c;
  }
  return [...cells, cell];
}

/**
 * The rows of a table. A sheet whose quotation marks are in order may have cells of several lines;
 * in any other a mark left open must not swallow the lines after it, so each stands for itself.
 */
function rowsOf(text: string, separator: string): Row[] {
  const plain = text.split(BREAK);
  const alone = plain.map((t, i) => ({ line: i + 1, cells: cellsOf(t, separator), text: t }));
  const first = alone.find((r) => !BLANK.test(r.text));
  if (!text.includes('"') || !first || headColumn(first.cells) < 0) return alone;
  try {
    const read = parseCsv(text, {
      delimiter: separator,
      relax_column_count: true,
      skip_empty_lines: false,
      info: true,
    }) as unknown as { record: string[]; info: { lines: number } }[];
    const column = headColumn(first.cells);
    let before = 0;
    const rows = read.map(({ record, info }) => {
      const line = before + 1;
      before = info.lines;
      return { line, to: info.lines, cells: record, text: record.join(separator) };
    });
    // Two marks left open look like one cell of many lines: not where a serial stands in it, in its place.
    const swallowed = rows.some((r) =>
      alone.slice(r.line, r.to).some((l) => looksLikeSerial(l.cells[column] ?? "")),
    );
    return swallowed || rows.some((r) => BREAK.test((r.cells[column] ?? "").trim())) ? alone : rows;
  } catch {
    return alone;
  }
}

/** The separator that parts the most lines; none: each line is one serial. */
function separatorOf(lines: readonly string[]): string | null {
  const counts = ["\t", ";", ","].map((s) => ({ s, n: lines.filter((l) => l.includes(s)).length }));
  const best = counts.reduce((a, b) => (b.n > a.n ? b : a));
  return best.n === 0 ? null : best.s;
}

/** The first column whose cells mostly look like serials, and are not mostly one and the same model. */
function serialColumn(rows: readonly Row[]): number {
  const width = Math.max(...rows.map((r) => r.cells.length));
  let second = -1;
  for (let at = 0; at < width; at++) {
    const cells = rows.map((r) => r.cells[at] ?? "").filter((c) => !BLANK.test(c));
    if (cells.length === 0 || cells.filter(looksLikeSerial).length * 2 < cells.length) continue;
    if (new Set(cells.map(keyOf)).size * 2 > cells.length) return at;
    if (second < 0) second = at;
  }
  return Math.max(second, 0);
}

type Asked = { line: number; given: string; cell: string };

function asked(text: string): { list: Asked[]; column: string | null } {
  const lines = text.split(BREAK);
  const separator = separatorOf(lines);
  const rows: Row[] =
    separator === null
      ? lines.map((t, i) => ({ line: i + 1, cells: cellsOf(t, "\n"), text: t }))
      : rowsOf(text, separator);
  const full = rows.filter((r) =>
    separator === null ? !BLANK.test(r.text) : !r.cells.every((c) => BLANK.test(c)),
  );
  const [first, ...rest] = full;
  if (!first) return { list: [], column: null };
  const named = headColumn(first.cells);
  if (named >= 0 && !looksLikeSerial(first.cells[named]!))
    return {
      column: bare(first.cells[named]!),
      list: rest.map((r) => pick(r, named)),
    };
  if (separator === null)
    return { column: null, list: full.map((r) => ({ line: r.line, given: r.text, cell: r.cells[0]! })) };
  // A list within a line: every cell is a serial, and the lines do not make a table.
  const held = full.map((r) => r.cells.filter((c) => !BLANK.test(c)));
  const ragged = full.length === 1 || new Set(full.map((r) => r.cells.length)).size > 1;
  if (ragged && held.every((cells) => cells.every(looksLikeSerial)))
    return {
      column: null,
      list: full.flatMap((r, i) => held[i]!.map((cell) => ({ line: r.line, given: cell, cell }))),
    };
  // A head that names no serial is words throughout, over lines that hold serials.
  const words = first.cells.filter((c) => !BLANK.test(c));
  const head = words.length > 1 && !words.some((c) => /\d/.test(c)) && rest.some(hasSerial);
  const body = head ? rest : full;
  const column = serialColumn(body);
  return { column: null, list: body.map((r) => pick(r, column)) };
}

const hasSerial = (r: Row): boolean => r.cells.some(looksLikeSerial);

/** A line that is no row of the table is still answered, by all of it. */
const pick = (r: Row, column: number): Asked => {
  const cell = r.cells[column];
  return cell !== undefined && !BLANK.test(cell)
    ? { line: r.line, given: cell, cell }
    : { line: r.line, given: r.text, cell: r.cells.length === 1 ? r.text : "" };
};

/**
 * Pasted text or a file as lines to look for: one serial a line, or a table with a column of them.
 * Refuses only what is no text or too much of it; a line that says nothing is a line still.
 */
export function readLines(input: string | Uint8Array): Result<ReadLines> {
  const size = typeof input === "string" ? new TextEncoder().encode(input).length : input.length;
  if (size > MAX_BYTES)
    return refuse(
      "too_large",
      "This is over 1 MiB. Leave the serials only, or split it and check each part.",
    );
  const decoded = typeof input === "string" ? ok(input) : textOf(input);
  if (!decoded.ok) return decoded;
  if (notText(decoded.value))
    return refuse("unsupported", "This is not text. Save the sheet as CSV in UTF-8 and send that.");
  const text = decoded.value.replace(/^\uFEFF/, "");
  const { list, column } = asked(text);
  if (list.length === 0)
    return refuse("invalid", "There is no serial in it. Paste them one on each line, or choose a file.");
  const seen = new Map<string, number>();
  const lines = list.slice(0, MAX_LINES).map(({ line, given, cell }) => {
    const key = keyOf(cell);
    const sameAs = key === "" ? null : (seen.get(key) ?? null);
    if (key !== "" && sameAs === null) seen.set(key, line);
    return { line, given: shown(given), key, sameAs };
  });
  return ok({ lines, left: Math.max(0, list.length - MAX_LINES), column, text });
}

/** As given, but an apostrophe that only keeps a table program from running it is not part of it. */
const shown = (given: string): string => {
  const text = given.trim().replace(/^'(?=[=+\-@\t\r])/, "");
  return text.length > GIVEN_LENGTH ? `${text.slice(0, GIVEN_LENGTH - 1)}…` : text;
};

export const CHECK_STATES = ["covered", "doa", "ended", "later", "none", "not_found"] as const;
export type CheckState = (typeof CHECK_STATES)[number];

export type CheckUnit = {
  unitId: string;
  serial: string;
  isPart: boolean;
  modelCode: string;
  modelName: string;
  systemSerial: string | null;
  slot: string | null;
  accountId: string | null;
  accountName: string | null;
};
export type CheckAnswer = CheckLine & {
  unit: CheckUnit | null;
  state: CheckState;
  firstOn: string | null;
  lastOn: string | null;
  /** Of the clause that decides on the day asked. */
  clause: string | null;
  /** Last day on which it counts as dead on arrival, while that window is open. */
  doaUntil: string | null;
  rma: { number: string; ticketNumber: number } | null;
  doubts: string[];
  /** A fault of it may be reported from here. */
  startable: boolean;
};

/** State in words, with the day that matters. */
export function stateWords(a: Pick<CheckAnswer, "state" | "lastOn" | "firstOn" | "doaUntil">): string {
  switch (a.state) {
    case "covered":
      return "covered";
    case "doa":
      return a.doaUntil ? `DOA window to ${showDayShort(a.doaUntil)}` : "DOA window";
    case "ended":
      return "cover ended";
    case "later":
      return a.firstOn ? `starts ${showDayShort(a.firstOn)}` : "starts later";
    case "none":
      return "no cover kept";
    case "not_found":
      return "not found";
  }
}

export const CHECK_FILTERS = ["all", "doubts", "covered", "not_covered", "not_found"] as const;
export type CheckFilter = (typeof CHECK_FILTERS)[number];

const covers = (a: Pick<CheckAnswer, "state">): boolean => a.state === "covered" || a.state === "doa";

export function fits(a: CheckAnswer, filter: CheckFilter): boolean {
  switch (filter) {
    case "all":
      return true;
    case "doubts":
      return a.doubts.length > 0;
    case "covered":
      return covers(a);
    case "not_covered":
      return !covers(a) && a.state !== "not_found";
    case "not_found":
      return a.state === "not_found";
  }
}

/** "41 of 50 are covered on 1 December 2026; six are not; three are not in the ledger." */
export function checkSentence(answers: readonly CheckAnswer[], onDay: string, among: string): string {
  const count = (is: (a: CheckAnswer) => boolean) => answers.filter(is).length;
  const total = answers.length;
  const covered = count(covers);
  const missing = count((a) => a.state === "not_found");
  const no = total - covered - missing;
  const onRma = count((a) => a.rma !== null);
  const are = (n: number) => (n === 1 ? "is" : "are");
  const day = showDay(onDay);
  const first =
    total === 1
      ? `The one serial ${covered ? "is" : "is not"} covered on ${day}`
      : covered === 0
        ? `None of ${countWord(total)} is covered on ${day}`
        : `${capital(countWord(covered))} of ${countWord(total)} ${are(covered)} covered on ${day}`;
  const rest = [
    no > 0 && covered > 0 ? `${countWord(no)} ${are(no)} not` : null,
    missing > 0 ? `${countWord(missing)} ${are(missing)} not ${among}` : null,
    onRma > 0 ? `${countWord(onRma)} ${are(onRma)} on an RMA already` : null,
  ];
  return `${[first, ...rest.filter((r) => r !== null)].join("; ")}.`;
}

export const leftWords = (left: number): string | null =>
  left === 0
    ? null
    : `The first ${countWord(MAX_LINES)} were checked. ${capital(countWord(left))} ${plural(left, "line")} after them ${left === 1 ? "was" : "were"} not: check ${left === 1 ? "it" : "them"} next.`;

const SHEET_COLUMNS = [
  "line",
  "as_given",
  "serial",
  "model",
  "system",
  "slot",
  "state",
  "first_day",
  "last_day",
  "clause",
  "rma",
  "doubt",
];

/** All answers as CSV. Text that a table program would run is escaped, and restored when it is read here again. */
export function checkSheet(answers: readonly CheckAnswer[]): string {
  return stringify(
    answers.map((a) => ({
      line: a.line,
      as_given: a.given,
      serial: a.unit?.serial ?? "",
      model: a.unit?.modelCode ?? "",
      system: a.unit?.systemSerial ?? "",
      slot: a.unit?.slot ?? "",
      state: stateWords({ ...a, doaUntil: null, firstOn: null }),
      first_day: a.firstOn ?? "",
      last_day: a.lastOn ?? "",
      clause: a.clause ?? "",
      rma: a.rma?.number ?? "",
      doubt: a.doubts.join("; "),
    })),
    { header: true, columns: SHEET_COLUMNS, escape_formulas: true, record_delimiter: "windows" },
  );
}
