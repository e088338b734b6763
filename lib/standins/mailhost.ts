import { createServer, type IncomingMessage, type ServerResponse } from "node:http";
import { fileURLToPath } from "node:url";
import { createTransport } from "nodemailer";
import { SMTPServer } from "smtp-server";
import { boxesPage, boxPage, CSS, mailPage, page, sentPage } from "./mailpages";
import { MailStore, type Opened } from "./mailstore";

/**
 * Local stand-in for the world's mail: takes what we send by SMTP and keeps it on disk, shows each
 * mailbox on a page, and delivers what a person writes there to our receiver over SMTP. On loopback
 * only; nothing leaves the machine.
 */
export type MailHostOptions = {
  dir: string;
  smtpPort: number;
  httpPort: number;
  receiver: { host: string; port: number };
  /** Where a person writes to who answers nothing. */
  desk: string;
};
export type MailHost = { smtpPort: number; httpPort: number; stop(): Promise<void> };

export type Written = {
  from: string;
  name?: string;
  to: string;
  subject: string;
  text: string;
  html?: string;
  /** The id of a kept mail that this one answers. */
  answers?: string;
  quote?: boolean;
  headers?: Record<string, string>;
  messageId?: string;
  attachments?: { name: string; type: string; bytes: Buffer }[];
};

const MAX_BODY = 60 * 1024 * 1024;
const LOOPBACK = new Set(["127.0.0.1", "localhost", "[::1]"]);

export async function startMailHost(options: MailHostOptions): Promise<MailHost> {
  const store = new MailStore(options.dir);
  const sink = new SMTPServer({
    banner: "mail host stand-in",
    authOptional: true,
    disabledCommands: ["STARTTLS"],
    disableReverseLookup: true,
    onData(stream, session, done) {
      const chunks: Buffer[] = [];
      stream.on("data", (c: Buffer) => chunks.push(c));
      stream.once("error", done);
      stream.once("end", () => {
        const from = session.envelope.mailFrom ? session.envelope.mailFrom.address : "";
        const to = session.envelope.rcptTo.map((r) => r.address);
        // Kept first, then said: as a real host does.
        store.keep(Buffer.concat(chunks), { from, to }).then(
          () => done(null, "2.0.0 kept"),
          (thrown: Error) => done(Object.assign(thrown, { responseCode: 451 })),
        );
      });
    },
  });
  sink.on("error", () => undefined);

  const web = createServer((request, response) => {
    answer(store, options, request, response).catch((thrown: unknown) => {
      const words = thrown instanceof Error ? thrown.message : String(thrown);
      if (response.headersSent) return void response.destroy();
      send(
        response,
        500,
        "text/html",
        page("Failed", `<h1>This did not work</h1><p>${words.replace(/[<&]/g, "")}</p>`),
      );
    });
  });
  await Promise.all([
    new Promise<void>((done, fail) => {
      sink.server.once("error", fail);
      sink.listen(options.smtpPort, "127.0.0.1", () => done());
    }),
    new Promise<void>((done, fail) => {
      web.once("error", fail);
      web.listen(options.httpPort, "127.0.0.1", () => done());
    }),
  ]);
  const portOf = (at: ReturnType<typeof web.address>) => (at && typeof at === "object" ? at.port : 0);
  return {
    smtpPort: portOf(sink.server.address()),
    httpPort: portOf(web.address()),
    async stop() {
      web.closeAllConnections();
      await Promise.all([
        new Promise<void>((done) => sink.close(() => done())),
        new Promise<void>((done) => web.close(() => done())),
      ]);
    },
  };
}

function send(
  response: ServerResponse,
  status: number,
  type: string,
  body: string | Buffer,
  more: Record<string, string> = {},
) {
  response.writeHead(status, {
    "content-type": type.startsWith("text/") ? `${type}; charset=utf-8` : type,
    "cache-control": "no-store",
    "x-content-type-options": "nosniff",
    "referrer-policy": "no-referrer",
    "content-security-policy":
      "default-src 'none'; style-src 'self'; frame-src 'self'; form-action 'self'; base-uri 'none'",
    ...more,
  });
  response.end(body);
}

