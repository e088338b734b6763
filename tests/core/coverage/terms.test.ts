import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { cents, clauseInput } from "@/app/(desk)/terms/input";
import {
  CLAUSE_FEES,
  CLAUSE_KINDS,
  DAY_RULES,
  EXCLUSIONS,
  FREIGHT_RULES,
  REMEDIES,
  REPLACED_RULES,
  START_BASES,
  TRANSFER_RULES,
  type ClauseFact,
} from "@/lib/coverage/schema";
import {
  checkEffective,
  checkTerms,
  clauseOf,
  FIELDS_OF,
  inOrder,
  onlyItsOwn,
  type ClauseField,
  type TermsClause,
} from "@/lib/coverage/terms";
import { clauseWords, compareTerms, comparisonWords } from "@/lib/coverage/termwords";
import { clauseFor } from "@/lib/coverage/windows";
import { CONDITIONS, FAMILIES } from "@/lib/ledger/schema";
import { BUSINESS_TERMS } from "../../factories/terms";

const cover = (number: string, more: Partial<TermsClause> = {}) =>
  clauseOf({
    number,
    kind: "cover",
    title: "Drives",
    families: ["drive"],
    period: "P36M",
    startBasis: "shipped",
    remedies: ["advance_replacement", "repair"],
    ...more,
  });
const doa = (more: Partial<TermsClause> = {}) => cover("2.1", { kind: "doa", families: [], ...more });
const fitted = (more: Partial<TermsClause> = {}) =>
  clauseOf({ number: "4.1", kind: "replaced_part", title: "Parts we fit", period: "P90D", ...more });
const exclusion = (number: string, more: Partial<TermsClause> = {}) =>
  clauseOf({
    number,
    kind: "exclusion",
    title: "Liquid",
    exclusion: "liquid",
    evidence: ["photo of the traces"],
    ...more,
  });
const fee = (number: string, more: Partial<TermsClause> = {}) =>
  clauseOf({
    number,
    kind: "fee",
    title: "No fault found",
    feeKind: "no_fault_found",
    feeCents: 4500,
    words: "If our bench finds no fault, the test costs",
    ...more,
  });
const transfer = (more: Partial<TermsClause> = {}) =>
  clauseOf({ number: "5.1", kind: "transfer", title: "Given on", transferRule: "with_notice", ...more });

const at = (clauses: TermsClause[]) => checkTerms(clauses).map((p) => `${p.number} ${p.field}: ${p.message}`);

describe("clauses that may be published", () => {
  it("are those of the tests' own seller, and one of each kind", () => {
    expect(at(BUSINESS_TERMS.clauses.map(clauseOf))).toEqual([]);
    expect(at([doa(), cover("3.1"), fitted(), transfer(), exclusion("7.1"), fee("8.1")])).toEqual([]);
  });

  it("may share a family where a condition, or the family itself, puts one before the other", () => {
    expect(
      at([
        cover("3.1"),
        cover("3.2", { condition: "refurbished" }),
        cover("3.3", { families: [] }),
        cover("3.4", { families: ["system"] }),
        exclusion("7.1"),
        exclusion("7.2", { families: ["drive"] }),
        exclusion("7.3", { exclusion: "bent_contacts" }),
        fee("8.1"),
        fee("8.2", { feeKind: "diagnostic" }),
      ]),
    ).toEqual([]);
  });
});

