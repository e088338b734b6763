import { simpleParser } from "mailparser";
import { describe, expect, test } from "vitest";
import { renderMail } from "@/lib/mail/render.io";
import { subjectFor } from "@/lib/mail/rules";
import { TEMPLATES, type TemplateName } from "@/lib/mail/schema";
import { SAMPLES } from "./samples";

const seller = "Ostwick Server Works";
const flat = (s: string) => s.replace(/\s+/g, " ");

describe.each(TEMPLATES)("the letter %s", (name: TemplateName) => {
  const sample = SAMPLES[name];

  test("says what it must, as markup and as plain text", async () => {
    const { html, text } = await renderMail(name, sample.props, seller);
    // Read back by a general parser, as the reader's program would.
    const shown = flat(
      (await simpleParser(`Content-Type: text/html; charset=utf-8\r\n\r\n${html}`)).text ?? "",
    );
    for (const words of [...sample.says, seller]) {
      expect(flat(text)).toContain(words);
      expect(shown).toContain(words);
    }
  });

  test("loads nothing from outside and runs nothing", async () => {
    const { html } = await renderMail(name, sample.props, seller);
    expect(html).not.toMatch(/<(?:img|script|iframe|link|form)\b|@import|url\(/i);
    expect(html).toMatch(/<html[^>]* lang="en"/);
  });

  test("has a subject of one line", () => {
    const subject = subjectFor(name, sample.props as never, "Node down");
    expect(subject.length).toBeGreaterThan(5);
    expect(subject).not.toMatch(/[\r\n]|undefined/);
  });
});

test("props of another shape are refused, not printed", async () => {
  await expect(renderMail("received", { personName: "x" }, seller)).rejects.toThrow();
});
