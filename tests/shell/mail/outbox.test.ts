import { sql } from "drizzle-orm";
import { SMTPServer } from "smtp-server";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import { must } from "@/lib/base/result";
import { jobCtx, type Ctx } from "@/lib/ctx";
import { handle } from "@/lib/jobs/handlers/sendMail";
import { handle as sweep } from "@/lib/jobs/handlers/sweepMail";
import { startWorker } from "@/lib/jobs/worker.io";
import { enqueueMail, leaseMail, retryMail, sweepMail } from "@/lib/mail/commands";
import { deadLetters } from "@/lib/mail/queries";
import { takePort } from "@/lib/standins/ports";
import { freshDb } from "../db";
import { rows } from "./world";

/* The outbox against a relay that does what the test wants of it. */

await freshDb();
let relay: SMTPServer;
let answer: () => Error | null = () => null;
let taken: { from: string; to: string[]; raw: string }[] = [];
const failing = (code: number, words: string) => Object.assign(new Error(words), { responseCode: code });

beforeAll(async () => {
  const port = await takePort();
  process.env.SMTP_URL = `smtp://127.0.0.1:${port}`;
  relay = new SMTPServer({
    authOptional: true,
    disabledCommands: ["STARTTLS"],
    onData(stream, session, done) {
      let raw = "";
      stream.on("data", (c: Buffer) => (raw += c.toString("utf8")));
      stream.on("end", () => {
        const refused = answer();
        if (refused) return done(refused);
        const from = session.envelope.mailFrom ? session.envelope.mailFrom.address : "";
        taken.push({ from, to: session.envelope.rcptTo.map((r) => r.address), raw });
        done();
      });
    },
  });
  await new Promise<void>((done) => relay.listen(port, "127.0.0.1", () => done()));
});
afterAll(() => new Promise<void>((done) => relay.close(() => done())));
beforeEach(() => {
  taken = [];
  answer = () => null;
});

const agent = () =>
  jobCtx("test", {
    actor: {
      kind: "staff",
      userId: crypto.randomUUID(),
      name: "Ada",
      email: "ada@ostwick.example",
      roles: ["agent"],
    },
  });
const props = { personName: "Ines", ticketNumber: 7, text: "Please look at A2.", byName: "Ada" };
const put = async (more: object = {}) =>
  must(
    await enqueueMail(agent(), {
      to: "ines@pinnock.example",
      template: "reply",
      props,
      automatic: false,
      ...more,
    }),
  );
const at = (minutes: number): Ctx => jobCtx("mail.send", { now: new Date(Date.now() + minutes * 60_000) });
const state = async (id: string) =>
  (
    await rows<{ state: string; attempts: number; next_at: string; last_error: string | null }>(
      sql`select state, attempts, next_at, last_error from outbox where id = ${id}`,
    )
  )[0]!;

test("a person's mail leaves once, to one envelope, and is not marked automatic", async () => {
  const { outboxId, messageId } = await put();
  await handle(at(0), { outboxId });
  await handle(at(0), { outboxId });
  expect(taken).toHaveLength(1);
  expect(taken[0]!.to).toEqual(["ines@pinnock.example"]);
  expect(taken[0]!.from).toBe("desk@ostwick.example");
  expect(taken[0]!.raw).toContain(`Message-ID: ${messageId}`);
  expect(taken[0]!.raw).not.toMatch(/^Auto-Submitted/m);
  expect(await state(outboxId)).toMatchObject({ state: "sent", attempts: 1 });
});

test("a line end in a name or a subject makes no header (RFC 5322 s. 2.2)", async () => {
  const { outboxId } = await put({ toName: "Ines\r\nBcc: all@lowmere.example" });
  await handle(at(0), { outboxId });
  expect(taken[0]!.raw).not.toMatch(/^Bcc/m);
});