describe("a clause is refused with the reason at its field", () => {
  it.each<[why: string, clause: TermsClause, field: ClauseField, message: string | RegExp]>([
    [
      "a period of nothing",
      cover("3.1", { period: "P0D" }),
      "period",
      "A period must be longer than nothing.",
    ],
    [
      "a broken period",
      cover("3.1", { period: "P1.5M" }),
      "period",
      "A period has whole parts only: write P45D, not P1.5M.",
    ],
    ["a negative period", cover("3.1", { period: "P-3M" }), "period", "A period cannot be negative."],
    ["hours", cover("3.1", { period: "PT36H" }), "period", "A period counts days, not hours."],
    ["no sense", cover("3.1", { period: "36 months" }), "period", /^Write a period such as/],
    ["a life and more", cover("3.1", { period: "P99Y" }), "period", /at most/],
    ["no period of cover", cover("3.1", { period: null }), "period", /^Give the period/],
    ["no DOA period", doa({ period: null }), "period", /^Give the period/],
    ["no floor", fitted({ period: null }), "period", /^Give the floor/],
    ["a floor beside the remainder", fitted({ replacedRule: "remainder" }), "period", /no floor/],
    [
      "a limit without a notice",
      transfer({ transferRule: "first_buyer", period: "P30D" }),
      "period",
      /notice/,
    ],
    ["a period of an exclusion", exclusion("7.1", { period: "P1Y" }), "period", /no period/],
    ["cover from no day", cover("3.1", { startBasis: null }), "startBasis", /which day/],
    ["DOA from no day", doa({ startBasis: null }), "startBasis", /which day/],
    ["days added to the ship day", cover("3.1", { deliveryGraceDays: 5 }), "deliveryGraceDays", /ship day/],
    [
      "too many days added",
      cover("3.1", { startBasis: "delivered", deliveryGraceDays: 61 }),
      "deliveryGraceDays",
      /0 to 60/,
    ],
    ["a number with a letter", cover("3a"), "number", /like 3 or 3.1/],
    ["a number with a nought in front", cover("3.01"), "number", /like 3 or 3.1/],
    ["a number that ends in a dot", cover("3."), "number", /like 3 or 3.1/],
    ["no title", cover("3.1", { title: " " }), "title", /few words/],
    ["an unknown family", cover("3.1", { families: ["drives"] }), "families", /“drives”/],
    ["a family twice", cover("3.1", { families: ["drive", "drive"] }), "families", /twice/],
    ["an unknown condition", cover("3.1", { condition: "old" }), "condition", /new or refurbished/],
    ["no remedy", cover("3.1", { remedies: [] }), "remedies", /at least one/],
    ["no remedy for DOA", doa({ remedies: [] }), "remedies", /at least one/],
    [
      "a remedy twice",
      cover("3.1", { remedies: ["repair", "credit", "repair"] }),
      "remedies",
      /repair stands twice/,
    ],
    ["a remedy of an exclusion", exclusion("7.1", { remedies: ["repair"] }), "remedies", /only/],
    [
      "a hold without an advance",
      cover("3.1", { remedies: ["repair"], holdCents: 9900 }),
      "holdCents",
      /advance/,
    ],
    [
      "due back without an advance",
      cover("3.1", { remedies: ["repair"], dueBackDays: 14 }),
      "dueBackDays",
      /advance/,
    ],
    ["due back at once", cover("3.1", { dueBackDays: 0 }), "dueBackDays", /1 to 120/],
    ["half a day", cover("3.1", { dueBackDays: 1.5 }), "dueBackDays", /whole number/],
    ["a negative hold", cover("3.1", { holdCents: -1 }), "holdCents", /amount/],
    ["a hold beyond sense", cover("3.1", { holdCents: 10_000_001 }), "holdCents", /amount/],
    ["an answer never", cover("3.1", { responseHours: 2001 }), "responseHours", /1 to 2,000/],
    ["endless hours", cover("3.1", { enduranceHours: 200_001 }), "enduranceHours", /1 to 200,000/],
    ["no terabytes", cover("3.1", { enduranceTb: 0 }), "enduranceTb", /1 to/],
    ["hours of use for DOA", doa({ enduranceHours: 9 }), "enduranceHours", /cover only/],
    ["terabytes of an exclusion", exclusion("7.1", { enduranceTb: 9 }), "enduranceTb", /cover only/],
    ["given on without a rule", transfer({ transferRule: null }), "transferRule", /what becomes/],
    [
      "a rule of giving on in cover",
      cover("3.1", { transferRule: "follows_serial" }),
      "transferRule",
      /given on only/,
    ],
    ["an exclusion of nothing", exclusion("7.1", { exclusion: null }), "exclusion", /Choose/],
    ["an unknown exclusion", exclusion("7.1", { exclusion: "bad_luck" }), "exclusion", /Choose/],
    ["an exclusion without evidence", exclusion("7.1", { evidence: [] }), "evidence", /evidence/],
    ["empty evidence", exclusion("7.1", { evidence: ["photo", " "] }), "evidence", /evidence/],
    ["evidence twice", exclusion("7.1", { evidence: ["photo", "photo"] }), "evidence", /twice/],
    ["an exclusion in cover", cover("3.1", { exclusion: "liquid" }), "exclusion", /Only an exclusion/],
    ["a fee for nothing known", fee("8.1", { feeKind: "handling" }), "feeKind", /Choose the fee/],
    ["a fee without an amount", fee("8.1", { feeCents: null }), "feeCents", /amount/],
    ["a fee of nothing", fee("8.1", { feeCents: 0 }), "feeCents", /amount/],
    ["a fee not told before", fee("8.1", { words: " " }), "words", /before/],
    ["a fee for one family", fee("8.1", { families: ["drive"] }), "families", /every part/],
    ["a fee in cover", cover("3.1", { feeCents: 100 }), "feeKind", /Only a fee/],
  ])("%s", (_why, clause, field, message) => {
    const list = clause.kind === "cover" ? [clause] : [cover("9.9"), clause];
    const found = checkTerms(list).filter((p) => p.field === field);
    expect(found).toHaveLength(1);
    expect(found[0]).toMatchObject({ index: list.length - 1, number: clause.number });
    expect(found[0]!.message).toMatch(message);
    // Nothing else is wrong with it.
    expect(checkTerms(list)).toHaveLength(1);
  });
});

