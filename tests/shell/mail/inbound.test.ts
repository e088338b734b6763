import { connect } from "node:net";
import { sql } from "drizzle-orm";
import fc from "fast-check";
import sharp from "sharp";
import { afterAll, beforeAll, expect, test } from "vitest";
import { jobCtx, type Ctx } from "@/lib/ctx";
import { must } from "@/lib/base/result";
import { deadLetters, heldList } from "@/lib/mail/queries";
import { admitHeld, discardHeld } from "@/lib/tickets/mail.commands";
import { bounceOf, rawMailOf, someId } from "../../factories/mail";
import { freshDb } from "../db";
import { mailWorld, rows, seedLedger, type MailWorld } from "./world";

await freshDb();
let world: MailWorld;
let serial = "";

beforeAll(async () => {
  world = await mailWorld();
  serial = (await seedLedger()).serial;
});
afterAll(() => world.stop());

const agent = (): Ctx =>
  jobCtx("test", {
    actor: {
      kind: "staff",
      userId: crypto.randomUUID(),
      name: "Ada Desk",
      email: "ada@ostwick.example",
      roles: ["agent"],
    },
  });
type Ticket = { id: string; number: number; account_id: string | null; closed_at: string | null };
const tickets = () => rows<Ticket>(sql`select id, number, account_id, closed_at from ticket order by number`);
const entriesOf = (id: string) =>
  rows<{ kind: string; line: string }>(
    sql`select kind, line from entry where ticket_id = ${id} order by seq`,
  );
const kinds = async (id: string) => (await entriesOf(id)).map((e) => e.kind);

test("a customer's mail with a photo becomes a ticket, its serial proposed, and is acknowledged once", async () => {
  const photo = await sharp({ create: { width: 40, height: 30, channels: 3, background: "#555" } })
    .jpeg()
    .toBuffer();
  const raw = rawMailOf({
    subject: "Node down",
    text: `Good morning,\r\nour ${serial.toLowerCase().replace("-", " - ")} / ${serial} does not start since Monday.`,
    files: [{ name: "../../slot a2.jpg", type: "image/jpeg", bytes: photo }],
  });
  expect(await world.arrive(raw)).toContain("stored");
  await world.jobs();
  const [ticket, ...more] = await tickets();
  expect(more).toEqual([]);
  expect(ticket!.account_id).not.toBeNull();
  expect(await kinds(ticket!.id)).toEqual(["mail_in", "mail_auto", "evidence_added"]);
  expect(
    await rows(sql`select u.serial, tu.state from ticket_unit tu join unit u on u.id = tu.unit_id`),
  ).toEqual([{ serial, state: "proposed" }]);
  expect(await rows(sql`select name, state, type from file`)).toEqual([
    { name: "slot a2.jpg", state: "clean", type: "image/jpeg" },
  ]);

  const acks = await world.sent("ines@pinnock.example");
  expect(acks).toHaveLength(1);
  const header = (name: string) => acks[0]!.headers.find((h) => h.name.toLowerCase() === name)?.value;
  // RFC 3834 s. 3.1.6 and 5.
  expect(header("auto-submitted")).toBe("auto-replied");
  expect(header("in-reply-to")).toMatch(/^<.*@pinnock\.example>$/);
  expect(acks[0]!.replyTo).toMatch(/^r\+a[0-9a-z]{27}@ostwick\.example$/);
  expect(acks[0]!.text).toContain(`ticket ${ticket!.number}`);

  // RFC 1047: the 250 was lost, and the same bytes come again.
  expect(await world.arrive(raw)).toContain("here already");
  expect(await tickets()).toHaveLength(1);
  expect(await world.sent("ines@pinnock.example")).toHaveLength(1);
});

test("the same mail by another way is one entry", async () => {
  const raw = rawMailOf({ subject: "Twice", text: "This goes to both addresses." });
  await world.arrive(raw);
  const before = (await tickets()).length;
  await world.arrive(Buffer.concat([Buffer.from("Received: from a.example\r\n"), raw]));
  expect(await tickets()).toHaveLength(before);
  expect(await rows(sql`select count(*)::int as n from raw_mail where state = 'duplicate'`)).toEqual([
    { n: 1 },
  ]);
});