async function answer(
  store: MailStore,
  options: MailHostOptions,
  request: IncomingMessage,
  response: ServerResponse,
): Promise<void> {
  // Another site's page in the same browser must not read or write here under a name of its own.
  const host = (request.headers.host ?? "").replace(/:\d+$/, "");
  if (!LOOPBACK.has(host) || (request.headers["sec-fetch-site"] === "cross-site" && request.method !== "GET"))
    return send(response, 403, "text/plain", "only for this machine");
  const url = new URL(request.url ?? "/", "http://127.0.0.1");
  const path = url.pathname;
  const gone = () => send(response, 404, "text/html", page("Not here", "<h1>There is no such mail</h1>"));

  if (request.method === "POST" && path === "/send") {
    const written = await fromForm(request);
    return send(response, 200, "text/html", sentPage(written.from, await deliver(store, options, written)));
  }
  if (request.method === "POST" && path === "/api/send") {
    const body = JSON.parse((await bodyOf(request)).toString("utf8")) as Omit<Written, "attachments"> & {
      attachments?: { name: string; type: string; base64: string }[];
    };
    const attachments = body.attachments?.map((a) => ({ ...a, bytes: Buffer.from(a.base64, "base64") }));
    const outcome = await deliver(store, options, { ...body, attachments });
    return send(response, outcome.ok ? 200 : 502, "application/json", JSON.stringify(outcome));
  }
  if (request.method !== "GET" && request.method !== "HEAD")
    return send(response, 405, "text/plain", "not here");

  if (path === "/") return send(response, 200, "text/html", boxesPage(store.boxes(), options.desk));
  if (path === "/health") return send(response, 200, "application/json", '{"ready":true}');
  if (path === "/style.css") return send(response, 200, "text/css", CSS);
  if (path === "/box") {
    const box = url.searchParams.get("a") ?? "";
    return send(response, 200, "text/html", boxPage(box, store.list(box), options.desk));
  }
  if (path === "/api/messages") {
    const kept = store
      .list(url.searchParams.get("to") ?? undefined)
      .filter((k) => !k.sent)
      .slice(0, 100);
    const all = await Promise.all(kept.map((k) => store.open(k.id)));
    return send(
      response,
      200,
      "application/json",
      JSON.stringify(all.flatMap((m) => (m ? [asJson(m)] : []))),
    );
  }
  const at = /^\/mail\/([0-9-]+)(?:\/(raw|html|file\/(\d+)))?$/.exec(path);
  const mail = at ? await store.open(at[1]!) : undefined;
  if (!at || !mail) return gone();
  if (!at[2]) return send(response, 200, "text/html", mailPage(mail));
  if (at[2] === "raw") return send(response, 200, "text/plain", (await store.raw(at[1]!))!);
  if (at[2] === "html")
    return send(response, 200, "text/html", `<base target="_blank">${mail.html}`, {
      "content-security-policy":
        "sandbox allow-popups allow-popups-to-escape-sandbox; default-src 'none'; style-src 'unsafe-inline'; img-src data:",
    });
  const file = mail.files[Number(at[3])];
  if (!file) return gone();
  return send(response, 200, "application/octet-stream", file.bytes, {
    "content-disposition": `attachment; filename*=UTF-8''${encodeURIComponent(file.name)}`,
  });
}