describe("clauses that do not stand beside each other", () => {
  it.each<[why: string, a: TermsClause, b: TermsClause, message: string]>([
    [
      "one number",
      cover("3.1"),
      cover("3.1", { families: ["memory"] }),
      "3.1 number: Clause 3.1 is there already.",
    ],
    [
      "one family",
      cover("3.1", { families: ["memory", "drive"] }),
      cover("3.2", { families: ["drive", "fan"] }),
      "3.2 families: Clauses 3.1 and 3.2 overlap: both are about cover for drive. Take it out of one of them.",
    ],
    [
      "one family and condition",
      cover("3.1", { condition: "new" }),
      cover("3.2", { condition: "new" }),
      "3.2 families: Clauses 3.1 and 3.2 overlap: both are about cover for drive, new. Take it out of one of them.",
    ],
    [
      "every part",
      cover("3.1", { families: [] }),
      cover("3.2", { families: [] }),
      "3.2 families: Clauses 3.1 and 3.2 overlap: both are about cover for every part. Take it out of one of them.",
    ],
    [
      "one exclusion",
      exclusion("7.1"),
      exclusion("7.2"),
      "7.2 exclusion: Clauses 7.1 and 7.2 both leave out liquid inside for every part.",
    ],
    ["one fee", fee("8.1"), fee("8.2"), "8.2 feeKind: Clauses 8.1 and 8.2 are both for no fault found."],
  ])("%s", (_why, a, b, message) => {
    const list = a.kind === "cover" ? [a, b] : [cover("1"), a, b];
    expect(at(list)).toEqual([message]);
    const [p] = checkTerms(list);
    expect([p!.other, p!.index]).toEqual([list.length - 2, list.length - 1]);
  });

  it("are told for the terms as a whole where none gives cover", () => {
    expect(checkTerms([doa()])).toEqual([
      expect.objectContaining({
        index: -1,
        field: "form",
        message: expect.stringContaining("No clause gives cover") as string,
      }),
    ]);
  });

  /** What the check lets pass, the engine decides by one clause, whatever the order of the list. */
  it("are all of those between which the engine would choose by their place or number", () => {
    const some = fc.array(
      fc.record({
        families: fc.subarray(["drive", "system", "memory"]),
        condition: fc.constantFrom(null, "new", "refurbished"),
      }),
      { minLength: 1, maxLength: 5 },
    );
    fc.assert(
      fc.property(some, (claims) => {
        const name = (order: number[]): ClauseFact[] =>
          claims.map((c, i) => ({ ...cover(`3.${order[i]! + 1}`, c), id: String(i) }));
        const up = claims.map((_, i) => i);
        const apart = checkTerms(name(up)).length === 0;
        const down = [...up].reverse();
        const same = ["drive", "system", "memory"].every((family) =>
          CONDITIONS.every((condition) => {
            const part = { family, within: family === "system" ? null : "system" };
            return (
              clauseFor(name(up), "cover", part, condition)?.id ===
              clauseFor(name(down), "cover", part, condition)?.id
            );
          }),
        );
        return !apart || same;
      }),
      { numRuns: 500 },
    );
  });
});

describe("the order of clauses", () => {
  it("is that of their numbers as people count", () => {
    const of = ["10.1", "3.10", "3.2", "3", "3.1.1", "3.1", "2"].map((number) => ({ number }));
    expect(inOrder(of).map((c) => c.number)).toEqual(["2", "3", "3.1", "3.1.1", "3.2", "3.10", "10.1"]);
  });
});

describe("the day an issue begins", () => {
  const last = { issue: 2, effectiveOn: "2026-05-01" };
  it.each([
    ["2026-05-01", null],
    ["2026-06-03", null],
    ["2028-06-03", null],
    ["2026-04-30", /Issue 2 is in force from 1 May 2026/],
    ["2206-06-03", /at most two years ahead/],
    ["2026-02-29", /Give a day/],
    ["31.12.2026", /Give a day/],
    ["", /Give a day/],
  ])("%s", (day, why) => {
    const said = checkEffective(day, { last, today: "2026-06-03" });
    if (why === null) expect(said).toBeNull();
    else expect(said).toMatch(why);
  });
});

