import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { goodwillSentence } from "@/lib/coverage/goodwill";
import { OUTCOMES, REMEDIES, type Outcome } from "@/lib/coverage/schema";
import { renderMail } from "@/lib/mail/render.io";
import {
  centsFrom,
  exceptionLetter,
  grantFor,
  mayAnswer,
  mayAsk,
  moveSeen,
  showEuros,
  type AnswerFacts,
  type AskFacts,
  type Grant,
} from "@/lib/tickets/goodwill";
import { SAMPLES } from "../mail/samples";

describe("euros as people type them", () => {
  it.each([
    ["420", 42_000],
    ["420.5", 42_050],
    ["420,05", 42_005],
    [" € 1 200.00 ", 120_000],
    ["75 EUR", 7_500],
    ["0", 0],
  ])("%s", (text, cents) => expect(centsFrom(text)).toBe(cents));
  // One thousand two hundred in one country, one and a fifth in the next: no guess is right.
  it.each(["1.200", "1,200", "1.200,00", "-5", "4e2", "12.345", "much", "", ".", "١٢"])(
    "%s is none",
    (text) => expect(centsFrom(text)).toBeNull(),
  );
  it("reads back what it shows, to the cent", () =>
    fc.assert(fc.property(fc.nat(9_999_999_99), (cents) => centsFrom(showEuros(cents)) === cents)));
});

const asking: AskFacts = {
  serial: "VS-1",
  tied: true,
  outcome: "not_covered",
  waits: null,
  granted: [],
  onRma: null,
  wish: "repair",
};
describe("who may ask", () => {
  const open: Record<Outcome, boolean> = {
    covered: false,
    covered_doa: false,
    not_covered: true,
    needs_person: true,
  };
  it.each(OUTCOMES)("when the decision says %s", (outcome) =>
    expect(mayAsk({ ...asking, outcome }).ok).toBe(open[outcome]),
  );
  it.each<[string, Partial<AskFacts>, RegExp]>([
    ["not tied", { tied: false }, /Tie the unit first/],
    ["not decided", { outcome: null }, /coverage decision for VS-1 first/],
    ["on an RMA", { onRma: "RMA-7-K" }, /on RMA-7-K already/],
    ["asked already", { waits: "Noor Haddad" }, /Noor Haddad has asked/],
    ["granted already", { granted: [{ ref: "C4", remedy: "repair" }] }, /C4 grants repair/],
  ])("not of a unit that is %s", (_, more, words) =>
    expect(mayAsk({ ...asking, ...more })).toMatchObject({
      ok: false,
      refusal: { message: expect.stringMatching(words) as string },
    }),
  );
  it("for another remedy than the one granted", () =>
    expect(mayAsk({ ...asking, granted: [{ ref: "C4", remedy: "credit" }] }).ok).toBe(true));
});

const answering: AnswerFacts = {
  serial: "VS-1",
  state: "asked",
  askedBy: "a",
  answered: "",
  by: "b",
  newest: { id: "d1", outcome: "not_covered", headline: "Not covered." },
  seen: "d1",
  answer: "granted",
};
describe("who may answer", () => {
  const code = (more: Partial<AnswerFacts>) => {
    const r = mayAnswer({ ...answering, ...more });
    return r.ok ? "ok" : r.refusal.code;
  };
  it("is another person, once, by the newest decision", () => {
    expect(code({})).toBe("ok");
    expect(code({ by: "a" })).toBe("rule");
    expect(code({ by: "a", answer: "declined" })).toBe("rule");
    expect(code({ state: "granted" })).toBe("conflict");
    expect(code({ seen: "d0" })).toBe("stale");
    expect(code({ seen: "d0", answer: "declined" })).toBe("stale");
  });
  it("grants nothing that the terms give by now, and may say no to it", () => {
    const newest = { id: "d1", outcome: "covered" as const, headline: "Covered." };
    expect(code({ newest })).toBe("rule");
    expect(code({ newest, answer: "declined" })).toBe("ok");
  });
  it("is never the one who asked, whatever else is so", () =>
    fc.assert(
      fc.property(
        fc.constantFrom("asked", "granted", "declined"),
        fc.constantFrom(...OUTCOMES),
        fc.constantFrom("granted", "declined"),
        fc.constantFrom("d0", "d1"),
        (state, outcome, answer, seen) =>
          code({ by: "a", state, answer, seen, newest: { id: "d1", outcome, headline: "" } }) !== "ok",
      ),
    ));
});