const asJson = (m: Opened) => ({
  id: m.kept.id,
  at: m.kept.at,
  to: m.kept.box,
  from: m.from,
  replyTo: m.replyTo,
  subject: m.kept.subject,
  messageId: m.messageId,
  references: m.references,
  text: m.text,
  html: m.html,
  headers: m.headers,
  links: [...new Set(m.html.match(/https?:\/\/[^"'<>\s]+/g) ?? [])].map((l) => l.replace(/&amp;/g, "&")),
  attachments: m.files.map(({ n, name, type, size }) => ({
    n,
    name,
    type,
    size,
    href: `/mail/${m.kept.id}/file/${n}`,
  })),
});

async function bodyOf(request: IncomingMessage): Promise<Buffer> {
  const chunks: Buffer[] = [];
  let size = 0;
  for await (const chunk of request as AsyncIterable<Buffer>) {
    size += chunk.length;
    if (size > MAX_BODY) throw new Error("more than 60 MB cannot be sent from here");
    chunks.push(chunk);
  }
  return Buffer.concat(chunks);
}

async function fromForm(request: IncomingMessage): Promise<Written> {
  const type = request.headers["content-type"] ?? "";
  const form = await new Response(new Uint8Array(await bodyOf(request)), {
    headers: { "content-type": type },
  }).formData();
  const text = (name: string) => String(form.get(name) ?? "").trim();
  const files = form.getAll("files").filter((f): f is File => typeof f !== "string" && f.size > 0);
  return {
    from: text("from"),
    name: text("name"),
    to: text("to"),
    subject: text("subject"),
    text: text("text").replace(/\r\n/g, "\n"),
    answers: text("answers"),
    quote: form.get("quote") !== null,
    attachments: await Promise.all(
      files.map(async (f) => ({
        name: f.name,
        type: f.type || "application/octet-stream",
        bytes: Buffer.from(await f.arrayBuffer()),
      })),
    ),
  };
}

/** Delivers to our receiver as any mail server would, and keeps what it delivered. */
async function deliver(
  store: MailStore,
  options: MailHostOptions,
  w: Written,
): Promise<{ ok: boolean; words: string; messageId: string }> {
  const answered = w.answers ? await store.open(w.answers) : undefined;
  const quoted = answered?.text
    ? `\n\nOn ${answered.kept.at.slice(0, 10)}, ${answered.from} wrote:\n${answered.text.trim().replace(/^/gm, "> ")}`
    : "";
  const composed = createTransport({ streamTransport: true, buffer: true, newline: "windows" });
  const made = await composed.sendMail({
    from: w.name ? { name: w.name, address: w.from } : w.from,
    to: w.to,
    subject: w.subject,
    text: w.text + (w.quote ? quoted : ""),
    html: w.html,
    messageId: w.messageId,
    inReplyTo: answered?.messageId || undefined,
    references: answered ? [...answered.references, answered.messageId].filter(Boolean) : undefined,
    headers: w.headers,
    attachments: w.attachments?.map((a) => ({ filename: a.name, contentType: a.type, content: a.bytes })),
    disableFileAccess: true,
    disableUrlAccess: true,
  });
  const raw = made.message as unknown as Buffer;
  const post = createTransport({ ...options.receiver, ignoreTLS: true });
  try {
    const sent = await post.sendMail({ envelope: { from: w.from, to: w.to }, raw });
    await store.keep(raw, { from: w.from, to: [w.to] }, w.from);
    return { ok: true, words: sent.response, messageId: made.messageId };
  } catch (thrown) {
    return {
      ok: false,
      words: thrown instanceof Error ? thrown.message : String(thrown),
      messageId: made.messageId,
    };
  } finally {
    post.close();
  }
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const { env } = process;
  const host = await startMailHost({
    dir: env.MAILHOST_DIR ?? ".data/mail",
    smtpPort: Number(env.MAILHOST_SMTP_PORT ?? 2525),
    httpPort: Number(env.MAILHOST_HTTP_PORT ?? 3025),
    receiver: { host: env.RECEIVER_HOST ?? "127.0.0.1", port: Number(env.RECEIVER_PORT ?? 2526) },
    desk: env.MENDBAY_MAIL_FROM ?? "desk@ostwick.example",
  });
  console.log(`mail host ready: page http://127.0.0.1:${host.httpPort}, SMTP 127.0.0.1:${host.smtpPort}`);
  process.send?.("ready");
  const end = () => void host.stop().then(() => process.exit(0));
  process.once("SIGTERM", end);
  process.once("SIGINT", end);
}
