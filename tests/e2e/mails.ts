import { expect } from "@playwright/test";
import type { Running } from "./fixtures";

/** A mail that we sent, as the mail host keeps it. */
export type Mail = {
  id: string;
  at: string;
  to: string;
  from: string;
  replyTo: string;
  subject: string;
  messageId: string;
  references: string[];
  text: string;
  html: string;
  headers: { name: string; value: string }[];
  links: string[];
  attachments: { n: number; name: string; type: string; size: number; href: string }[];
};

/** Every mail in one mailbox, newest first as the mail host lists them. */
export async function mailsTo(running: Running, address: string): Promise<Mail[]> {
  const answer = await fetch(`${running.mailUrl}/api/messages?to=${encodeURIComponent(address)}`);
  return (await answer.json()) as Mail[];
}

/** Waits for a mail to this address whose subject fits and which came after `known`. */
export async function awaitMail(
  running: Running,
  address: string,
  subject: RegExp,
  known: Mail[] = [],
): Promise<Mail> {
  const old = new Set(known.map((mail) => mail.id));
  let found: Mail | undefined;
  await expect
    .poll(
      async () => {
        const mails = await mailsTo(running, address);
        found = mails.find((mail) => !old.has(mail.id) && subject.test(mail.subject));
        return found ? "there" : mails.map((mail) => mail.subject);
      },
      { timeout: 60_000, message: `a mail to ${address} about ${subject}` },
    )
    .toBe("there");
  return found!;
}

/** The bytes of an attachment. */
export async function attachmentOf(running: Running, attachment: { href: string }): Promise<Buffer> {
  const answer = await fetch(new URL(attachment.href, running.mailUrl));
  expect(answer.status).toBe(200);
  return Buffer.from(await answer.arrayBuffer());
}

export type Written = {
  from: string;
  name?: string;
  to: string;
  subject: string;
  text: string;
  /** Id of the mail that this one answers. */
  answers?: string;
  quote?: boolean;
  attachments?: { name: string; type: string; base64: string }[];
};

/** Writes to the desk as a customer: composed by the mail host and delivered by SMTP to our receiver. */
export async function writeMail(running: Running, mail: Written): Promise<{ messageId: string }> {
  const answer = await fetch(`${running.mailUrl}/api/send`, {
    method: "POST",
    headers: { "content-type": "application/json" },
    body: JSON.stringify(mail),
  });
  const outcome = (await answer.json()) as { ok: boolean; words: string; messageId: string };
  expect(outcome.words, "the receiver's answer").toMatch(/^250/);
  return { messageId: outcome.messageId };
}
