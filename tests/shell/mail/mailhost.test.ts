import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { createTransport } from "nodemailer";
import { SMTPServer } from "smtp-server";
import { afterAll, beforeAll, expect, test } from "vitest";
import { startMailHost, type MailHost } from "@/lib/standins/mailhost";

let host: MailHost;
let taken: { from: string; raw: string }[] = [];
const dir = mkdtempSync(join(tmpdir(), "mendbay-mail-"));
const receiver = new SMTPServer({
  authOptional: true,
  disabledCommands: ["STARTTLS"],
  onRcptTo: (a, _s, done) => done(a.address === "full@ostwick.example" ? new Error("no room") : null),
  onData(stream, session, done) {
    let raw = "";
    stream.on("data", (c: Buffer) => (raw += c.toString("latin1")));
    stream.on("end", () => {
      taken.push({ from: session.envelope.mailFrom ? session.envelope.mailFrom.address : "", raw });
      done(null, "stored");
    });
  },
});
const at = (path: string) => `http://127.0.0.1:${host.httpPort}${path}`;
const messages = async (to: string) =>
  (await (await fetch(at(`/api/messages?to=${encodeURIComponent(to)}`))).json()) as {
    id: string;
    subject: string;
    text: string;
    attachments: { href: string; name: string }[];
  }[];

beforeAll(async () => {
  await new Promise<void>((done) => receiver.listen(0, "127.0.0.1", () => done()));
  const port = (receiver.server.address() as { port: number }).port;
  host = await startMailHost({
    dir,
    smtpPort: 0,
    httpPort: 0,
    receiver: { host: "127.0.0.1", port },
    desk: "desk@ostwick.example",
  });
});
afterAll(async () => {
  await host.stop();
  await new Promise<void>((done) => receiver.close(() => done()));
  rmSync(dir, { recursive: true, force: true });
});

async function weSend(to: string, subject: string, text: string) {
  const post = createTransport({ host: "127.0.0.1", port: host.smtpPort, ignoreTLS: true });
  await post.sendMail({
    from: "desk@ostwick.example",
    to,
    subject,
    text,
    messageId: "<one@ostwick.example>",
    replyTo: "r+atoken@ostwick.example",
    attachments: [{ filename: "traveler.pdf", content: Buffer.from("%PDF-1.7 bytes") }],
  });
  post.close();
}

test("what we send lies in its mailbox, with its files, also after a restart", async () => {
  await weSend("ines@pinnock.example", "It has come", "Open http://127.0.0.1:3000/x please");
  const [mail] = await messages("ines@pinnock.example");
  expect(mail).toMatchObject({ subject: "It has come" });
  const file = await fetch(at(mail!.attachments[0]!.href));
  expect(await file.text()).toBe("%PDF-1.7 bytes");
  expect(file.headers.get("content-disposition")).toContain("attachment");
  const shown = await (await fetch(at(`/mail/${mail!.id}`))).text();
  expect(shown).toContain('<a href="http://127.0.0.1:3000/x">');
  const { MailStore } = await import("@/lib/standins/mailstore");
  expect(new MailStore(dir).list("INES@pinnock.example")).toHaveLength(1);
});

test("an answer written on the page reaches the receiver as a reply, with its file", async () => {
  taken = [];
  const [mail] = await messages("ines@pinnock.example");
  const form = new FormData();
  form.set("from", "ines@pinnock.example");
  form.set("to", "r+atoken@ostwick.example");
  form.set("subject", "Re: It has come");
  form.set("text", "Here is the photo.");
  form.set("answers", mail!.id);
  form.set("quote", "on");
  form.append("files", new File([new Uint8Array([255, 216, 255])], "slot.jpg", { type: "image/jpeg" }));
  const page = await fetch(at("/send"), { method: "POST", body: form });
  expect(await page.text()).toContain("has taken it");
  expect(taken).toHaveLength(1);
  expect(taken[0]!.from).toBe("ines@pinnock.example");
  expect(taken[0]!.raw).toMatch(/^In-Reply-To: <one@ostwick\.example>/m);
  expect(taken[0]!.raw).toMatch(/^> Open http/m);
  expect(taken[0]!.raw).toContain("filename=slot.jpg");
});

test("a refusal of the receiver is told in its words", async () => {
  const refused = await fetch(at("/api/send"), {
    method: "POST",
    body: JSON.stringify({ from: "a@pinnock.example", to: "full@ostwick.example", subject: "x", text: "y" }),
  });
  expect(refused.status).toBe(502);
  expect(((await refused.json()) as { words: string }).words).toContain("no room");
});

test("a page of another site, or another name for this machine, gets nothing", async () => {
  const { request } = await import("node:http");
  const status = await new Promise((done) =>
    request(at("/"), { headers: { host: "mail.evil.example" } }, (r) => done(r.resume().statusCode)).end(),
  );
  expect(status).toBe(403);
});
