import fc from "fast-check";
import { parse } from "csv-parse/sync";
import { describe, expect, it } from "vitest";
import { must } from "@/lib/base/result";
import { serialKey } from "@/lib/base/serial";
import {
  checkSentence,
  checkSheet,
  fits,
  MAX_BYTES,
  MAX_LINES,
  readLines,
  stateWords,
  type CheckAnswer,
} from "@/lib/coverage/check";

const bytes = (text: string) => new TextEncoder().encode(text);
const keys = (input: string | Uint8Array) => must(readLines(input)).lines.map((l) => l.key);

describe("one serial a line, as people give it", () => {
  const cases: [what: string, given: string, key: string][] = [
    ["plain", "OW2210-PIN01", "OW2210PIN01"],
    ["lower case", "ow2210-pin01", "OW2210PIN01"],
    ["blanks within", "OW 2210 PIN 01", "OW2210PIN01"],
    ["blanks around", "   OW2210-PIN01\t", "OW2210PIN01"],
    ["a blank that does not break", "OW2210\u00A0PIN01", "OW2210PIN01"],
    ["a mark no eye sees", "\u200BOW2210-PIN01\u200B", "OW2210PIN01"],
    ["long dashes", "OW2210–PIN—01", "OW2210PIN01"],
    ["full-width letters", "ＯＷ２２１０PIN01", "OW2210PIN01"],
    ["label", "S/N: OW2210-PIN01", "OW2210PIN01"],
    ["label without a colon", "SN OW2210-PIN01", "OW2210PIN01"],
    ["label in words", "Serial number: OW2210-PIN01", "OW2210PIN01"],
    ["label with two marks", "Serial No.: OW2210-PIN01", "OW2210PIN01"],
    ["label of a system", "Chassis serial = OW2210-PIN01", "OW2210PIN01"],
    ["double quotes", '"OW2210-PIN01"', "OW2210PIN01"],
    ["printed quotes", "“OW2210-PIN01”", "OW2210PIN01"],
    ["a quote left open", '"OW2210-PIN01', "OW2210PIN01"],
    ["a quote left open behind", 'OW2210-PIN01"', "OW2210PIN01"],
    ["a spreadsheet's escape", '="0012345678"', "0012345678"],
    ["that escape, quoted once more", '"=""0012345678"""', "0012345678"],
    ["an apostrophe of a spreadsheet", "'0012345678", "0012345678"],
    ["a scanner's stars", "*OW2210-PIN01*", "OW2210PIN01"],
    ["a bullet", "• OW2210-PIN01", "OW2210PIN01"],
    ["a number of a list", "12. OW2210-PIN01", "OW2210PIN01"],
    ["a comma behind", "OW2210-PIN01,", "OW2210PIN01"],
    ["a semicolon behind", "OW2210-PIN01;", "OW2210PIN01"],
  ];
  it.each(cases)("%s", (_what, given, key) => {
    expect(keys(given)).toEqual([key]);
    // Among others too: what stands beside a line changes nothing about it.
    expect(keys(`VS19-PIN0A\n${given}\nVS19-PIN0B`)).toEqual(["VS19PIN0A", key, "VS19PIN0B"]);
  });

  it("keeps the number and the text of each line, whatever ends it", () => {
    for (const end of ["\n", "\r\n", "\r", "\u2028"])
      expect(must(readLines(`\uFEFFvs19-pin0a${end}${end}  ${end}VS19-PIN0B${end}`)).lines).toEqual([
        { line: 1, given: "vs19-pin0a", key: "VS19PIN0A", sameAs: null },
        { line: 4, given: "VS19-PIN0B", key: "VS19PIN0B", sameAs: null },
      ]);
  });

  it("points a serial named again to the first line that named it", () => {
    const { lines } = must(readLines("VS19-PIN0A\nother01\n\nvs19 pin0a\nS/N VS19PIN0A"));
    expect(lines.map((l) => [l.line, l.sameAs])).toEqual([
      [1, null],
      [2, null],
      [4, 1],
      [5, 1],
    ]);
  });

  it("answers a line without a serial too, and no two of them are the same one", () => {
    const { lines } = must(readLines("---\nVS19-PIN0A\nS/N:\n---"));
    expect(lines.map((l) => [l.key, l.sameAs])).toEqual([
      ["", null],
      ["VS19PIN0A", null],
      ["", null],
      ["", null],
    ]);
  });

  it("reads serials that stand in one line, and lines of several", () => {
    expect(keys("VS19-PIN0A, VS19-PIN0B; OW2210-PIN01".replace(";", ","))).toEqual([
      "VS19PIN0A",
      "VS19PIN0B",
      "OW2210PIN01",
    ]);
    const { lines } = must(readLines("VS19-PIN0A\nVS19-PIN0B, OW2210-PIN01\nVS19-LOW0A"));
    expect(lines.map((l) => [l.line, l.key])).toEqual([
      [1, "VS19PIN0A"],
      [2, "VS19PIN0B"],
      [2, "OW2210PIN01"],
      [3, "VS19LOW0A"],
    ]);
  });
});