test("a reply to the signed address joins, what it repeats is folded, and nothing is acknowledged", async () => {
  const [ticket] = await tickets();
  const [ack] = await world
    .sent("ines@pinnock.example")
    .then((all) => all.filter((m) => m.subject.includes(String(ticket!.number))));
  const quoted = ack!.text.trim().replace(/^/gm, "> ");
  const raw = rawMailOf({
    to: ack!.replyTo,
    subject: "Re: whatever",
    text: `It is the left one.\r\n\r\nOn 4 Mar 2026, Ostwick Server Works <desk@ostwick.example> wrote:\r\n${quoted}`,
  });
  await world.arrive(raw, { to: ack!.replyTo });
  expect((await entriesOf(ticket!.id)).at(-1)).toEqual({ kind: "mail_in", line: "It is the left one." });
  const [stored] = await rows<{ folds: number[][]; text: string }>(
    sql`select folds, text from message where ticket_id = ${ticket!.id} and direction = 'in' order by sent_at desc, id limit 5`,
  ).then((all) => all.filter((m) => m.text.startsWith("It is the left")));
  expect(stored!.folds).toHaveLength(1);
  expect(stored!.folds[0]![0]).toBe(2);
  expect(
    await world
      .sent("ines@pinnock.example")
      .then((all) => all.filter((m) => m.subject.includes(String(ticket!.number)))),
  ).toHaveLength(1);
});

test("a reply whose address was lost joins by our message id; a number in a subject joins nothing", async () => {
  const [ticket] = await tickets();
  const [ack] = (await world.sent("ines@pinnock.example")).filter((m) =>
    m.subject.includes(String(ticket!.number)),
  );
  const before = (await tickets()).length;
  await world.arrive(rawMailOf({ headers: [`In-Reply-To: ${ack!.messageId}`], text: "By id." }));
  expect((await entriesOf(ticket!.id)).at(-1)!.line).toBe("By id.");
  expect(await tickets()).toHaveLength(before);
  await world.arrive(rawMailOf({ subject: `Re: ticket ${ticket!.number}`, text: "By number alone." }));
  expect(await tickets()).toHaveLength(before + 1);
});

test("an address with one character changed counts as none", async () => {
  const [ticket] = await tickets();
  const [ack] = (await world.sent("ines@pinnock.example")).filter((m) =>
    m.subject.includes(String(ticket!.number)),
  );
  const at = ack!.replyTo.indexOf("@");
  const wrong =
    ack!.replyTo.slice(0, at - 1) + (ack!.replyTo[at - 1] === "0" ? "1" : "0") + ack!.replyTo.slice(at);
  const before = (await entriesOf(ticket!.id)).length;
  await world.arrive(rawMailOf({ to: wrong, text: "Forged." }), { to: wrong });
  expect(await entriesOf(ticket!.id)).toHaveLength(before);
  const [last] = await rows<{ after: { steps: { step: string }[] } }>(
    sql`select after from audit_row where act = 'mail.file' order by chain_no desc limit 1`,
  );
  expect(last!.after.steps.map((s) => s.step)).toContain("reply address");
});

test("a colleague in copy is held, let in by a person, and writes by himself from then on", async () => {
  const [ticket] = await tickets();
  const [ack] = (await world.sent("ines@pinnock.example")).filter((m) =>
    m.subject.includes(String(ticket!.number)),
  );
  const from = "Bo <bo@pinnock.example>";
  const log = { name: "bmc.log", type: "text/plain", bytes: Buffer.from("2026-03-04 fan 2 stopped\n") };
  await world.arrive(rawMailOf({ from, to: ack!.replyTo, text: "I have the log.", files: [log] }), {
    from: "bo@pinnock.example",
    to: ack!.replyTo,
  });
  const [held] = (await heldList(agent())).filter((h) => h.fromEmail === "bo@pinnock.example");
  expect(held).toMatchObject({ hintTicketNumber: ticket!.number });
  expect((await entriesOf(ticket!.id)).map((e) => e.line)).not.toContain("I have the log.");
  expect(await world.sent("bo@pinnock.example")).toEqual([]);

  must(await admitHeld(agent(), { heldId: held!.heldId, ticketNumber: ticket!.number, takesPart: "on" }));
  await world.jobs();
  expect((await entriesOf(ticket!.id)).slice(-2)).toEqual([
    { kind: "mail_in", line: "I have the log." },
    { kind: "evidence_added", line: "One file came with the mail" },
  ]);
  expect((await admitHeld(agent(), { heldId: held!.heldId })).ok).toBe(false);
  await world.arrive(rawMailOf({ from, to: ack!.replyTo, text: "And again." }), {
    from: "bo@pinnock.example",
    to: ack!.replyTo,
  });
  expect((await entriesOf(ticket!.id)).at(-1)!.line).toBe("And again.");
});

