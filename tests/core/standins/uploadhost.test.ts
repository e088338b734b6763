import { createHash, randomBytes } from "node:crypto";
import { mkdtempSync, readdirSync, rmSync } from "node:fs";
import { createServer, request as httpRequest, type Server } from "node:http";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { createRouteHandler, createUploadthing, type FileRouter } from "uploadthing/server";
import { UTApi, UTFile } from "uploadthing/server";
import { afterAll, beforeAll, expect, test } from "vitest";
import { takePort } from "@/lib/standins/ports";
import { createUploadHost, uploadToken } from "@/lib/standins/uploadhost";
import { sign } from "@/lib/standins/uploadsign";

/* The stand-in against the real client library: its server handler, its UTApi and its signatures. */

const apiKey = "sk_test_only_0123456789";
const appId = "mendbaytest";
const token = uploadToken({ apiKey, appId });
const dir = mkdtempSync(join(tmpdir(), "mendbay-uploads-"));
let base = "";
let app = "";
let hostServer: Server;
let appServer: Server;
let handler: (request: Request) => Promise<Response> | Response;
let api: UTApi;
const completed: string[] = [];

const f = createUploadthing();
const router = {
  evidence: f({ blob: { maxFileSize: "64MB", maxFileCount: 3 } })
    .middleware(() => ({ row: "r-1" }))
    .onUploadComplete(({ metadata, file }) => {
      if (file.name === "refused.bin") throw new Error("no");
      completed.push(file.key);
      return { row: metadata.row, size: file.size };
    }),
} satisfies FileRouter;

beforeAll(async () => {
  const port = await takePort();
  base = `http://localhost:${port}`;
  hostServer = createUploadHost({ dir, apiKey, appId, base });
  await new Promise<void>((done) => hostServer.listen(port, "127.0.0.1", done));
  const appPort = await takePort();
  app = `http://127.0.0.1:${appPort}/api/uploadthing`;
  handler = createRouteHandler({
    router,
    config: { token, ingestUrl: base, callbackUrl: app, isDev: false, logLevel: "Error" },
  });
  appServer = createServer(async (request, response) => {
    const chunks: Buffer[] = [];
    for await (const chunk of request) chunks.push(chunk as Buffer);
    const answer = await handler(
      new Request(new URL(request.url ?? "/", app), {
        method: request.method,
        headers: request.headers as Record<string, string>,
        body: chunks.length ? Buffer.concat(chunks) : undefined,
      }),
    );
    response.writeHead(answer.status, Object.fromEntries(answer.headers)).end(await answer.text());
  });
  await new Promise<void>((done) => appServer.listen(appPort, "127.0.0.1", done));
  api = new UTApi({
    token,
    ingestUrl: base,
    apiUrl: base,
    ufsHost: base.replace("http://", ""),
    ufsAppIdLocation: "path",
    logLevel: "Error",
  } as ConstructorParameters<typeof UTApi>[0]);
});

afterAll(async () => {
  for (const server of [hostServer, appServer]) {
    server.closeAllConnections();
    await new Promise((done) => server.close(done));
  }
  rmSync(dir, { recursive: true, force: true });
});

const sha = (bytes: Uint8Array) => createHash("sha256").update(bytes).digest("hex");

async function presign(name: string, size: number): Promise<{ url: string; key: string }> {
  const answer = await fetch(`${app}?actionType=upload&slug=evidence`, {
    method: "POST",
    headers: {
      "content-type": "application/json",
      "x-uploadthing-package": "test",
      "x-uploadthing-version": "7.7.4",
    },
    body: JSON.stringify({ files: [{ name, size, type: "application/octet-stream" }] }),
  });
  expect(answer.status).toBe(200);
  return ((await answer.json()) as { url: string; key: string }[])[0]!;
}

async function put(url: string, bytes: Uint8Array, from = 0) {
  const form = new FormData();
  form.append("file", new Blob([bytes.subarray(from) as Uint8Array<ArrayBuffer>]), "blob");
  const answer = await fetch(url, { method: "PUT", body: form, headers: { range: `bytes=${from}-` } });
  return { status: answer.status, body: (await answer.json()) as Record<string, unknown> };
}

/** Sends the first bytes of a multipart body, then breaks the connection. */
function breakOff(url: string, bytes: Uint8Array): Promise<void> {
  return new Promise((done) => {
    const target = new URL(url);
    const sending = httpRequest({
      host: "127.0.0.1",
      port: target.port,
      method: "PUT",
      path: target.pathname + target.search,
      headers: {
        range: "bytes=0-",
        "content-type": "multipart/form-data; boundary=edge",
        "transfer-encoding": "chunked",
      },
    });
    sending.on("error", () => undefined).on("close", done);
    sending.write('--edge\r\nContent-Disposition: form-data; name="file"; filename="blob"\r\n\r\n');
    sending.write(bytes, () => sending.destroy());
  });
}

const heldBy = async (url: string) =>
  Number((await fetch(url, { method: "HEAD" })).headers.get("x-ut-range-start"));

const get = async (url: string) => {
  const answer = await fetch(url);
  return { status: answer.status, headers: answer.headers, bytes: Buffer.from(await answer.arrayBuffer()) };
};