const families = fc.subarray([...FAMILIES], { maxLength: 4 });
const maybe = <T>(of: fc.Arbitrary<T>) => fc.option(of, { nil: null });
const anyClause: fc.Arbitrary<TermsClause> = fc
  .record({
    number: fc.tuple(fc.integer({ min: 1, max: 9 }), fc.integer({ min: 1, max: 12 })).map((n) => n.join(".")),
    kind: fc.constantFrom(...CLAUSE_KINDS),
    title: fc.constantFrom("Drives", "Boards", "Parts we fit"),
    families,
    condition: maybe(fc.constantFrom(...CONDITIONS)),
    period: maybe(fc.constantFrom("P36M", "P3Y", "P90D", "P30D", "P1Y6M")),
    startBasis: maybe(fc.constantFrom(...START_BASES)),
    deliveryGraceDays: fc.integer({ min: 0, max: 10 }),
    dayRule: fc.constantFrom(...DAY_RULES),
    rolls: fc.boolean(),
    clockStops: fc.boolean(),
    replacedRule: fc.constantFrom(...REPLACED_RULES),
    transferRule: maybe(fc.constantFrom(...TRANSFER_RULES)),
    remedies: fc.shuffledSubarray([...REMEDIES]),
    dueBackDays: maybe(fc.integer({ min: 1, max: 30 })),
    holdCents: maybe(fc.integer({ min: 1, max: 99_999 })),
    freight: maybe(fc.constantFrom(...FREIGHT_RULES)),
    responseHours: maybe(fc.integer({ min: 1, max: 48 })),
    enduranceHours: maybe(fc.integer({ min: 1, max: 50_000 })),
    enduranceTb: maybe(fc.integer({ min: 1, max: 5_000 })),
    exclusion: maybe(fc.constantFrom(...EXCLUSIONS)),
    evidence: fc.shuffledSubarray(["photo of the damage", "event log", "photo of the label"]),
    feeKind: maybe(fc.constantFrom(...CLAUSE_FEES)),
    feeCents: maybe(fc.integer({ min: 1, max: 99_999 })),
    words: fc.constantFrom("", "Told before.", "nothing"),
  })
  .map(onlyItsOwn);
const anyTerms = fc.uniqueArray(anyClause, { selector: (c) => c.number, maxLength: 8 });
/** Families say the same in any order. */
const plain = (c: TermsClause) => ({ ...c, families: [...c.families].sort() });

describe("two issues compared", () => {
  it("differ in nothing when they are one", () => {
    fc.assert(
      fc.property(anyTerms, (x) => {
        const rows = compareTerms(x, [...x].reverse());
        expect(rows.map((r) => r.state)).toEqual(x.map(() => "same"));
        expect(comparisonWords(rows)).toBeNull();
      }),
    );
  });

  it("make the second of the first when what differs is put in its place", () => {
    fc.assert(
      fc.property(anyTerms, anyTerms, (x, y) => {
        const rows = compareTerms(x, y);
        const made = rows.flatMap((r) => {
          if (r.state === "removed") return [];
          if (r.state === "added") return [r.after!];
          // Field by field: one that were left out of the comparison would be missing here.
          const changed = Object.fromEntries(r.changes.map((c) => [c.field, r.after![c.field]]));
          return [{ ...r.before!, ...changed } as TermsClause];
        });
        expect(made.map(plain)).toEqual(inOrder(y).map(plain));
        for (const r of rows) for (const c of r.changes) expect(c.was).not.toBe(c.now);
      }),
      { numRuns: 300 },
    );
  });

  it("say was and now in words", () => {
    const [row] = compareTerms(
      [cover("3.2", { dueBackDays: 14, enduranceHours: 30_000 })],
      [
        cover("3.2", {
          period: "P60M",
          startBasis: "delivered",
          deliveryGraceDays: 5,
          remedies: ["repair"],
          enduranceHours: 45_000,
        }),
      ],
    );
    expect(row!.changes.map((c) => [c.label, c.was, c.now])).toEqual([
      ["Period", "36 months (P36M)", "60 months (P60M)"],
      ["Runs from", "the ship day", "delivery"],
      ["Days added without proof", "0 days", "5 days"],
      ["Hours of use", "30,000 hours", "45,000 hours"],
      ["Remedies, in order", "advance replacement, then repair", "repair"],
      ["Old part due back", "14 days", "nothing"],
    ]);
    expect(
      comparisonWords(compareTerms([cover("3.1"), doa()], [cover("3.1", { period: "P1Y" }), fee("8.1")])),
    ).toBe("1 changed, 1 added, 1 taken out");
  });
});

