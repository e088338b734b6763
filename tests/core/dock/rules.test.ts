import { describe, expect, it } from "vitest";
import {
  DISPOSITIONS_FOR,
  isPlace,
  matchScan,
  mayClose,
  photosNeeded,
  type CloseFacts,
} from "@/lib/dock/rules";
import { DISPOSITIONS, TEST_OUTCOMES } from "@/lib/dock/schema";
import { sheetFor, SHEETS, verdictOf, type SheetStep } from "@/lib/dock/sheets";

const lines = [
  { lineId: "1", serial: "VS-19F4-7K3Q", state: "open" },
  { lineId: "2", serial: "VS-19F4-9M2A", state: "received" },
];

describe("a scan against the lines of an RMA", () => {
  it.each(["VS-19F4-7K3Q", "vs19f47k3q", " VS 19F4 7K3Q \r\n", "S/N: VS-19F4-7K3Q", "*VS-19F4-7K3Q*"])(
    "%j is right",
    (scan) => expect(matchScan(scan, lines)).toMatchObject({ kind: "right", lineId: "1" }),
  );
  it("knows what came already", () =>
    expect(matchScan("VS-19F4-9M2A", lines)).toMatchObject({ kind: "again", lineId: "2" }));
  it.each([
    ["VS-19F4-7K3O", 1, /^One character differs/],
    ["VS-19F4-7K30", 1, /^One character differs/],
    ["VS-19F4-7X30", 2, /^Two characters differ/],
    ["VS-19F4-AB30", 3, /^Three characters differ/],
    ["KP-08C1-ZZZZ", null, /is another serial altogether/],
  ])("%s is wrong, and says how", (scan, differ, words) => {
    const found = matchScan(scan, lines);
    expect(found.kind).toBe("wrong");
    if (found.kind !== "wrong") return;
    expect(found.expected).toBe("VS-19F4-7K3Q");
    if (differ !== null) expect(found.differences).toHaveLength(differ);
    expect(found.headline).toMatch(words);
  });
  it("never takes a look-alike for right", () => {
    const serial = "O0I1B8S5Z2";
    const swaps: Record<string, string> = {
      O: "0",
      "0": "O",
      I: "1",
      "1": "I",
      B: "8",
      "8": "B",
      S: "5",
      "5": "S",
      Z: "2",
      "2": "Z",
    };
    for (let i = 0; i < serial.length; i++) {
      const scan = serial.slice(0, i) + swaps[serial[i]!]! + serial.slice(i + 1);
      expect(matchScan(scan, [{ lineId: "1", serial, state: "open" }])).toMatchObject({ kind: "wrong" });
    }
  });
  it("is wrong where nothing is expected", () =>
    expect(matchScan("VS-19F4-7K3Q", [])).toMatchObject({ kind: "wrong", expected: "" }));
});

describe("photos and places", () => {
  it.each([
    ["drive", "good", ["label", "arrived"]],
    ["board", "good", ["label", "arrived", "socket"]],
    ["processor", "packaging_poor", ["label", "arrived", "socket"]],
    ["drive", "damaged", ["label", "arrived", "damage"]],
    ["system", "damaged", ["label", "arrived", "socket", "damage"]],
  ])("a %s that came %s", (family, condition, want) => expect(photosNeeded(family, condition)).toEqual(want));
  it.each([
    ["A-12", true],
    ["q2", true],
    ["AB-123", true],
    ["A-1234", false],
    ["RMA-12", false],
    ["12", false],
    ["", false],
  ])("%j as a bay: %s", (text, is) => expect(isPlace(text)).toBe(is));
});

const facts = (more: Partial<CloseFacts>): CloseFacts => ({
  outcome: "fault_confirmed",
  disposition: "return_to_supplier",
  dataBearing: false,
  sanitized: false,
  photos: 1,
  byName: "Mei Okafor",
  secondPerson: "Piotr Lund",
  earlierNoFaultFound: 0,
  byManager: false,
  advance: false,
  ...more,
});

