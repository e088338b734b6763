import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { alikeKeys, alikeness, alikeWords, rankAlike, singleEdits } from "@/lib/base/alike";
import { readings, serialReadings } from "@/lib/base/scan";
import { serialKey, serialLoose } from "@/lib/base/serial";

const CHARS = [..."0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ"];
const char = fc.constantFrom(...CHARS);
const textOf = (c: fc.Arbitrary<string>, min: number, max: number) =>
  fc.array(c, { minLength: min, maxLength: max }).map((list) => list.join(""));

type Edit = { kind: "wrong" | "extra" | "dropped" | "transposed"; at: number; c: string };
const editOf = (c: fc.Arbitrary<string>): fc.Arbitrary<Edit> =>
  fc.record({
    kind: fc.constantFrom("wrong", "extra", "dropped", "transposed"),
    at: fc.nat(100),
    c,
  });
function edited(text: string, { kind, at: any, c }: Edit): string {
  const at = any % text.length;
  const [before, here, after] = [text.slice(0, at), text[at]!, text.slice(at + 1)];
  if (kind === "wrong") return before + c + after;
  if (kind === "extra") return before + c + here + after;
  if (kind === "dropped") return before + after;
  return before + after.slice(0, 1) + here + after.slice(1);
}

describe("what hands and eyes make of a serial", () => {
  // Every confusion here is common practice, no source.
  for (const [name, meant, given] of [
    ["0 for O", "OW4420-7K3QX", "0W4420-7K3QX"],
    ["Q for O", "OW4420-7K3QX", "QW4420-7K3QX"],
    ["D for O", "OW4420-7K3QX", "DW4420-7K3QX"],
    ["I for 1", "VS-19F4-00K7", "VS-I9F4-00K7"],
    ["L for 1", "VS-19F4-00K7", "VS-L9F4-00K7"],
    ["7 for 1", "VS-19F4-00K7", "VS-79F4-00K7"],
    ["B for 8", "KM-8842-HH", "KM-BB42-HH"],
    ["3 for 8", "KM-8842-HH", "KM-8342-HH"],
    ["S for 5", "KM-5542-HH", "KM-S542-HH"],
    ["Z for 2", "KM-2242-HH", "KM-2Z4Z-HH"],
    ["G for 6", "KM-6642-HH", "KM-G642-HH"],
    ["V for U", "UKM6642HH", "VKM6642HH"],
    ["VV for W", "OW4420-7K3QX", "OVV4420-7K3QX"],
    ["W for VV", "OVV4420-7K3QX", "OW4420-7K3QX"],
    ["rn for m", "KM-8842-HH", "krn-8842-hh"],
    ["m for rn", "KRN-8842-HH", "km-8842-hh"],
    ["Y for V", "VS-19F4-00K7", "YS-19F4-00K7"],
    ["doubled", "OW4420-7K3QX", "OW4420-7K33QX"],
    ["dropped of two", "OW4420-7K3QX", "OW420-7K3QX"],
    ["dropped", "OW4420-7K3QX", "OW4420-7KQX"],
    ["transposed", "OW4420-7K3QX", "OW4420-7K3XQ"],
    ["transposed over the dash", "OW4427-0K3QX", "OW4420-7K3QX"],
    ["one zero eaten by a spreadsheet", "0714420773", "714420773"],
    ["three zeros eaten by a spreadsheet", "0004420773", "4420773"],
    ["taken for a number by a spreadsheet", "12E45", "1.2E+46"],
    ["no-break blanks and hyphens, a soft hyphen", "OW4420-7K3QX", "OW\u00ad4420\u20117K3\u00a0QX"],
    ["other keyboard layout", "YZ4420-7KYQX", "zy4420ß7kzqx"],
    ["Caps Lock", "OW4420-7K3QX", "ow4420-7k3qx"],
    ["Code 39 stars kept", "OW4420-7K3QX", "*OW4420-7K3QX*"],
    ["check character sent, too", "OW4420-7K3QX", "OW4420-7K3QXR"],
    ["check character not sent", "OW4420-7K3QXR", "OW4420-7K3QX"],
    ["two scans glued", "OW4420-7K3QX", "OW4420-7K3QXVS-19F4-00K7"],
    ["two scans glued, the second", "VS-19F4-00K7", "OW4420-7K3QXVS-19F4-00K7"],
    ["the same scan twice", "OW4420-7K3QX", "OW4420-7K3QXOW4420-7K3QX"],
    ["two scans and a line end between", "VS-19F4-00K7", "OW4420-7K3QX\r\nVS-19F4-00K7"],
    ["label word misread", "SN4420773QX", "5N4420773QX"],
    ["label letter wrong in a serial that begins like a label", "SN4420773QX", "XN4420773QX"],
    ["all look-alikes at once and one more wrong", "OW4420-7K3QB8", "0VV442D-7K3O88A"],
  ] as const)
    it(name, () => expect(alikeKeys(given)).toContain(serialLoose(meant)));

  it("does not find what only shares a part: a part number or an asset tag stays unknown", () => {
    expect(alikeKeys("OW4420")).not.toContain(serialLoose("OW4420-7K3QX"));
    expect(alikeKeys("ASSET-00317")).not.toContain(serialLoose("OW4420-7K3QX"));
  });
  it("tries nothing for less than four characters, and no errors in four", () => {
    expect(alikeKeys("OW4")).toEqual([]);
    expect(alikeKeys(" \t-- ")).toEqual([]);
    expect(alikeKeys("KH44")).toEqual(["KH44"]);
  });
});