describe("the grant an RMA goes by", () => {
  const grants = fc.array(
    fc.record<Grant>({
      goodwillId: fc.uuid(),
      ref: fc.nat(99).map((n) => `C${n}`),
      decisionId: fc.constantFrom("d1", "d2"),
      remedy: fc.constantFrom(...REMEDIES),
      limitCents: fc.integer({ min: 1, max: 1e7 }),
      usedBy: fc.constantFrom(null, "RMA-7-K"),
    }),
    { maxLength: 6 },
  );
  it("is one of this decision, for this remedy, not used; and one is found when there is one", () =>
    fc.assert(
      fc.property(
        grants,
        fc.constantFrom("d1", "d2"),
        fc.constantFrom(...REMEDIES),
        (list, decisionId, remedy) => {
          const fits = list.filter(
            (g) => g.decisionId === decisionId && g.remedy === remedy && g.usedBy === null,
          );
          const found = grantFor({ serial: "VS-1", decisionId, remedy }, list);
          return found.ok ? fits.includes(found.value) : fits.length === 0;
        },
      ),
    ));
});

describe("what the customer gets", () => {
  it("is without the asking", () => {
    expect(moveSeen("grant or decline goodwill")).toBe("answer");
    expect(moveSeen("authorize what was granted")).toBe("authorize what was granted");
  });
  it("says that it is an exception and takes no right away", () => {
    const letter = exceptionLetter("VS-1", "advance_replacement");
    expect(letter).toContain("We make an exception for you: advance replacement for VS-1.");
    expect(letter).toMatch(/outside the terms of our warranty, and it changes no right that you have by law/);
    expect(letter).not.toMatch(/EUR|limit/i);
  });
  it("says so in the mail with the papers, for all of it or for the units it is about", async () => {
    const { props } = SAMPLES.rma_authorized;
    const read = async (goodwill?: string[]) =>
      (
        await renderMail("rma_authorized", { ...(props as object), fees: [], goodwill }, "Ostwick")
      ).text.replace(/\s+/g, " ");
    const sentence =
      /is goodwill, an exception we make outside the terms of our warranty, and it changes no right/;
    expect(await read()).not.toMatch(/goodwill/);
    expect(await read()).toContain("No fee applies to this return under our warranty.");
    expect(await read(["VN8-77120-441"])).toMatch(sentence);
    expect(await read(["VN8-77120-441"])).toContain("No fee applies to this return.");
    expect(await read(["A", "B"])).toMatch(/For A, B this is goodwill/);
  });
});

describe("the figures as a sentence", () => {
  const none = { asked: 0, waiting: 0, granted: 0, declined: 0, grantedCents: 0 };
  const at = { month: "2026-11", mine: false, thisYear: "2026" };
  it.each([
    [none, at, "In November no goodwill was asked for."],
    [
      { asked: 4, waiting: 0, granted: 3, declined: 1, grantedCents: 42_000 },
      at,
      "In November four were asked, three granted up to 420.00 EUR in all; one declined.",
    ],
    [
      { ...none, asked: 1, waiting: 1 },
      { ...at, month: null },
      "So far one was asked; one waits for an answer.",
    ],
    [
      { asked: 5, waiting: 2, granted: 1, declined: 2, grantedCents: 5 },
      { ...at, thisYear: "2027" },
      "In November 2026 five were asked, one granted up to 0.05 EUR in all; two declined, two wait for an answer.",
    ],
    [{ ...none, asked: 2, declined: 2 }, { ...at, mine: true }, "In November you asked twice; two declined."],
    [none, { ...at, mine: true, month: null }, "So far you asked for no goodwill."],
  ])("%o", (figures, how, words) => expect(goodwillSentence(figures, how)).toBe(words));
});
