import { fileURLToPath } from "node:url";
import {
  SMTPServer,
  type SMTPServerAddress,
  type SMTPServerDataStream,
  type SMTPServerSession,
} from "smtp-server";
import { closePool } from "@/db/client";
import { jobCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { log } from "@/lib/log";
import { storeRaw } from "./commands";

/**
 * Takes mail from outside. The 250 is said after the raw mail and the job that reads it are
 * committed: what was said to be taken is never lost. Nothing is parsed here, so a hostile mail
 * holds up nobody. A client whose 250 was lost sends again, and the same bytes are one mail.
 */
export type Receiver = { port: number; stop(): Promise<void> };

const MAX_RECIPIENTS = 100;
const MAX_CLIENTS = 200;
/** Bytes of mails under way at once: beyond it a sender waits and tries again. */
const MAX_UNDERWAY = 256 * 1024 * 1024;

class Answer extends Error {
  constructor(
    readonly responseCode: number,
    message: string,
  ) {
    super(message);
  }
}

const domainOf = (address: string) => address.slice(address.lastIndexOf("@") + 1).toLowerCase();

/**
 * Every address of our domain is taken, whether a ticket is behind it or not: the answer tells
 * nothing. Other domains are refused, since this is no relay.
 */
function ours(address: string): boolean {
  return [domainOf(env().MENDBAY_MAIL_FROM), env().MENDBAY_MAIL_DOMAIN.toLowerCase()].includes(
    domainOf(address),
  );
}

let underway = 0;

function collect(stream: SMTPServerDataStream, maxBytes: number): Promise<Buffer> {
  return new Promise((done, fail) => {
    const chunks: Buffer[] = [];
    let size = 0;
    let held = 0;
    const letGo = () => {
      underway -= held;
      held = 0;
    };
    stream.on("data", (chunk: Buffer) => {
      size += chunk.length;
      // Too much is read to its end and not kept, so that the sender hears why.
      if (size > maxBytes) {
        chunks.length = 0;
        return letGo();
      }
      chunks.push(chunk);
      held += chunk.length;
      underway += chunk.length;
    });
    stream.once("end", () => {
      letGo();
      if (size > maxBytes || stream.sizeExceeded)
        return fail(new Answer(552, `5.3.4 A mail may have ${Math.floor(maxBytes / 1_048_576)} MB at most`));
      done(Buffer.concat(chunks));
    });
    stream.once("error", (thrown) => {
      letGo();
      fail(thrown);
    });
    stream.once("close", () => {
      letGo();
      fail(new Answer(421, "4.4.2 The connection was lost"));
    });
  });
}

async function take(stream: SMTPServerDataStream, session: SMTPServerSession): Promise<string> {
  if (underway > MAX_UNDERWAY) {
    stream.resume();
    await new Promise((done) => stream.once("end", done));
    throw new Answer(452, "4.3.1 Too much mail at once; try again later");
  }
  const bytes = await collect(stream, env().RECEIVER_MAX_BYTES);
  const kept = await storeRaw(jobCtx("mail.receive"), {
    envelopeFrom: session.envelope.mailFrom ? session.envelope.mailFrom.address.slice(0, 320) : "",
    envelopeTo: session.envelope.rcptTo.map((r) => r.address.toLowerCase()),
    remoteAddress: session.remoteAddress,
    bytes,
  });
  if (!kept.ok) throw new Answer(451, "4.3.0 It could not be stored; try again later");
  return kept.value.again ? "2.0.0 It is here already" : "2.0.0 It is stored";
}

export async function startReceiver(at: { host: string; port: number }): Promise<Receiver> {
  const server = new SMTPServer({
    name: env().MENDBAY_MAIL_DOMAIN,
    banner: "Mendbay",
    disabledCommands: ["AUTH", "STARTTLS"],
    disableReverseLookup: true,
    size: env().RECEIVER_MAX_BYTES,
    maxClients: MAX_CLIENTS,
    socketTimeout: 120_000,
    closeTimeout: 10_000,
    onRcptTo(address: SMTPServerAddress, session: SMTPServerSession, callback) {
      if (session.envelope.rcptTo.length >= MAX_RECIPIENTS)
        return callback(new Answer(452, "4.5.3 Too many recipients; send the rest in another mail"));
      if (!ours(address.address)) return callback(new Answer(550, "5.7.1 No mail is passed on from here"));
      callback();
    },
    onData(stream, session, callback) {
      take(stream, session).then(
        (words) => callback(null, words),
        (thrown: unknown) => {
          if (thrown instanceof Answer) return callback(thrown);
          log.error({ err: thrown }, "a mail was not stored");
          callback(new Answer(451, "4.3.0 It could not be stored; try again later"));
        },
      );
    },
  });
  // A client that breaks off is its own affair; the server goes on.
  server.on("error", (thrown) => log.debug({ err: thrown }, "smtp client"));
  await new Promise<void>((done, fail) => {
    server.server.once("error", fail);
    server.listen(at.port, at.host, () => done());
  });
  const bound = server.server.address();
  return {
    port: typeof bound === "object" && bound ? bound.port : at.port,
    stop: () => new Promise((done) => server.close(() => done())),
  };
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const receiver = await startReceiver({ host: env().RECEIVER_HOST, port: env().RECEIVER_PORT });
  log.info({ port: receiver.port }, "receiver ready");
  process.send?.("ready");
  let ending = false;
  const end = () => {
    if (ending) return;
    ending = true;
    void receiver
      .stop()
      .then(closePool)
      .then(() => process.exit(0));
  };
  process.once("SIGTERM", end);
  process.once("SIGINT", end);
}