test("another customer's message id leads nowhere, and no unit of theirs is proposed", async () => {
  const id = someId();
  await world.arrive(rawMailOf({ messageId: id, text: "Ours." }));
  const before = await tickets();
  await world.arrive(
    rawMailOf({
      from: "Tom <tom@lowmere.example>",
      headers: [`References: ${id}`],
      text: `Is ${serial} yours?`,
    }),
    { from: "tom@lowmere.example" },
  );
  const after = await tickets();
  expect(after).toHaveLength(before.length + 1);
  expect(await rows(sql`select 1 from ticket_unit where ticket_id = ${after.at(-1)!.id}`)).toEqual([]);
});

test.each<[string, string[]]>([
  ["an automatic answer", ["Auto-Submitted: auto-replied"]],
  ["a mail to many", ["Precedence: bulk", "List-Id: <x.lowmere.example>"]],
])("%s from a stranger is held and never answered", async (_, headers) => {
  const from = `bot${headers.length}@elsewhere.example`;
  await world.arrive(rawMailOf({ from, headers, text: "Beep." }), { from });
  expect((await heldList(agent())).map((h) => h.fromEmail)).toContain(from);
  expect(await world.sent(from)).toEqual([]);
});

test("an out-of-office answer is noted: a closed ticket stays closed", async () => {
  const [ticket] = await tickets();
  const [ack] = (await world.sent("ines@pinnock.example")).filter((m) =>
    m.subject.includes(String(ticket!.number)),
  );
  await rows(sql`update ticket set closed_at = now(), waiting_on = 'nobody' where id = ${ticket!.id}`);
  await world.arrive(
    rawMailOf({ to: ack!.replyTo, headers: ["Auto-Submitted: auto-replied"], text: "Away." }),
    { to: ack!.replyTo },
  );
  expect((await kinds(ticket!.id)).at(-1)).toBe("mail_noted");
  expect((await tickets())[0]!.closed_at).not.toBeNull();
});

test("a bounce of ours is noted and shown as failed; a forged one changes nothing", async () => {
  const [ticket] = await tickets();
  const [ack] = (await world.sent("ines@pinnock.example")).filter((m) =>
    m.subject.includes(String(ticket!.number)),
  );
  const arrive = (raw: Buffer) => world.arrive(raw, { from: "" });
  await arrive(bounceOf("<never-sent@ostwick.example>", "ines@pinnock.example"));
  await arrive(bounceOf(ack!.messageId, "somebody-else@pinnock.example"));
  await arrive(bounceOf(ack!.messageId, "ines@pinnock.example", "delayed", "4.4.7"));
  expect(await deadLetters(agent())).toEqual([]);
  await arrive(bounceOf(ack!.messageId, "ines@pinnock.example"));
  expect(await deadLetters(agent())).toMatchObject([
    { toEmail: "ines@pinnock.example", error: expect.stringContaining("5.1.1") },
  ]);
  expect((await entriesOf(ticket!.id)).at(-1)!.line).toBe("Came back: ines@pinnock.example 5.1.1");
});

test("mail that cannot be read is kept, held, and keeps nobody waiting", async () => {
  const parts = "--b\r\nContent-Type: text/plain\r\n\r\nx\r\n".repeat(1200);
  const bomb = `From: ines@pinnock.example\r\nSubject: Parts\r\nMessage-ID: ${someId()}\r\nContent-Type: multipart/mixed; boundary=b\r\n\r\n${parts}--b--\r\n`;
  await world.arrive(Buffer.from(bomb));
  const [held] = (await heldList(agent())).filter((h) => h.subject === "Parts");
  expect(held!.reason).toContain("could not be read");
  expect(await rows(sql`select count(*)::int as n from raw_mail where state = 'received'`)).toEqual([
    { n: 0 },
  ]);
});

test.each<[string, Buffer, string]>([
  ["two senders", rawMailOf({ from: "ines@pinnock.example, tom@lowmere.example", subject: "Two" }), "Two"],
  ["a doubled header", rawMailOf({ subject: "Doubled", headers: ["From: tom@lowmere.example"] }), "Doubled"],
  ["our own address", rawMailOf({ from: "desk@ostwick.example", subject: "Ourselves" }), "Ourselves"],
])("%s: a person looks first", async (_, raw, subject) => {
  const before = (await tickets()).length;
  await world.arrive(raw);
  expect((await heldList(agent())).map((h) => h.subject)).toContain(subject);
  expect(await tickets()).toHaveLength(before);
  const [held] = (await heldList(agent())).filter((h) => h.subject === subject);
  must(await discardHeld(agent(), { heldId: held!.heldId }));
  expect((await heldList(agent())).map((h) => h.subject)).not.toContain(subject);
});

