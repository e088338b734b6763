import { createServer, type IncomingMessage, type Server, type ServerResponse } from "node:http";
import { pipeline } from "node:stream/promises";
import { fileURLToPath } from "node:url";
import { onePart } from "./multipart";
import { checkSigned, sign, twice } from "./uploadsign";
import { Refused, UploadStore, type Meta, type Side } from "./uploadstore";

/**
 * Local stand-in for the upload service: the wire protocol of the uploadthing 7 client, bytes on
 * disk, on loopback only. Files are private unless the uploader says otherwise.
 */
export type UploadHostOptions = {
  dir: string;
  apiKey: string;
  appId: string;
  /** As the application and the browser address us; part of what is signed. */
  base: string;
  /** Slows a body down, so that progress, pause and a broken connection can be seen. */
  chunkDelayMs?: number;
  now?: () => number;
};

type Outcome = { data: unknown } | { error: string };

const META_WAIT_MS = 5000;
const LOOPBACK = new Set(["127.0.0.1", "localhost", "[::1]"]);

const CORS = {
  "access-control-allow-origin": "*",
  "access-control-allow-methods": "HEAD, PUT, OPTIONS",
  "access-control-allow-headers": "range, x-uploadthing-version, b3, traceparent, content-type",
  "access-control-expose-headers": "x-ut-range-start",
  "access-control-max-age": "600",
};

export function createUploadHost(options: UploadHostOptions): Server {
  const host = new UploadHost(options);
  return createServer((request, response) => void host.handle(request, response));
}

class UploadHost {
  private readonly asking = new Map<string, (meta: Meta) => void>();
  private readonly results = new Map<string, (outcome: Outcome) => void>();
  private readonly running = new Map<string, { request: IncomingMessage; done: Promise<void> }>();
  private readonly now: () => number;
  private readonly store: UploadStore;

  constructor(private readonly options: UploadHostOptions) {
    this.now = options.now ?? Date.now;
    this.store = new UploadStore(options.dir, this.now());
  }

  async handle(request: IncomingMessage, response: ServerResponse): Promise<void> {
    try {
      await this.route(request, response);
    } catch (thrown) {
      const full = (thrown as { code?: string }).code === "ENOSPC";
      const status = thrown instanceof Refused ? thrown.status : full ? 507 : 500;
      const words = full ? "the disk is full" : thrown instanceof Error ? thrown.message : "failed";
      if (response.headersSent || response.destroyed) return void response.destroy();
      request.resume();
      json(response, status, { error: words, message: words });
    }
  }

  private async route(request: IncomingMessage, response: ServerResponse): Promise<void> {
    const target = request.url ?? "/";
    const path = target.split("?")[0] ?? "/";
    const method = request.method ?? "GET";
    if (method === "OPTIONS") return void response.writeHead(204, CORS).end();
    if (method === "GET" && path === "/health") return json(response, 200, { ready: true });
    if (method === "POST") return this.service(request, response, path);
    const served = /^\/(?:a\/([^/]+)|f)\/([A-Za-z0-9]+)$/.exec(path);
    if (method === "GET" && served) {
      if (served[1] !== undefined && served[1] !== this.options.appId) throw new Refused(404, "not found");
      return this.serve(response, target, served[2]!);
    }
    if (method === "HEAD" || method === "PUT") {
      const key = path.slice(1);
      const query = this.checked(target);
      if (method === "HEAD") return this.held(response, key);
      return this.take(request, response, key, query);
    }
    throw new Refused(method === "GET" ? 404 : 405, "not found");
  }

  private checked(target: string): URLSearchParams {
    const { base, apiKey, appId } = this.options;
    const signed = checkSigned(base, target, apiKey, this.now());
    if (!signed.ok) throw new Refused(signed.status, signed.words);
    if (signed.query.get("x-ut-identifier") !== appId) throw new Refused(403, "another application's URL");
    return signed.query;
  }

  private async held(response: ServerResponse, key: string): Promise<void> {
    response.writeHead(200, { ...CORS, "x-ut-range-start": String(await this.store.held(key)) }).end();
  }

  private async take(
    request: IncomingMessage,
    response: ServerResponse,
    key: string,
    query: URLSearchParams,
  ) {
    if (await this.store.isWhole(key)) throw new Refused(409, "the file is here already");
    const older = this.running.get(key);
    if (older) {
      // The browser broke off and came back before we noticed: the old body ends now.
      older.request.destroy();
      await older.done;
    }
    let release = () => {};
    this.running.set(key, { request, done: new Promise((done) => (release = done)) });
    try {
      const side = await this.receive(request, key, query);
      const outcome = await this.report(key, query, side);
      if ("error" in outcome) {
        await this.store.forget(key);
        return json(response, 200, { error: outcome.error });
      }
      const url = `${this.options.base}/f/${key}`;
      const body = { url, appUrl: `${this.options.base}/a/${this.options.appId}/${key}`, ufsUrl: url };
      json(response, 200, { ...body, fileHash: side.md5, serverData: outcome.data });
    } finally {
      release();
      if (this.running.get(key)?.request === request) this.running.delete(key);
    }
  }