describe("tables", () => {
  it.each([
    ["Serial", ","],
    ["serial number", ";"],
    ["S/N", "\t"],
    ["sn", ","],
    ["Serial-No.", ";"],
    ["Device serial number", ","],
    ['"Serial No"', ","],
  ])("with a column named %s", (head, by) => {
    const table = [
      ["Asset", head, "Rack"],
      ["A-100045", "ow2210-pin01", "R 7"],
      ["A-100046", '="VS19-PIN0A"', ""],
      ["", "", ""],
      ["A-100047", "", "R 9"],
      ["A-100048", '"VS19-PIN0B"', "R 9"],
    ];
    const { lines, column } = must(readLines(table.map((r) => r.join(by)).join("\r\n")));
    expect(column?.toLowerCase()).toContain("s");
    expect(lines.map((l) => [l.line, l.key])).toEqual([
      [2, "OW2210PIN01"],
      [3, "VS19PIN0A"],
      [5, ""],
      [6, "VS19PIN0B"],
    ]);
    expect(lines[2]!.given).toContain("A-100047");
  });

  it("with a plain list under a head", () => {
    expect(keys("Serial number\nVS19-PIN0A\nVS19-PIN0B")).toEqual(["VS19PIN0A", "VS19PIN0B"]);
  });

  it("without a head: the first column that looks like serials, and not like one model", () => {
    expect(
      keys(
        "1;OW-2210;OW2210-PIN01;2026-01-05\n2;OW-2210;OW2210-PIN02;2026-01-05\n3;OW-2210;OW2210-PIN03;2026-01-06",
      ),
    ).toEqual(["OW2210PIN01", "OW2210PIN02", "OW2210PIN03"]);
  });

  it("with a head that names no serial: the head is no line", () => {
    expect(keys("Asset tag,Device,Bought\nno,VS19-PIN0A,2026-01-05\nno,VS19-PIN0B,2026-01-06")).toEqual([
      "VS19PIN0A",
      "VS19PIN0B",
    ]);
  });

  it("with cells of several lines, where the quotation marks are in order", () => {
    const { lines } = must(readLines('serial,note\nVS19-PIN0A,"first\nsecond"\nVS19-PIN0B,x'));
    expect(lines.map((l) => [l.line, l.key])).toEqual([
      [2, "VS19PIN0A"],
      [4, "VS19PIN0B"],
    ]);
  });

  it("with a quotation mark left open: no line is swallowed", () => {
    expect(keys('serial,note\nVS19-PIN0A,"3.5\nVS19-PIN0B,x\nOW2210-PIN01,2.5" bay')).toEqual([
      "VS19PIN0A",
      "VS19PIN0B",
      "OW2210PIN01",
    ]);
  });
});