describe("closing a test", () => {
  /** Outcome by disposition, every cell. Our own rule. */
  const CELLS = {
    fault_confirmed: {
      restock: false,
      repair: true,
      return_to_supplier: true,
      scrap: true,
      send_back: false,
    },
    no_fault_found: {
      restock: true,
      repair: false,
      return_to_supplier: false,
      scrap: false,
      send_back: true,
    },
    damage_not_covered: {
      restock: false,
      repair: false,
      return_to_supplier: false,
      scrap: true,
      send_back: true,
    },
  } as const;
  it.each(TEST_OUTCOMES.flatMap((o) => DISPOSITIONS.map((d) => [o, d, CELLS[o][d]] as const)))(
    "%s, %s: %s",
    (outcome, disposition, may) => {
      expect(mayClose(facts({ outcome, disposition })).ok).toBe(may);
      expect(DISPOSITIONS_FOR[outcome].includes(disposition)).toBe(may);
    },
  );
  it.each([
    [
      "data without its record",
      { outcome: "no_fault_found", disposition: "restock", dataBearing: true },
      "sanitization",
    ],
    [
      "a second time no fault",
      { outcome: "no_fault_found", disposition: "restock", earlierNoFaultFound: 1 },
      "disposition",
    ],
    ["damage without a photo", { outcome: "damage_not_covered", disposition: "scrap", photos: 0 }, "finding"],
    [
      "damage seen by one",
      { outcome: "damage_not_covered", disposition: "scrap", secondPerson: "" },
      "secondPerson",
    ],
    [
      "damage seen twice by one",
      { outcome: "damage_not_covered", disposition: "scrap", secondPerson: "MEI OKAFOR" },
      "secondPerson",
    ],
    [
      "sent back when its replacement is out",
      { outcome: "no_fault_found", disposition: "send_back", advance: true },
      "disposition",
    ],
  ] satisfies [string, Partial<CloseFacts>, string][])("refuses %s, at its field", (_what, more, field) => {
    const found = mayClose(facts(more));
    expect(found).toMatchObject({ ok: false, refusal: { code: "rule" } });
    if (!found.ok) expect(Object.keys(found.refusal.fields ?? {})).toEqual([field]);
  });
  it("lets through what each of them asks for", () => {
    const nff = { outcome: "no_fault_found", disposition: "restock" } as const;
    expect(mayClose(facts({ ...nff, dataBearing: true, sanitized: true })).ok).toBe(true);
    expect(mayClose(facts({ ...nff, earlierNoFaultFound: 2, byManager: true })).ok).toBe(true);
  });
});

describe("readings", () => {
  const step = (min?: number, max?: number): SheetStep => ({
    step: 1,
    title: "t",
    detail: "d",
    measure: { name: "m", unit: "V", min, max },
  });
  it.each([
    [step(undefined, 50), "50", "pass"],
    [step(undefined, 50), "51", "fail"],
    [step(undefined, 0), "0", "pass"],
    [step(11.4, 12.6), "12.1 V", "pass"],
    [step(11.4, 12.6), "11,39", "fail"],
    [step(11.4, 12.6), "-12", "fail"],
    [step(1), "1", "pass"],
    [step(1), "0.99", "fail"],
    [step(undefined, 50), "", null],
    [step(undefined, 50), "many", null],
    [step(undefined, 50), "1,200", null],
    [step(undefined, 50), "3 of 60", null],
    [step(undefined, 50), "12 blocks", "pass"],
    [step(), "12", null],
    [{ ...step(), measure: null }, "12", null],
  ])("judged by the limits (%#)", (s, value, verdict) => expect(verdictOf(s, value)).toBe(verdict));

  it.each(Object.keys(SHEETS))(
    "the sheet %s counts its steps from one and begins with the serial",
    (code) => {
      const { steps } = SHEETS[code]!;
      expect(steps.map((s) => s.step)).toEqual(steps.map((_, i) => i + 1));
      expect(steps[0]!.serial).toBe(true);
      for (const { measure } of steps)
        if (measure?.min !== undefined && measure.max !== undefined)
          expect(measure.min).toBeLessThanOrEqual(measure.max);
    },
  );
  it("is a general one for what has none of its own", () => expect(sheetFor("cable")).toBe(SHEETS.other));
});