describe("the rule of a clause in words", () => {
  it.each([
    [
      doa({
        startBasis: "delivered",
        deliveryGraceDays: 5,
        period: "P30D",
        dueBackDays: 14,
        holdCents: 25_000,
      }),
      "30 days from delivery (without proof: ship day and 5 days), that day not counted; a last day that is no working day moves to the next that is. In advance: the old part is due back in 14 days and 250.00 EUR are held until then.",
    ],
    [
      cover("3.1", { enduranceHours: 30_000, enduranceTb: 600, freight: "customer_in", responseHours: 8 }),
      "36 months from the ship day, that day not counted, or 30,000 hours or 600 TB written, whichever is first; pauses add their days. Freight: the customer pays the way in, we pay the way out. We answer within 8 working hours.",
    ],
    [
      fitted(),
      "A part we fit has the rest of the first cover or the floor, whichever is later. The floor is 90 days from the swap, that day not counted.",
    ],
    [
      exclusion("7.1"),
      "Leaves out liquid inside once evidence shows it: photo of the traces. Without that a person decides.",
    ],
    [
      transfer({ period: "P30D", rolls: false }),
      "When a unit is given on, cover goes along when we are told in writing, within 30 days of the day it was given on, that day not counted.",
    ],
  ])("%#", (clause, words) => {
    expect(clauseWords(clause)).toBe(words);
  });

  /** A field that the sentence leaves out could be changed without anybody reading it. */
  it("changes with every field that has an effect, but for those that stand beside it", () => {
    const beside = new Set<ClauseField>(["families", "condition", "remedies"]);
    const pair = fc
      .tuple(anyClause, anyClause)
      .map(([a, b]) => [a, onlyItsOwn({ ...b, kind: a.kind })] as const);
    fc.assert(
      fc.property(pair, ([a, b]) => {
        for (const field of FIELDS_OF[a.kind]) {
          if (beside.has(field) || JSON.stringify(a[field]) === JSON.stringify(b[field])) continue;
          const whole = {
            ...a,
            period: a.period ?? "P1Y",
            startBasis: a.startBasis ?? "delivered",
          } as TermsClause;
          const put = { ...whole, [field]: b[field] ?? whole[field] };
          if (JSON.stringify(put[field]) === JSON.stringify(whole[field])) continue;
          // Days added count where another day than the ship day may be missing.
          if (field === "deliveryGraceDays" && whole.startBasis === "shipped") continue;
          expect([field, clauseWords(put)]).not.toEqual([field, clauseWords(whole)]);
        }
      }),
      { numRuns: 300 },
    );
  });
});

describe("the form of a clause as it is typed", () => {
  it.each([
    ["250", 25_000],
    ["250.5", 25_050],
    ["250,50", 25_050],
    ["1,250", 125_000],
    ["1,250.00 EUR", 125_000],
    ["1 250", 125_000],
    ["", undefined],
    ["much", "much"],
    ["1.234", "1.234"],
    ["-5", "-5"],
  ])("an amount of %j", (typed, is) => {
    expect(cents(typed)).toBe(is);
  });

  it("keeps what is no number for the check to tell of, beside all else", () => {
    const input = clauseInput({
      kind: "cover",
      number: " 3.1 ",
      title: "Drives",
      parts: "named",
      families: "drive",
      period: "P36M",
      startBasis: "shipped",
      remedies: ["repair"],
      enduranceHours: "30,000",
      responseHours: "soon",
      clockStops: "on",
      evidence: " photo \r\n\n event log ",
    });
    expect(input).toMatchObject({
      number: "3.1",
      families: ["drive"],
      enduranceHours: 30_000,
      responseHours: "soon",
      clockStops: true,
      rolls: false,
      evidence: ["photo", "event log"],
    });
    const clause = onlyItsOwn(clauseOf(input as Parameters<typeof clauseOf>[0]));
    expect(at([clause])).toEqual(["3.1 responseHours: Give a whole number from 1 to 2,000."]);
  });

  it("does not take families that were all unticked for every part", () => {
    const of = (parts: string) =>
      onlyItsOwn(
        clauseOf({ ...cover("3.1"), families: clauseInput({ parts }).families as TermsClause["families"] }),
      );
    expect(at([of("every")])).toEqual([]);
    expect(at([of("named")])).toEqual(["3.1 families: Tick the parts it is for, or choose every part."]);
  });
});