describe("keys", () => {
  it("hold the serial meant after any one edit", () => {
    fc.assert(
      fc.property(textOf(char, 6, 24), editOf(char), (serial, edit) => {
        // A serial that is a label's word and hardly more is not told from the word.
        fc.pre(serialKey(serial).length >= 6 && serialKey(edited(serial, edit)).length >= 4);
        expect(alikeKeys(edited(serial, edit))).toContain(serialLoose(serial));
      }),
      { numRuns: 400 },
    );
  });
  it("hold it after any number of look-alikes, wide ones among them, and one edit", () => {
    const like: Record<string, string> = {
      "0": "OQD",
      "1": "IL",
      "8": "B",
      "5": "S",
      "2": "Z",
      "6": "G",
      U: "V",
    };
    const wides = { W: ["VV", "UV", "UU"], M: ["RN"] };
    // Plain places between, so that wide pairs are those planted.
    const plain = textOf(fc.constantFrom(..."0123456789ACEFHJKPTX"), 2, 6);
    const mixed = (text: string, picks: number[]) =>
      [...text]
        .map((c, i) => [c, ...(like[c] ?? "")][picks[i % picks.length]! % (1 + (like[c] ?? "").length)]!)
        .join("");
    fc.assert(
      fc.property(
        fc.tuple(plain, plain, plain),
        fc.constantFrom("W", "M"),
        fc.constantFrom("W", "M"),
        fc.array(fc.nat(11), { minLength: 5, maxLength: 9 }),
        fc.boolean(),
        editOf(fc.constantFrom(..."0123456789ACEFHJKPTX")),
        ([a, b, c], one, two, picks, towardsNarrow, edit) => {
          const wide = (w: "W" | "M") => wides[w][picks[0]! % wides[w].length]!;
          const narrow = `${a}${one}${b}${two}${c}`;
          const broad = `${a}${wide(one)}${b}${wide(two)}${c}`;
          const [meant, seen] = towardsNarrow
            ? [broad, [a, one, b, two, c]]
            : [narrow, [a, wide(one), b, wide(two), c]];
          const given = seen.map((part, i) => mixed(i === 2 ? edited(part, edit) : part, picks)).join("");
          expect(alikeKeys(given)).toContain(serialLoose(meant));
        },
      ),
      { numRuns: 300 },
    );
  });
  it("are about 600 for eleven characters, and bounded for anything", () => {
    const eleven = alikeKeys("AK4420H7K3X").length;
    expect(eleven).toBeGreaterThan(550);
    expect(eleven).toBeLessThan(650);
    fc.assert(
      fc.property(
        fc.oneof(
          fc.string({ unit: "binary", maxLength: 400 }),
          textOf(fc.constantFrom("W", "V", "R", "N", "S", "1", "P"), 0, 400),
        ),
        (text) => {
          expect(alikeKeys(text).length).toBeLessThanOrEqual(8000);
        },
      ),
      { numRuns: 60 },
    );
    expect(alikeKeys("VV".repeat(200_000)).length).toBeLessThanOrEqual(8000);
  });
  it("count as the arithmetic of single edits says, for a key without equal neighbors", () => {
    // n characters of an alphabet of 26: 25n substitutions, 25n + 26 insertions, n deletions, n - 1 exchanges, itself.
    const key = "AC3FH";
    expect(singleEdits(key).size).toBe(25 * 5 + 25 * 5 + 26 + 5 + 4 + 1);
  });
});