test("a file put in by the application comes back byte for byte, by a signed URL alone", async () => {
  const bytes = randomBytes(3_000_000);
  // Names are encoded twice on the wire.
  const name = "sönderteil (1) 100%+&'!~*=#.bin";
  const sent = await api.uploadFiles(new UTFile([bytes], name, { type: "application/octet-stream" }));
  const key = sent.data!.key;
  expect(sent.data!.name).toBe(name);
  const signed = await api.generateSignedURL(key, { expiresIn: 60 });
  const found = await get(signed.ufsUrl);
  expect(sha(found.bytes)).toBe(sha(bytes));
  expect(found.headers.get("content-disposition")).toBe("attachment");
  expect(found.headers.get("x-content-type-options")).toBe("nosniff");

  expect((await get(`${base}/f/${key}`)).status).toBe(403);
  const moved = new URL(signed.ufsUrl);
  moved.searchParams.set("expires", String(Date.now() + 9e6));
  expect((await get(moved.href)).status).toBe(403);
  const asked = await api.getSignedURL(key, { expiresIn: 60 });
  expect(sha((await get(asked.ufsUrl)).bytes)).toBe(sha(bytes));
});

test("an expired URL is refused though its signature fits", async () => {
  const sent = await api.uploadFiles(new UTFile(["x"], "x.txt"));
  const text = `${base}/f/${sent.data!.key}?expires=${Date.now() - 1000}`;
  expect((await get(`${text}&signature=${encodeURIComponent(sign(text, apiKey))}`)).status).toBe(403);
});

test("a deleted file is gone at once", async () => {
  const sent = await api.uploadFiles(new UTFile(["gone soon"], "gone.txt"));
  const { ufsUrl } = await api.generateSignedURL(sent.data!.key);
  expect((await get(ufsUrl)).status).toBe(200);
  expect(await api.deleteFiles(sent.data!.key)).toEqual({ success: true, deletedCount: 1 });
  expect((await get(ufsUrl)).status).toBe(404);
});

test("a browser's upload is told to the application, whose answer comes back", async () => {
  const bytes = randomBytes(500_000);
  const { url, key } = await presign("photo.bin", bytes.length);
  const { status, body } = await put(url, bytes);
  expect(status).toBe(200);
  expect(body.serverData).toEqual({ row: "r-1", size: bytes.length });
  expect(body.fileHash).toBe(createHash("md5").update(bytes).digest("hex"));
  expect(completed).toContain(key);
  expect((await put(url, bytes)).status).toBe(409);
});

test("a broken upload goes on where it stopped", async () => {
  const bytes = randomBytes(2_000_000);
  const { url, key } = await presign("long.bin", bytes.length);
  await breakOff(url, bytes.subarray(0, 1_200_000));
  let held = await heldBy(url);
  // The rest of the broken body may still be on its way to the disk; asking again is what a browser does.
  for (let i = 0; i < 50 && held === 0; i++) held = await heldBy(url);
  expect(held).toBeGreaterThan(0);
  expect(held).toBeLessThanOrEqual(1_200_000);
  const { body } = await put(url, bytes, held);
  expect(body.error).toBeUndefined();
  const { ufsUrl } = await api.generateSignedURL(key);
  expect(sha((await get(ufsUrl)).bytes)).toBe(sha(bytes));
});

test("bytes that contain the delimiter's beginning are kept", async () => {
  const bytes = Buffer.concat([
    Buffer.from("\r\n--"),
    randomBytes(70_000),
    Buffer.from("\r\n------"),
    Buffer.from("\r\n"),
  ]);
  const { url, key } = await presign("edges.bin", bytes.length);
  expect((await put(url, bytes)).body.error).toBeUndefined();
  expect(sha((await get((await api.generateSignedURL(key)).ufsUrl)).bytes)).toBe(sha(bytes));
});

test("fewer or more bytes than announced, or a skip over bytes that are not here: refused, nothing kept", async () => {
  const few = await presign("few.bin", 100);
  expect((await put(few.url, randomBytes(99))).body.error).toMatch(/fewer/);
  const many = await presign("many.bin", 100);
  expect((await put(many.url, randomBytes(101))).body.error).toMatch(/more/);
  const skip = await presign("skip.bin", 100);
  expect((await put(skip.url, randomBytes(100), 50)).status).toBe(416);
  const names = readdirSync(dir);
  for (const { key } of [few, many, skip]) expect(names).not.toContain(`${key}.bin`);
});

test("a changed presigned URL is refused", async () => {
  const { url } = await presign("photo.bin", 10);
  const larger = url.replace("x-ut-file-size=10", "x-ut-file-size=99");
  expect(larger).not.toBe(url);
  expect((await put(larger, randomBytes(99))).status).toBe(403);
});

test("when the application cannot take the file the uploader hears of it and no bytes stay", async () => {
  const { url, key } = await presign("refused.bin", 10);
  expect((await put(url, randomBytes(10))).body.error).toMatch(/could not take/);
  expect(readdirSync(dir)).not.toContain(`${key}.bin`);
});

test("a callback to another machine, a wrong key and a path as key are refused", async () => {
  const post = (path: string, key: string, body: unknown) =>
    fetch(base + path, {
      method: "POST",
      headers: { "x-uploadthing-api-key": key },
      body: JSON.stringify(body),
    });
  const meta = {
    fileKeys: ["k".repeat(30)],
    callbackUrl: "http://desk.ostwick.example/api",
    callbackSlug: "s",
  };
  expect((await post("/route-metadata", apiKey, meta)).status).toBe(400);
  expect((await post("/route-metadata", "sk_other", meta)).status).toBe(401);
  expect((await post("/v6/deleteFiles", apiKey, { fileKeys: ["../../etc/passwd"] })).status).toBe(400);
});