  /** Takes the body from the offset that `Range` names; what arrived stays when it breaks off. */
  private async receive(request: IncomingMessage, key: string, query: URLSearchParams): Promise<Side> {
    const expected = Number(query.get("x-ut-file-size"));
    const from = Number(/^bytes=(\d+)-/.exec(request.headers.range ?? "bytes=0-")?.[1] ?? 0);
    try {
      const size = await this.store.grow(key, from, expected, this.slowed(onePart(request)));
      if (size !== expected) throw new Refused(400, "fewer bytes than were announced");
      return await this.store.finish(key, {
        name: twice(query, "x-ut-file-name") ?? key,
        size,
        type: twice(query, "x-ut-file-type") ?? "application/octet-stream",
        acl: query.get("x-ut-acl") ?? "private",
        customId: twice(query, "x-ut-custom-id") ?? null,
      });
    } catch (thrown) {
      // Broken off is no refusal: what is here waits for the rest.
      if (thrown instanceof Refused && thrown.status !== 416) await this.store.forget(key);
      throw thrown;
    }
  }

  private async *slowed(bytes: AsyncIterable<Buffer>): AsyncGenerator<Buffer> {
    for await (const chunk of bytes) {
      yield chunk;
      if (this.options.chunkDelayMs) await new Promise((done) => setTimeout(done, this.options.chunkDelayMs));
    }
  }

  /** Tells the application, by its own signed callback, and waits for what it answers. */
  private async report(key: string, query: URLSearchParams, side: Side): Promise<Outcome> {
    const slug = twice(query, "x-ut-slug");
    if (!slug) return { data: null }; // put here by the application itself
    const meta = await this.metaOf(key);
    if (!meta) return { error: "the application did not say what this upload is for" };
    const url = `${this.options.base}/f/${key}`;
    const file = {
      ...side,
      key,
      url,
      appUrl: url,
      ufsUrl: url,
      fileHash: side.md5,
      lastModified: this.now(),
    };
    const { md5: _md5, acl: _acl, ...told } = file;
    const body = JSON.stringify({
      status: "uploaded",
      metadata: meta.metadata,
      file: told,
      origin: this.options.base,
    });
    let outcome: Outcome | undefined;
    this.results.set(key, (found) => (outcome = found));
    try {
      const answer = await fetch(`${meta.callbackUrl}?slug=${encodeURIComponent(meta.callbackSlug)}`, {
        method: "POST",
        body,
        headers: {
          "content-type": "application/json",
          "uploadthing-hook": "callback",
          "x-uploadthing-signature": sign(body, this.options.apiKey),
        },
      });
      await answer.arrayBuffer();
      if (!answer.ok) return { error: `the application refused the file (${answer.status})` };
      if (!meta.awaitServerData) return { data: null };
      // The application reports its result before it answers the callback; silence means it failed.
      return outcome ?? { error: "the application could not take the file" };
    } catch {
      return { error: "the application could not be reached" };
    } finally {
      this.results.delete(key);
      await this.store.fulfil(key);
    }
  }

  private async metaOf(key: string): Promise<Meta | undefined> {
    const kept = await this.store.promised(key);
    if (kept) return kept;
    return new Promise((done) => {
      const timer = setTimeout(() => done(undefined), META_WAIT_MS);
      this.asking.set(key, (meta) => {
        clearTimeout(timer);
        done(meta);
      });
    }).finally(() => this.asking.delete(key)) as Promise<Meta | undefined>;
  }