test("an empty mail, and one from a stranger without a serial, are tickets", async () => {
  const before = (await tickets()).length;
  await world.arrive(rawMailOf({ subject: "", text: "" }));
  await world.arrive(rawMailOf({ from: "new@somewhere.example", subject: "Hello", text: "It beeps." }), {
    from: "new@somewhere.example",
  });
  const after = await tickets();
  expect(after).toHaveLength(before + 2);
  expect(after.at(-1)!.account_id).toBeNull();
  expect(await world.sent("new@somewhere.example")).toHaveLength(1);
});

test("one address hears at most three acknowledgements an hour", async () => {
  for (let i = 0; i < 5; i++)
    await world.arrive(rawMailOf({ from: "storm@somewhere.example", subject: `No. ${i}` }), {
      from: "storm@somewhere.example",
    });
  expect(await world.sent("storm@somewhere.example")).toHaveLength(3);
});

/** A conversation line by line, for what a library would never send. */
function talk(lines: string[]): Promise<string[]> {
  return new Promise((done, fail) => {
    const socket = connect(world.receiver.port, "127.0.0.1");
    const heard: string[] = [];
    let next = 0;
    socket.setEncoding("utf8");
    socket.on("data", (chunk: string) => {
      for (const line of chunk.split("\r\n").filter((l) => /^\d{3} /.test(l))) {
        heard.push(line);
        if (next < lines.length) socket.write(lines[next++]!);
        else socket.destroy();
      }
    });
    socket.on("close", () => done(heard));
    socket.on("error", fail);
  });
}

test("over the size is refused both ways (RFC 1870 s. 6), and no mail is passed on", async () => {
  const big = await talk(["EHLO x.example\r\n", "MAIL FROM:<a@x.example> SIZE=2000000\r\n", "QUIT\r\n"]);
  expect(big[2]).toMatch(/^552 /);
  const body = `From: a@x.example\r\nSubject: big\r\n\r\n${"x".repeat(99)}\r\n`.padEnd(
    1_200_000,
    "0123456789\r\n",
  );
  const real = await talk([
    "EHLO x.example\r\n",
    "MAIL FROM:<a@x.example>\r\n",
    "RCPT TO:<desk@ostwick.example>\r\n",
    "DATA\r\n",
    `${body}\r\n.\r\n`,
    "QUIT\r\n",
  ]);
  expect(real[5]).toMatch(/^552 /);
  const relay = await talk([
    "EHLO x.example\r\n",
    "MAIL FROM:<a@x.example>\r\n",
    "RCPT TO:<b@elsewhere.example>\r\n",
    "QUIT\r\n",
  ]);
  expect(relay[3]).toMatch(/^550 /);
});

// The ends of a mail that some servers have taken for one (the CVE-2023-51764 family): only CRLF.CRLF is one.
test.each(["\n.\n", "\r\n.\n", "\n.\r\n", "\r.\r", "\r\n.\r", "\r.\r\n", "\r\n\0.\r\n"])(
  "what follows %j is still the same mail",
  async (end) => {
    const count = async () => (await rows<{ n: number }>(sql`select count(*)::int as n from raw_mail`))[0]!.n;
    const before = await count();
    const inner = `MAIL FROM:<b@x.example>\r\nRCPT TO:<desk@ostwick.example>\r\nDATA\r\nSubject: smuggled\r\n\r\nx`;
    await talk([
      "EHLO x.example\r\n",
      "MAIL FROM:<a@x.example>\r\n",
      "RCPT TO:<desk@ostwick.example>\r\n",
      "DATA\r\n",
      `From: a@x.example\r\nSubject: outer ${JSON.stringify(end)}\r\n\r\nfirst${end}${inner}\r\n.\r\n`,
      "QUIT\r\n",
    ]);
    expect(await count()).toBe(before + 1);
  },
);

test("dots are given back as they were (RFC 5321 s. 4.5.2), and the bytes are kept", async () => {
  const raw = rawMailOf({ subject: "Dots", text: ".\r\n..\r\n.x\r\nend" });
  await world.arrive(raw, { later: true });
  const [kept] = await rows<{ bytes: Buffer }>(
    sql`select bytes from raw_mail order by received_at desc limit 1`,
  );
  expect(kept!.bytes.toString("latin1").trimEnd()).toBe(raw.toString("latin1").trimEnd());
});

