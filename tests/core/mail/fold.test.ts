import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { foldQuotes } from "@/lib/mail/fold";

const shown = (text: string, sent: string[] = []) => {
  const folds = foldQuotes(text, sent);
  return text
    .split("\n")
    .filter((_, i) => !folds.some(([from, to]) => i >= from && i < to))
    .join("\n")
    .trim();
};
const QUOTE = "> Please send a photo of the slot.\n> And the log, if the machine still writes one.";

// How mail programs introduce a quote in each language: common practice, no source.
describe("an introduction in each language folds with its quote", () => {
  test.each([
    ["English", "On Wed, 4 Mar 2026 at 10:12, Desk <desk@ostwick.example> wrote:"],
    [
      "English over two lines",
      "On Wed, 4 Mar 2026 at 10:12, Ostwick Server Works\n<desk@ostwick.example> wrote:",
    ],
    ["German", "Am 04.03.2026 um 10:12 schrieb Desk <desk@ostwick.example>:"],
    ["French", "Le mer. 4 mars 2026 à 10:12, Desk <desk@ostwick.example> a écrit :"],
    ["Spanish", "El mié, 4 mar 2026 a las 10:12, Desk (<desk@ostwick.example>) escribió:"],
    ["Italian", "Il giorno mer 4 mar 2026 alle ore 10:12 Desk <desk@ostwick.example> ha scritto:"],
    ["Dutch", "Op wo 4 mrt 2026 om 10:12 schreef Desk <desk@ostwick.example>:"],
    ["Portuguese", "Em qua., 4 de mar. de 2026 às 10:12, Desk <desk@ostwick.example> escreveu:"],
    ["Swedish", "Den ons 4 mars 2026 kl 10:12 skrev Desk <desk@ostwick.example>:"],
    ["Danish", "Den ons. 4. mar. 2026 kl. 10.12 skrev Desk <desk@ostwick.example>:"],
    ["Finnish", "ke 4. maalisk. 2026 klo 10.12 Desk (desk@ostwick.example) kirjoitti:"],
    ["Polish", "śr., 4 mar 2026 o 10:12 Desk <desk@ostwick.example> napisał(a):"],
    ["Czech", "st 4. 3. 2026 v 10:12 odesílatel Desk <desk@ostwick.example> napsal:"],
    ["Hungarian", "Desk <desk@ostwick.example> ezt írta (2026. márc. 4., Sze, 10:12):"],
    ["Turkish", "Desk <desk@ostwick.example>, 4 Mar 2026 Çar, 10:12 tarihinde şunu yazdı:"],
    ["Russian", "ср, 4 мар. 2026 г. в 10:12, Desk <desk@ostwick.example> написал:"],
    ["Japanese", "2026年3月4日(水) 10:12 Desk <desk@ostwick.example>のメール:"],
    ["Chinese", "Desk <desk@ostwick.example> 于2026年3月4日周三 10:12写道："],
    ["Korean", "2026년 3월 4일 (수) 오전 10:12, Desk <desk@ostwick.example>님이 작성:"],
  ])("%s", (_, intro) => {
    expect(shown(`It is slot A2.\n\n${intro}\n${QUOTE}`)).toBe("It is slot A2.");
    // Without quote marks too: some programs set none.
    expect(shown(`It is slot A2.\n\n${intro}\n\nPlease send a photo of the slot.`)).toBe("It is slot A2.");
  });

  test.each([
    ["English", "-----Original Message-----\nFrom: Desk\nSent: Wednesday\nTo: Ines\nSubject: Node"],
    ["German", "Von: Desk\nGesendet: Mittwoch\nAn: Ines\nBetreff: Node"],
    ["French", "De : Desk\nEnvoyé : mercredi\nÀ : Ines\nObjet : Node"],
    ["Spanish", "De: Desk\nEnviado: miércoles\nPara: Ines\nAsunto: Node"],
    [
      "with a rule above",
      "________________________________\nFrom: Desk\nSent: Wednesday\nTo: Ines\nSubject: Node",
    ],
  ])("a block of headers, %s", (_, block) => {
    expect(shown(`It is slot A2.\n\n${block}\n\nPlease send a photo.`)).toBe("It is slot A2.");
  });
});

describe("what stays", () => {
  test("answers between quoted lines, with the questions", () => {
    const text = [
      "> Which slot?",
      "A2.",
      "> Since when?",
      "Monday.",
      "> Other supplies?",
      "Fine.",
      "> Any smell?",
      "No.",
      "> Log?",
      "Attached.",
    ].join("\n");
    for (const answer of ["A2.", "Monday.", "Fine.", "No.", "Attached."])
      expect(shown(text)).toContain(answer);
    expect(shown(text)).toContain("Which slot?");
  });
  test("an answer below the quote", () => {
    expect(shown(`On 4 Mar 2026, Desk <d@ostwick.example> wrote:\n${QUOTE}\n\nIt is slot A2.`)).toBe(
      "It is slot A2.",
    );
  });
  test("a forward without a word of its own is shown whole", () => {
    const text =
      "-----Original Message-----\nFrom: Tom\nSent: Monday\nTo: Ines\nSubject: dead\n\nThe box is dead.";
    expect(shown(text)).toContain("The box is dead.");
  });
  test("a customer's sentence that ends in a colon, and a list of theirs with words like headers", () => {
    const text = "We saw this in the log:\nFrom: bay 3\nand then nothing.\nDate of purchase: I do not know";
    expect(shown(text)).toBe(text);
  });
  test("what we sent is known again without any quote mark", () => {
    const ours =
      "Please send a photo of the slot and of the label.\nAlso the log of the machine, if it still writes one.";
    expect(shown(`It is slot A2.\n\n${ours}`, [ours])).toBe("It is slot A2.");
  });
});

test("folds are in order, apart and within the text; something always stays visible", () => {
  const part = fc.constantFrom(
    "> quoted",
    "words",
    "",
    "On 4 Mar 2026, d@o.example wrote:",
    "From: x",
    "To: y",
    "Subject: z",
    "-----Original Message-----",
  );
  fc.assert(
    fc.property(fc.array(part, { maxLength: 40 }), (lines) => {
      const folds = foldQuotes(lines.join("\n"));
      const ordered = folds.every(
        ([from, to], i) =>
          from < to && to <= Math.max(1, lines.length) && (i === 0 || folds[i - 1]![1] <= from),
      );
      const seen = lines.some((l, i) => l !== "" && !folds.some(([from, to]) => i >= from && i < to));
      return ordered && (folds.length === 0 || seen);
    }),
  );
});

// Texts that make a matcher of patterns go back and forth. The time is generous: quadratic work takes many times it.
test.each([
  ["blank lines", "\n".repeat(100_000)],
  ["blanks", " ".repeat(100_000)],
  ["half an introduction", "On On On ".repeat(12_000)],
  ["lines of it", "On 4 Mar\n".repeat(12_000)],
  ["underlines", "_".repeat(100_000)],
  ["quote marks", "> ".repeat(50_000)],
  ["header words", "From: To: ".repeat(10_000)],
])("100 kB of %s fold within the bound", (_, text) => {
  const before = performance.now();
  foldQuotes(text, [text]);
  expect(performance.now() - before).toBeLessThan(250);
});