  private async service(request: IncomingMessage, response: ServerResponse, path: string): Promise<void> {
    if (request.headers["x-uploadthing-api-key"] !== this.options.apiKey) throw new Refused(401, "wrong key");
    const body = await readJson(request);
    switch (path) {
      case "/route-metadata":
        await this.promise(body);
        return json(response, 200, { ok: true });
      case "/callback-result": {
        const found = body as { fileKey: string; callbackData?: unknown; error?: string };
        this.results.get(found.fileKey)?.(
          found.error ? { error: String(found.error) } : { data: found.callbackData ?? null },
        );
        return json(response, 200, { ok: true });
      }
      case "/v6/deleteFiles": {
        let deletedCount = 0;
        for (const key of listOf(body.fileKeys)) if (await this.store.forget(key)) deletedCount++;
        return json(response, 200, { success: true, deletedCount });
      }
      case "/v6/updateACL": {
        for (const { fileKey, acl } of body.updates as { fileKey: string; acl: string }[]) {
          const side = await this.store.side(fileKey);
          if (side) await this.store.describe(fileKey, { ...side, acl });
        }
        return json(response, 200, { success: true });
      }
      case "/v6/requestFileAccess": {
        const key = String(body.fileKey);
        if (!(await this.store.side(key))) throw new Refused(404, "not found");
        const expires = this.now() + Number(body.expiresIn ?? 300) * 1000;
        const text = `${this.options.base}/f/${key}?expires=${expires}`;
        const url = `${text}&signature=${encodeURIComponent(sign(text, this.options.apiKey))}`;
        return json(response, 200, { url, ufsUrl: url });
      }
      default:
        throw new Refused(404, "not found");
    }
  }

  private async promise(body: Record<string, unknown>): Promise<void> {
    if (body.isDev === true)
      throw new Refused(400, "set UPLOADTHING_IS_DEV=false: this host calls back by itself");
    const callback = new URL(String(body.callbackUrl));
    // We call whom we are told to: never anything but this machine.
    if (!LOOPBACK.has(callback.hostname)) throw new Refused(400, "the callback must be on this machine");
    const meta: Meta = {
      callbackUrl: callback.origin + callback.pathname,
      callbackSlug: String(body.callbackSlug),
      metadata: body.metadata,
      awaitServerData: body.awaitServerData !== false,
    };
    for (const key of listOf(body.fileKeys)) {
      await this.store.promise(key, meta);
      this.asking.get(key)?.(meta);
    }
  }

  private async serve(response: ServerResponse, target: string, key: string): Promise<void> {
    const side = await this.store.side(key);
    if (side?.acl !== "public-read") {
      const signed = checkSigned(this.options.base, target, this.options.apiKey, this.now());
      if (!signed.ok) throw new Refused(403, signed.words);
    }
    if (!side) throw new Refused(404, "not found");
    response.writeHead(200, {
      "content-type": side.type,
      "content-length": side.size,
      "content-disposition": "attachment",
      "x-content-type-options": "nosniff",
      "content-security-policy": "sandbox; default-src 'none'",
      "cache-control": "no-store",
    });
    await pipeline(this.store.read(key), response);
  }
}

function json(response: ServerResponse, status: number, body: unknown): void {
  const text = JSON.stringify(body);
  response
    .writeHead(status, { ...CORS, "content-type": "application/json", "cache-control": "no-store" })
    .end(text);
}

async function readJson(request: IncomingMessage): Promise<Record<string, unknown>> {
  const chunks: Buffer[] = [];
  let size = 0;
  for await (const chunk of request as AsyncIterable<Buffer>) {
    size += chunk.length;
    if (size > 1_000_000) throw new Refused(413, "too large");
    chunks.push(chunk);
  }
  const found = JSON.parse(Buffer.concat(chunks).toString("utf8") || "{}") as unknown;
  if (typeof found !== "object" || found === null) throw new Refused(400, "an object is needed");
  return found as Record<string, unknown>;
}

const listOf = (value: unknown): string[] => (Array.isArray(value) ? value.map(String) : []);

/** The token both sides share, as the client library wants it. */
export function uploadToken(at: { apiKey: string; appId: string }): string {
  return Buffer.from(JSON.stringify({ ...at, regions: ["local"] })).toString("base64");
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const { UPLOADTHING_TOKEN, UPLOADTHING_INGEST_URL, UPLOADHOST_DIR, UPLOADHOST_CHUNK_DELAY_MS } =
    process.env;
  if (!UPLOADTHING_TOKEN || !UPLOADTHING_INGEST_URL || !UPLOADHOST_DIR)
    throw new Error("UPLOADTHING_TOKEN, UPLOADTHING_INGEST_URL and UPLOADHOST_DIR are needed.");
  const token = JSON.parse(Buffer.from(UPLOADTHING_TOKEN, "base64").toString()) as {
    apiKey: string;
    appId: string;
  };
  const base = UPLOADTHING_INGEST_URL.replace(/\/$/, "");
  const server = createUploadHost({
    dir: UPLOADHOST_DIR,
    apiKey: token.apiKey,
    appId: token.appId,
    base,
    chunkDelayMs: Number(UPLOADHOST_CHUNK_DELAY_MS ?? 0),
  });
  server.listen(Number(new URL(base).port), "127.0.0.1", () => console.log("upload host ready"));
  const end = () => {
    server.close(() => process.exit(0));
    server.closeIdleConnections();
  };
  process.once("SIGTERM", end);
  process.once("SIGINT", end);
}