describe("readings of a scan", () => {
  // Element strings by the GS1 General Specifications: (01) holds 14 digits, (21) up to 20 characters, FNC1 is sent as
  // ASCII 29. The item number is of the range for use within a company (prefix 02), check digit by modulo 10.
  const item = "02000000000015";
  it("uses an item number whose check digit holds", () => {
    const sum = [...item].reduce((s, d, i) => s + Number(d) * (i % 2 === 0 ? 3 : 1), 0);
    expect(sum % 10).toBe(0);
  });
  for (const [name, scan] of [
    ["(21) in brackets", `(01)${item}(21)OW4420-7K3QX`],
    ["(21) in brackets, lot after it", `(01)${item}(21)OW4420-7K3QX(10)L77`],
    ["21 after 01", `01${item}21OW4420-7K3QX`],
    ["with FNC1 and a lot", `01${item}21OW4420-7K3QX\u001d10L77`],
    ["with FNC1 made a blank by a form", `01${item}21OW4420-7K3QX 10L77`],
    ["lot first", `01${item}10L77\u001d21OW4420-7K3QX`],
    ["date between", `01${item}1125030121OW4420-7K3QX`],
    ["GS1-128 named by the scanner", `]C101${item}21OW4420-7K3QX`],
    ["Data Matrix named by the scanner", `]d201${item}21OW4420-7K3QX`],
    ["named by the scanner, no item number", `]d221OW4420-7K3QX`],
    ["named by the scanner, leading FNC1", `]d2\u001d21OW4420-7K3QX`],
    ["another symbology named", "]C0OW4420-7K3QX"],
    ["fields of ISO/IEC 15434, format 06", "[)>\u001e06\u001d1PVS-19\u001dSOW4420-7K3QX\u001e\u0004"],
  ] as const)
    it(name, () => expect(serialReadings(scan)[0]).toBe("OW4420-7K3QX"));

  it("gives the serial also where the separator behind it was lost", () => {
    expect(serialReadings(`01${item}21OW4420-7K3QX11250301`)).toContain("OW4420-7K3QX");
    // Too long for (21) as a whole.
    expect(serialReadings(`01${item}21OW4420-7K3QX10LOT778812`)[0]).not.toBe("OW4420-7K3QX10LOT778812");
  });
  it("takes no element string out of digits that are none", () => {
    expect(serialReadings("21OW4420-7K3QX")[0]).toBe("21OW4420-7K3QX");
    expect(serialReadings("0102000021OW4420")[0]).toBe("0102000021OW4420");
  });
  for (const prefix of ["S", "1S", "1P", "P", "1T", "T", "18S", "(S) ", "S: "])
    it(`reads the data identifier ${prefix} with and without`, () => {
      const list = readings(`${prefix}7K3QX4420`);
      expect(list.filter((r) => r.firm).map((r) => r.serial)).toEqual([`${prefix}7K3QX4420`, "7K3QX4420"]);
    });
  it("only guesses where two scans ran together", () => {
    const parts = readings("OW4420-7K3QXVS-19F4-00K7");
    expect(parts[0]).toEqual({ serial: "OW4420-7K3QXVS-19F4-00K7", firm: true });
    for (const half of ["OW44207K3QX", "VS19F400K7"])
      expect(parts).toContainEqual({ serial: half, firm: false });
  });
  it("gives no two readings of one key, few of anything, and the text as it stands among them", () => {
    fc.assert(
      fc.property(fc.oneof(fc.string({ unit: "binary", maxLength: 300 }), textOf(char, 0, 60)), (text) => {
        const list = serialReadings(text);
        expect(list.length).toBeLessThanOrEqual(80);
        expect(new Set(list.map(serialKey)).size).toBe(list.length);
      }),
    );
    fc.assert(
      fc.property(textOf(char, 1, 40), (text) => {
        fc.pre(serialKey(text) === text);
        expect(readings(text)).toContainEqual({ serial: text, firm: true });
      }),
    );
  });
});

