import { describe, expect, it } from "vitest";
import { COLUMNS, groupShipments, MAX_BYTES, readShipments } from "@/lib/ledger/shipments";
import { bytesOf, csv, part, system, type Cells } from "../../factories/shipments";

const read = (rows: Cells[]) => {
  const found = readShipments(bytesOf(csv(rows)));
  if (!found.ok) throw new Error(found.refusal.message);
  return found.value;
};
const refusal = (bytes: Uint8Array) => {
  const found = readShipments(bytes);
  if (found.ok) throw new Error("it was read");
  return found.refusal;
};
const S = system("OW2210-0001");
const utf16 = (text: string, big: boolean, mark = true) => {
  const out = Buffer.from(`${mark ? "\uFEFF" : ""}${text}`, "utf16le");
  return new Uint8Array(big ? out.swap16() : out);
};

describe("a file that cannot be read as such", () => {
  it.each([
    ["empty", new Uint8Array(0), "invalid", /empty/],
    ["a head and nothing else", bytesOf(COLUMNS.join(",")), "invalid", /head but no rows/],
    [
      "wrong columns",
      bytesOf("a,b,c\n1,2,3"),
      "invalid",
      /columns are missing: order, account code.+The first line must name the columns/,
    ],
    [
      "one column missing",
      bytesOf(
        csv(
          [S],
          COLUMNS.filter((c) => c !== "terms"),
        ),
      ),
      "invalid",
      /missing: terms\./,
    ],
    ["a picture", new Uint8Array([0x89, 0x50, 0x4e, 0x47, 0, 0, 0, 13]), "unsupported", /not a text file/],
    ["UTF-16 without its mark", utf16(csv([S]), false, false), "unsupported", /CSV in UTF-8/],
    [
      "one byte a character",
      new Uint8Array(Buffer.from(csv([S]).replace("Pell", "Péll"), "latin1")),
      "unsupported",
      /UTF-8/,
    ],
    ["a quotation mark left open", bytesOf(`${csv([S])}\n"never closed`), "invalid", /quotation mark/],
    // By the size rule alone: there is no such file here.
    ["200 MB", { length: 200 * 1024 * 1024 } as Uint8Array, "too_large", /over 64 MB\. Split it/],
    ["one byte over", { length: MAX_BYTES + 1 } as Uint8Array, "too_large", /Split it/],
  ])("%s", (_what, bytes, code, words) => {
    expect(refusal(bytes)).toMatchObject({ code, message: expect.stringMatching(words) as string });
  });
});

describe("a file as programs write it", () => {
  it.each([
    ["with a mark", bytesOf(`\uFEFF${csv([S])}`)],
    ["UTF-16, little end first", utf16(csv([S]), false)],
    ["UTF-16, big end first", utf16(csv([S]), true)],
    ["with semicolons", bytesOf(csv([S]).replace(/,/g, ";"))],
    ["with tabs", bytesOf(csv([S]).replace(/,/g, "\t"))],
    ["with CR LF and empty lines", bytesOf(`${csv([S]).replace(/\n/g, "\r\n")}\r\n\r\n`)],
    [
      "with its columns turned and named in capitals",
      bytesOf(csv([S], [...COLUMNS].reverse()).replace(/^.*/, (h) => h.toUpperCase().replace(/ /g, "_"))),
    ],
  ])("%s", (_what, bytes) => {
    const found = readShipments(bytes);
    expect(found).toMatchObject({ ok: true, value: { problems: [], rowsTotal: 1 } });
    if (found.ok)
      expect(found.value.rows[0]).toMatchObject({
        serial: "OW2210-0001",
        accountName: "Pinnock Analytics",
        row: 2,
      });
  });
});