describe("files", () => {
  const text = "serial;note\r\nVS19-PIN0A;Büro\r\n";
  it("in the encodings that table programs write", () => {
    const utf16 = (little: boolean) => {
      const out = new Uint8Array(2 + text.length * 2);
      const view = new DataView(out.buffer);
      [0xfeff, ...[...text].map((c) => c.charCodeAt(0))].forEach((c, i) => view.setUint16(i * 2, c, little));
      return out;
    };
    const western = Uint8Array.from([...text].map((c) => c.charCodeAt(0)));
    for (const file of [bytes(text), bytes(`\uFEFF${text}`), utf16(true), utf16(false), western])
      expect(keys(file)).toEqual(["VS19PIN0A"]);
  });

  it.each([
    ["empty", bytes(""), "invalid"],
    ["blank", bytes(" \r\n\t\n"), "invalid"],
    ["only a head", bytes("Serial number\n"), "invalid"],
    ["over 1 MiB", bytes("VS19-PIN0A\n".repeat(Math.ceil(MAX_BYTES / 11) + 1)), "too_large"],
    ["a workbook", Uint8Array.from([0x50, 0x4b, 3, 4, 20, 0]), "unsupported"],
    ["a picture", Uint8Array.from([0x89, 0x50, 0x4e, 0x47, 13, 10, 26, 10, 0, 0]), "unsupported"],
    ["text with a zero byte far in", bytes(`${"VS19-PIN0A\n".repeat(900)}\u0000`), "unsupported"],
  ])("%s is refused in words", (_what, file, code) => {
    const read = readLines(file);
    expect(read).toMatchObject({ ok: false, refusal: { code } });
    if (!read.ok) expect(read.refusal.message).toMatch(/^[A-Z].{20,}\.$/);
  });

  it("of more lines than are checked: the rest is counted", () => {
    const list = Array.from({ length: MAX_LINES + 12 }, (_, i) => `VS19-${String(i).padStart(6, "0")}`);
    const read = must(readLines(list.join("\n")));
    expect([read.lines.length, read.left, read.lines.at(-1)!.line]).toEqual([MAX_LINES, 12, MAX_LINES]);
  });
});

describe("every line that is not blank", () => {
  // Anything but what ends a line or parts a table; and what is no text at all is refused above.
  const junk = fc
    .string({ unit: "grapheme", maxLength: 40 })
    .map((s) => s.replace(/[\p{Cc}\u2028\u2029,;]/gu, ""));
  const serial = fc.stringMatching(/^[A-Z]{2}[0-9]{2}-[A-Z0-9]{5,8}$/);
  const isBlank = (l: string) => /^[\s\u00A0\u00AD\u200B-\u200F\u2060\uFEFF]*$/.test(l);

  it("is answered exactly once and in order, whatever is between", () => {
    fc.assert(
      fc.property(fc.array(fc.oneof(serial, junk, fc.constant("")), { maxLength: 40 }), (lines) => {
        // The first line is no head.
        const given = ["VS19-PIN0A", ...lines];
        const read = must(readLines(given.join("\n")));
        const wanted = given.flatMap((l, i) => (isBlank(l) ? [] : [i + 1]));
        expect(read.lines.map((l) => l.line)).toEqual(wanted);
        for (const l of read.lines) {
          const text = given[l.line - 1]!;
          if (/^[A-Z]{2}[0-9]{2}-[A-Z0-9]{5,8}$/.test(text)) expect(l.key).toBe(serialKey(text));
        }
      }),
      { numRuns: 500 },
    );
  });

  it("is so in a table too, with anything in the other cells", () => {
    const cell = fc.oneof(junk, fc.constant('"'), fc.constant('a "quoted" bit'), fc.constant('"open'));
    fc.assert(
      fc.property(fc.array(fc.tuple(cell, serial, cell), { minLength: 1, maxLength: 30 }), (rows) => {
        const text = ["asset,serial,note", ...rows.map((r) => r.join(","))].join("\r\n");
        const read = must(readLines(text));
        expect(read.lines.map((l) => l.line)).toEqual(rows.map((_, i) => i + 2));
      }),
      { numRuns: 500 },
    );
  });
});