describe("nearness", () => {
  it("orders errors by how likely hands make them", () => {
    // Common practice, no source.
    const given = "KA4420-7C3XH";
    const order = [
      "KA4420-7C3XH",
      "KA442O-7C3XH",
      "KA4420-1C3XH",
      "KA4420-7C3HX",
      "KA420-7C3XH",
      "KA4420-7CXH",
      "KA4420-7CFXH",
    ];
    expect(
      rankAlike(
        given,
        [...order].reverse().map((serial) => ({ serial })),
      ).map((u) => u.serial),
    ).toEqual(order);
  });
  it("is nothing for the same serial, more for any other, and the same both ways", () => {
    fc.assert(
      fc.property(textOf(char, 6, 11), editOf(char), (a, edit) => {
        const b = edited(a, edit);
        fc.pre(!/^(?:SN|SER)/.test(a) && !/^(?:SN|SER)/.test(b));
        expect(alikeness(a, a)).toBe(0);
        expect(alikeness(a, a.toLowerCase())).toBe(0);
        if (a !== b) expect(alikeness(a, b)).toBeGreaterThan(0);
        if (![a, b].some((s) => /^\d{0,3}[SPT]|^\d+(?:E\d+)?$/.test(s)))
          expect(alikeness(a, b)).toBe(alikeness(b, a));
      }),
    );
  });
  it("does not depend on the order in which the ledger gives units", () => {
    const list = ["OW4420-7K3QY", "OW4420-7K3QA", "OW4420-7K3QC"].map((serial) => ({ serial }));
    expect(rankAlike("OW4420-7K3QX", list)).toEqual(rankAlike("OW4420-7K3QX", [...list].reverse()));
  });
});

describe("what differs, in words", () => {
  for (const [given, meant, words] of [
    [
      "OW4420-7K30X",
      "OW4420-7K3QX",
      ["the fourth after the dash is the letter Q, as in quay, not the digit zero"],
    ],
    ["OW4420-7K3XQ", "OW4420-7K3QX", ["the fourth after the dash and the next change places"]],
    ["OW4420-7KQX", "OW4420-7K3QX", ["the third after the dash, the digit three, was left out"]],
    [
      "OW4420-7K3QXR",
      "OW4420-7K3QX",
      ["one too many: the letter R, as in rail, following the fifth after the dash"],
    ],
    ["OVV4420-7K3QX", "OW4420-7K3QX", ["the second is the letter W, as in west, not VV"]],
    ["OW4420-7K3QX", "OVV4420-7K3QX", ["the second and the next are VV, not the letter W, as in west"]],
    ["S OW4420-7K3QX", "OW4420-7K3QX", ["read as OW4420-7K3QX"]],
    ["ow4420 7k3qx", "OW4420-7K3QX", []],
  ] as [string, string, string[]][])
    it(`${given} for ${meant}`, () => expect(alikeWords(given, meant)).toEqual(words));
  it("stops where more would not help", () => {
    expect(alikeWords("0W44Z0-7K3OXB", "OW4420-7K3QX8", 2)).toEqual([
      expect.any(String),
      expect.any(String),
      "2 more",
    ]);
  });
});