describe("a row that is wrong", () => {
  const P = part("VS19-0001", S, "Drive bay 1");
  it.each([
    [
      "a day that is none",
      { ...S, "ship date": "2026-02-30" },
      "ship date",
      /"2026-02-30" is not a day\. Write it as year-month-day/,
    ],
    ["a day another way round", { ...S, "ship date": "05/01/2026" }, "ship date", /is not a day/],
    [
      "set up before it was shipped",
      { ...S, "setup date": "2026-01-04" },
      "setup date",
      /It was set up before/,
    ],
    [
      "delivered before it was shipped",
      { ...S, "delivery date": "2026-01-04" },
      "delivery date",
      /before it was shipped/,
    ],
    ["an invoice day that is none", { ...S, "invoice date": "soon" }, "invoice date", /"soon" is not a day/],
    ["a formula", { ...S, "site note": "=HYPERLINK(1)" }, "site note", /"=HYPERLINK\(1\)" is a formula/],
    ["a formula by plus", { ...S, serial: "+1+1+1+1" }, "serial", /is a formula/],
    ["a formula by at", { ...S, "contact name": "@SUM(A1)" }, "contact name", /is a formula/],
    ["a formula by minus", { ...S, "account name": "-A1" }, "account name", /is a formula/],
    ["a number made of a serial", { ...S, serial: "12E45" }, "serial", /turned this serial into a number/],
    ["another such", { ...S, serial: "1.2345E+12" }, "serial", /Format the column as text/],
    ["a serial too short", { ...S, serial: "A-1" }, "serial", /at least four/],
    ["no serial", { ...S, serial: "" }, "serial", /The serial is missing/],
    ["a kind that is none", { ...S, kind: "box" }, "kind", /Write system or part/],
    ["a family that is none", { ...S, family: "gpu" }, "family", /is not a part family/],
    ["a condition that is none", { ...S, condition: "mint" }, "condition", /new or refurbished/],
    [
      "a buyer that is none",
      { ...S, "buyer kind": "reseller" },
      "buyer kind",
      /business, consumer or unknown/,
    ],
    ["a country in full", { ...S, country: "Ireland" }, "country", /two letters/],
    [
      "an address that is none",
      { ...S, "contact e-mail": "sam at pinnock" },
      "contact e-mail",
      /not an e-mail address/,
    ],
    ["a part without its parent", P, "parent serial", /Its parent OW2210-0001 is not in this file/],
    ["a part without its slot", { ...P, slot: "" }, "slot", /needs its slot/],
    ["its own parent", { ...P, "parent serial": "VS19-0001" }, "parent serial", /itself as its parent/],
    [
      "a system in a system",
      { ...S, "parent serial": "OW2210-0009", slot: "1" },
      "parent serial",
      /A system has no parent/,
    ],
  ] as [string, Cells, string, RegExp][])("%s is told with line and column", (_what, row, column, words) => {
    const good = system("OW2210-GOOD");
    const found = read([good, row]);
    expect(found.problems).toContainEqual({
      row: 3,
      column,
      message: expect.stringMatching(words) as string,
    });
    // The good one beside it stays usable.
    expect(found.rows.map((r) => r.serial)).toEqual(["OW2210-GOOD"]);
  });

  it("twice in one file, however it is written, names the line it stands in already", () => {
    const found = read([S, { ...S, serial: "ow2210 0001" }]);
    expect(found.problems).toEqual([
      { row: 3, column: "serial", message: "ow2210 0001 stands in line 2 already. A serial is one unit." },
    ]);
    expect(found.rows).toHaveLength(1);
  });

  it("takes its parts with it, and theirs", () => {
    const bad = { ...S, "ship date": "soon" };
    const board = part("EB2210-0001", S, "Board", { family: "board", model: "EB-2210" });
    const found = read([
      bad,
      board,
      part("OM32-0001", S, "Memory A1", { "parent serial": "EB2210-0001" }),
      system("OW2210-GOOD"),
    ]);
    expect(found.rows.map((r) => r.serial)).toEqual(["OW2210-GOOD"]);
    expect(found.problems.map((p) => p.row)).toEqual([2, 3, 4]);
    expect(found.problems[2]!.message).toBe("Left out, because line 3 (EB2210-0001) is not good.");
  });

  it("in a ring of parents is no system's part", () => {
    const [a, b] = [
      part("VS19-AAAA", S, "1", { "parent serial": "VS19-BBBB" }),
      part("VS19-BBBB", S, "1", { "parent serial": "VS19-AAAA" }),
    ];
    const below = part("VS19-CCCC", S, "2", { "parent serial": "VS19-AAAA" });
    const found = read([S, a, b, below]);
    expect(found.rows.map((r) => r.serial)).toEqual(["OW2210-0001"]);
    expect(found.problems.map((p) => [p.row, p.message])).toEqual([
      [3, "Its parents lead back to itself."],
      [4, "Its parents lead back to itself."],
      [5, "Left out, because line 3 (VS19-AAAA) is not good."],
    ]);
  });
});

describe("groups", () => {
  it("hold a system with all its parts, parents first, whatever the order of lines", () => {
    const board = part("EB2210-0001", S, "Board", { family: "board" });
    const mem = part("OM32-0001", S, "Memory A1", { "parent serial": "EB2210-0001" });
    const other = system("OW2210-0002");
    const groups = groupShipments(read([mem, other, board, S]).rows).map((g) => g.map((r) => r.serial));
    expect(groups).toEqual([["OW2210-0001", "EB2210-0001", "OM32-0001"], ["OW2210-0002"]]);
  });
});