const answer = (more: Partial<CheckAnswer>): CheckAnswer => ({
  line: 1,
  given: "VS19-PIN0A",
  key: "VS19PIN0A",
  sameAs: null,
  unit: {
    unitId: "u",
    serial: "VS19-PIN0A",
    isPart: true,
    modelCode: "VS-19",
    modelName: "Vantry 1.9 TB drive",
    systemSerial: "OW2210-PIN01",
    slot: "Drive bay 1",
    accountId: "a",
    accountName: "Pinnock Analytics",
  },
  state: "covered",
  firstOn: "2026-01-05",
  lastOn: "2029-01-07",
  clause: "3.2",
  doaUntil: null,
  rma: null,
  doubts: [],
  startable: true,
  ...more,
});
const missing = (more: Partial<CheckAnswer> = {}) =>
  answer({ unit: null, state: "not_found", firstOn: null, lastOn: null, clause: null, ...more });

describe("the answer in a sentence", () => {
  const many = (n: number, a: CheckAnswer) => Array.from({ length: n }, () => a);
  it.each<[CheckAnswer[], string]>([
    [
      [
        ...many(39, answer({})),
        ...many(2, answer({ rma: { number: "RMA-1207-K", ticketNumber: 3001 } })),
        ...many(3, missing()),
        ...many(6, answer({ state: "ended" })),
      ],
      "41 of 50 are covered on 1 December 2026; six are not; three are not in the ledger; two are on an RMA already.",
    ],
    [
      [answer({ state: "doa" }), missing()],
      "One of two is covered on 1 December 2026; one is not in the ledger.",
    ],
    [[answer({})], "The one serial is covered on 1 December 2026."],
    [many(3, missing()), "None of three is covered on 1 December 2026; three are not in the ledger."],
    [many(3, answer({ state: "later" })), "None of three is covered on 1 December 2026."],
  ])("%#", (answers, words) => {
    expect(checkSentence(answers, "2026-12-01", "in the ledger")).toBe(words);
  });

  it("and each line fits its filter", () => {
    const lines = [
      answer({}),
      answer({ state: "doa" }),
      answer({ state: "ended", doubts: ["x"] }),
      missing({ doubts: ["y"] }),
    ];
    const n = (f: Parameters<typeof fits>[1]) => lines.filter((l) => fits(l, f)).length;
    expect([n("all"), n("doubts"), n("covered"), n("not_covered"), n("not_found")]).toEqual([4, 2, 2, 1, 1]);
  });

  it("with the day that matters", () => {
    expect(stateWords(answer({ state: "doa", doaUntil: "2026-02-11" }))).toBe("DOA window to 11 Feb 2026");
    expect(stateWords(answer({ state: "later" }))).toBe("starts 5 Jan 2026");
  });
});

describe("the sheet", () => {
  const hostile = ["=1+1", "+44 20", "-VS19", "@sum", '="0012345"', 'a "b", c', "VS19-PIN0A"];
  const answers = hostile.map((given, i) =>
    missing({ line: i + 1, given, key: serialKey(given), doubts: [`line ${i + 1}; "odd"`] }),
  );
  const rows = parse(checkSheet([...answers, answer({ line: 9 })]), { columns: true }) as Record<
    string,
    string
  >[];

  it("has every line and column", () => {
    expect(Object.keys(rows[0]!).join(" ")).toBe(
      "line as_given serial model system slot state first_day last_day clause rma doubt",
    );
    expect(rows.at(-1)).toEqual({
      line: "9",
      as_given: "VS19-PIN0A",
      serial: "VS19-PIN0A",
      model: "VS-19",
      system: "OW2210-PIN01",
      slot: "Drive bay 1",
      state: "covered",
      first_day: "2026-01-05",
      last_day: "2029-01-07",
      clause: "3.2",
      rma: "",
      doubt: "",
    });
  });

  // OWASP's page on CSV injection names these leads; the list is from memory.
  it("has no cell that a table program would run", () => {
    for (const row of rows) for (const cell of Object.values(row)) expect(cell).not.toMatch(/^[=+\-@\t\r]/);
  });

  it("read again asks what was asked", () => {
    const again = must(readLines(checkSheet(answers)));
    expect(again.column).toBe("as_given");
    expect(again.lines.map((l) => l.given)).toEqual(hostile);
    expect(again.lines.map((l) => l.key).filter((k) => /^[A-Z0-9]+$/.test(k))).toEqual([
      "VS19",
      "0012345",
      "VS19PIN0A",
    ]);
  });
});
