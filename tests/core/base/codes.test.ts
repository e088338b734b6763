import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { mod37_36, mod37_36Holds } from "@/lib/base/checkchar";
import { cleanScan, differences, serialCandidates, serialKey, serialLoose } from "@/lib/base/serial";

describe("ISO/IEC 7064 MOD 37,36", () => {
  // A12425GABC1234002: M is the worked example of ISO 7064 as used for ISAN-like numbers; the rest were
  // computed by two independent programs.
  for (const [data, check] of [
    ["A12425GABC1234002", "M"],
    ["RMA2026000123", "R"],
    ["RMA202600012", "Z"],
    ["SN0O1IL8B5S2Z", "H"],
    ["7K2M9Q4X", "U"],
    ["B10S5Z8", "A"],
    ["0", "2"],
    ["Z", "4"],
  ] as const) {
    it(`${data} takes ${check}`, () => expect(mod37_36(data)).toBe(check));
  }
  it("refuses every single wrong character", () => {
    const ch = fc.constantFrom(..."0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ");
    fc.assert(
      fc.property(fc.array(ch, { minLength: 1, maxLength: 14 }), fc.nat(), ch, (cs, i, c) => {
        const whole = cs.join("") + mod37_36(cs.join(""));
        const at = i % whole.length;
        const wrong = whole.slice(0, at) + c + whole.slice(at + 1);
        return wrong === whole || !mod37_36Holds(wrong);
      }),
    );
  });
});

describe("serials as people give them", () => {
  it("finds one serial behind blanks, dashes, case, label words and scanner ends", () => {
    for (const text of [
      "ow4420-7k3qx",
      " OW4420 7K3QX\r\n",
      "S/N: OW4420\u20117K3QX",
      "*OW4420-7K3QX*",
      "Serial no. OW4420-7K3QX",
    ]) {
      expect(serialKey(text)).toBe("OW44207K3QX");
    }
    expect(cleanScan("  S/N: OW4420-7K3QX\r")).toBe("OW4420-7K3QX");
  });
  it("makes look-alikes one in the loose key only", () => {
    expect(serialLoose("0W4420-7K3OX")).toBe(serialLoose("OW4420-7K3QX"));
    expect(serialKey("0W4420-7K3OX")).not.toBe(serialKey("OW4420-7K3QX"));
  });
  it("names the character that differs, its place and both readings", () => {
    const [only, ...rest] = differences("OW4420-7K30X", "OW4420-7K3QX");
    expect(rest).toEqual([]);
    expect(only).toMatchObject({ at: 10, scanned: "0", expected: "Q" });
    expect(only!.words).toBe(
      "the fourth after the dash reads the digit zero, and we expect the letter Q, as in quay",
    );
  });
  it("finds serials in running text and leaves words alone", () => {
    expect(
      serialCandidates("Our server OW4420-7K3QX is dead; drive VS-19F4-00K7 too. Thanks, engineering"),
    ).toEqual(["OW4420-7K3QX", "VS-19F4-00K7"]);
  });
});