test("a connection that breaks inside a mail leaves nothing, and the receiver goes on", async () => {
  const count = async () => (await rows<{ n: number }>(sql`select count(*)::int as n from raw_mail`))[0]!.n;
  const before = await count();
  const broken = new Promise<void>((done, fail) => {
    const socket = connect(world.receiver.port, "127.0.0.1");
    const say = ["EHLO x.example", "MAIL FROM:<a@x.example>", "RCPT TO:<desk@ostwick.example>", "DATA"];
    socket.setEncoding("utf8");
    socket.on("data", (chunk: string) => {
      if (chunk.startsWith("354")) return socket.write("Subject: half\r\n\r\nand th", () => socket.destroy());
      const next = /^\d{3} /m.test(chunk) ? say.shift() : undefined;
      if (next) socket.write(`${next}\r\n`);
    });
    socket.on("close", () => done());
    socket.on("error", fail);
  });
  await broken;
  expect(await world.arrive(rawMailOf({ subject: "After the break" }), { later: true })).toContain("stored");
  expect(await count()).toBe(before + 1);
});

test.each([
  ["in order", [0, 1, 2]],
  ["the last first", [2, 0, 1]],
  ["backwards", [2, 1, 0]],
  ["the middle first", [1, 2, 0]],
])("three mails of one conversation are one ticket, acknowledged once: %s", async (name, order) => {
  const from = `${name.replaceAll(" ", "")}@somewhere.example`;
  const [a, b, c] = [someId(), someId(), someId()];
  const mails = [
    rawMailOf({ from, messageId: a, subject: "Node down" }),
    rawMailOf({ from, messageId: b, headers: [`In-Reply-To: ${a}`, `References: ${a}`], text: "More." }),
    rawMailOf({
      from,
      messageId: c,
      headers: [`In-Reply-To: ${b}`, `References: ${a} ${b}`],
      text: "And more.",
    }),
  ];
  for (const n of order) await world.arrive(mails[n]!, { from });
  expect(
    await rows(
      sql`select count(distinct ticket_id)::int as n, count(*)::int as mails from message where from_email = ${from}`,
    ),
  ).toEqual([{ n: 1, mails: 3 }]);
  expect(await world.sent(from)).toHaveLength(1);
});

test("many mails of one sender at once: each filed once, in the record of its conversation", async () => {
  const from = "burst@somewhere.example";
  const root = someId();
  await Promise.all(
    Array.from({ length: 8 }, (_, i) =>
      world.arrive(
        rawMailOf({
          from,
          text: `No. ${i}`,
          messageId: i === 0 ? root : someId(),
          headers: i === 0 ? [] : [`References: ${root}`],
        }),
        { from, later: true },
      ),
    ),
  );
  await Promise.all([world.jobs(), world.jobs()]);
  const [found] = await rows<{ mails: number; entries: number }>(
    sql`select count(*)::int as mails, (select count(*)::int from entry e join ticket t on t.id = e.ticket_id where t.person_email = ${from} and e.kind = 'mail_in') as entries from message where from_email = ${from}`,
  );
  expect(found).toEqual({ mails: 8, entries: 8 });
  expect((await world.sent(from)).length).toBeLessThanOrEqual(3);
});

test("whatever bytes arrive, each mail ends filed, held, parked or unreadable", async () => {
  const noise = fc.uint8Array({ minLength: 1, maxLength: 12 });
  const whole = rawMailOf({
    text: "The node is down.",
    files: [{ name: "a.log", type: "text/plain", bytes: Buffer.from("x") }],
  });
  const wild = fc.tuple(
    fc.array(fc.tuple(fc.nat(whole.length), noise), { minLength: 1, maxLength: 6 }),
    fc.boolean(),
  );
  const samples = fc.sample(wild, { numRuns: 60, seed: 20260304 }).map(([cuts, long]) => {
    const bytes = Buffer.from(whole);
    for (const [at, put] of cuts) Buffer.from(put).copy(bytes, Math.min(at, bytes.length - 1));
    const id = long ? `Message-ID: <${"x".repeat(5000)}@x.example>\r\nX-Nul: \0\r\n` : "";
    return Buffer.concat([Buffer.from(id), bytes]);
  });
  for (const raw of samples) await world.arrive(raw, { later: true, from: `wild@somewhere.example` });
  await world.jobs();
  expect(
    await rows(sql`select state, count(*)::int from raw_mail where state = 'received' group by state`),
  ).toEqual([]);
  expect(
    await rows(sql`select m.id from message m where m.direction = 'in' and m.ticket_id is null and m.kind <> 'bounce'
      and not exists (select from held_mail h where h.message_id = m.id)`),
  ).toEqual([]);
});