test("an acknowledgement has the null return path and says what it is (RFC 3834 s. 3.3 and 5)", async () => {
  const ack = { personName: "Ines", ticketNumber: 7, subject: "Node" };
  const { outboxId } = await put({ template: "acknowledgement", props: ack, automatic: true });
  await handle(at(0), { outboxId });
  expect(taken[0]!.from).toBe("");
  expect(taken[0]!.raw).toMatch(/^Auto-Submitted: auto-replied/m);
});

test("refused for now: again later under the same id; a later try brings it through", async () => {
  const { outboxId, messageId } = await put();
  answer = () => failing(451, "4.3.0 later");
  await handle(at(0), { outboxId });
  const waiting = await state(outboxId);
  expect(waiting).toMatchObject({ state: "pending", attempts: 1 });
  expect(new Date(waiting.next_at).getTime()).toBeGreaterThan(Date.now() + 15_000);
  answer = () => null;
  await handle(at(5), { outboxId });
  expect(taken).toHaveLength(1);
  expect(taken[0]!.raw).toContain(`Message-ID: ${messageId}`);
});

test("refused for good: dead, shown with its reason, and a person may try again", async () => {
  const { outboxId } = await put();
  answer = () => failing(550, "5.1.1 nobody of that name");
  await handle(at(0), { outboxId });
  expect(await deadLetters(agent())).toMatchObject([{ outboxId, error: expect.stringContaining("5.1.1") }]);
  answer = () => null;
  must(await retryMail(agent(), outboxId));
  await handle(at(0), { outboxId });
  expect(await state(outboxId)).toMatchObject({ state: "sent" });
  expect((await retryMail(agent(), outboxId)).ok).toBe(false);
});

test("a relay that is away for days: tries end, and the mail is shown", async () => {
  const { outboxId } = await put();
  answer = () => failing(421, "4.4.2 away");
  for (let i = 0; i < 9; i++) await handle(at(i * 24 * 60), { outboxId });
  expect(await state(outboxId)).toMatchObject({ state: "dead", attempts: 9 });
});

test("what one worker holds, another leaves alone until the lease ends", async () => {
  const { outboxId } = await put();
  expect(must(await leaseMail(at(0), outboxId))).not.toBeNull();
  expect(must(await leaseMail(at(1), outboxId))).toBeNull();
  await handle(at(1), { outboxId });
  expect(taken).toEqual([]);
  // The holder was killed: its job is lost, and the sweep finds the mail.
  await rows(sql`delete from graphile_worker._private_jobs`);
  expect(must(await sweepMail(at(1)))).toEqual({ parse: 0, send: 0 });
  expect(must(await sweepMail(at(10)))).toEqual({ parse: 0, send: 1 });
  await handle(at(10), { outboxId });
  expect(taken).toHaveLength(1);
});

test("a sign-in code is not kept once it has left", async () => {
  const secret = {
    link: "http://127.0.0.1:3000/sign-in/confirm?t=s3cr3t",
    code: "7KQ2-M4XR-9T",
    minutes: 10,
  };
  const { outboxId, messageRowId } = await put({ template: "sign_in", props: secret, automatic: true });
  await handle(at(0), { outboxId });
  const kept = await rows(
    sql`select o.props, m.text from outbox o join message m on m.id = o.message_row_id where m.id = ${messageRowId}`,
  );
  expect(JSON.stringify(kept)).not.toMatch(/7KQ2|s3cr3t/);
});

test("the worker knows of the sweep, and takes its job", async () => {
  const worker = await startWorker();
  try {
    const known = await rows(sql`select identifier from graphile_worker._private_known_crontabs`);
    expect(known).toEqual([{ identifier: "mail.sweep" }]);
  } finally {
    await worker.stop();
  }
  const { outboxId } = await put();
  await rows(sql`delete from graphile_worker._private_jobs`);
  await sweep(at(10));
  expect(await rows(sql`select key from graphile_worker.jobs`)).toEqual([{ key: `mail:${outboxId}` }]);
});
