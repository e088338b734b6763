import { mkdtempSync, rmSync } from "node:fs";
import type { Server } from "node:http";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { sql } from "drizzle-orm";
import sharp from "sharp";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { must } from "@/lib/base/result";
import { fileArrived, promiseFiles, storeBytes } from "@/lib/files/commands";
import { fileBytes } from "@/lib/files/queries";
import { getBytes, putBytes } from "@/lib/files/store.io";
import { runDueJobs } from "@/lib/jobs/worker.io";
import { takePort } from "@/lib/standins/ports";
import { createUploadHost, uploadToken } from "@/lib/standins/uploadhost";
import { as, count, job, rows, seller, type Seller } from "../../factories/seller";
import { freshDb } from "../db";

await freshDb();
const dir = mkdtempSync(join(tmpdir(), "mendbay-files-"));
let host: Server;
let s: Seller;
let photo: Buffer;

beforeAll(async () => {
  const port = await takePort();
  const [apiKey, appId, base] = ["sk_test_only_0123456789", "mendbaytest", `http://localhost:${port}`];
  Object.assign(process.env, {
    UPLOADTHING_TOKEN: uploadToken({ apiKey, appId }),
    UPLOADTHING_INGEST_URL: base,
    UPLOADTHING_API_URL: base,
    UPLOADTHING_UFS_HOST: `localhost:${port}`,
    UPLOADTHING_UFS_APP_ID_LOCATION: "path",
    UPLOADTHING_IS_DEV: "false",
  });
  host = createUploadHost({ dir, apiKey, appId, base });
  await new Promise<void>((done) => host.listen(port, "127.0.0.1", done));
  s = await seller();
  photo = await sharp({ create: { width: 64, height: 48, channels: 3, background: "#446688" } })
    .withExif({
      IFD0: { Make: "Secret camera" },
      IFD3: { GPSLatitude: "51/1 30/1 0/1", GPSLatitudeRef: "N" },
    })
    .jpeg()
    .toBuffer();
});
afterAll(async () => {
  host.closeAllConnections();
  await new Promise<void>((done) => host.close(() => done()));
  rmSync(dir, { recursive: true, force: true });
});

type Row = {
  state: string;
  type: string | null;
  reason: string | null;
  key: string | null;
  width: number | null;
};
async function checked(bytes: Buffer, name: string, type: string): Promise<Row & { fileId: string }> {
  const { fileId } = must(
    await storeBytes(as(s.sam), { bytes, name, type, purpose: "evidence", accountId: s.sam.accountId }),
  );
  await runDueJobs();
  const [row] = await rows<Row>(
    sql`select state::text, type, reason, key, width from file where id = ${fileId}`,
  );
  return { ...row!, fileId };
}

describe("the check of a file", () => {
  it.each([
    [
      "a drawing",
      Buffer.from('<svg xmlns="http://www.w3.org/2000/svg" onload="alert(1)"/>'),
      "a.svg",
      "image/svg+xml",
      /not opened here/,
    ],
    [
      "a drawing called a photo",
      Buffer.from("\n <svg onload='alert(1)'/>"),
      "a.jpg",
      "image/jpeg",
      /not opened here/,
    ],
    [
      "a drawing behind a comment",
      Buffer.from("<!-- a log --><svg onload='alert(1)'/>"),
      "a.log",
      "text/plain",
      /not opened here/,
    ],
    [
      "a drawing behind a long comment",
      Buffer.from(`<!--${"x".repeat(900)}--><svg onload='alert(1)'/>`),
      "a.log",
      "text/plain",
      /not opened here/,
    ],
    [
      "a web page",
      Buffer.from("<!DOCTYPE html><script>alert(1)</script>"),
      "log.txt",
      "text/plain",
      /not opened here/,
    ],
    [
      "a web page after a mark",
      Buffer.from("\uFEFF<html><body onload=alert(1)>"),
      "log.txt",
      "text/plain",
      /not opened here/,
    ],
    [
      "a program called a photo",
      Buffer.concat([Buffer.from("MZ"), Buffer.alloc(600, 0x90)]),
      "photo.jpg",
      "image/jpeg",
      /something else/,
    ],
    [
      "an ELF program called a log",
      Buffer.concat([Buffer.from("\x7fELF\x02\x01\x01"), Buffer.alloc(200)]),
      "events.log",
      "text/plain",
      /something else/,
    ],
    [
      "an archive",
      Buffer.concat([Buffer.from("PK\x03\x04"), Buffer.alloc(100)]),
      "logs.zip",
      "application/zip",
      /unpack an archive/,
    ],
    [
      "bytes that are nothing",
      Buffer.from([1, 2, 3, 0, 255, 254, 0, 9]),
      "x.bin",
      "image/png",
      /neither a picture nor plain text/,
    ],
  ])("turns %s away, drops its bytes and says why", async (_what, bytes, name, type, words) => {
    const before = await rows<{ key: string }>(sql`select key from file where key is not null`);
    const row = await checked(bytes, name, type);
    expect(row).toMatchObject({
      state: "rejected",
      key: null,
      reason: expect.stringMatching(words) as string,
    });
    expect(await rows(sql`select key from file where key is not null`)).toEqual(before);
    expect((await fileBytes(job(), row.fileId))?.bytes ?? null).toBeNull();
  });

  it("draws a photo anew: no place, no camera, nothing behind its last byte", async () => {
    const script = "<script>alert(document.cookie)</script>";
    const polyglot = Buffer.concat([photo, Buffer.from(script)]);
    expect(polyglot.includes("Secret camera")).toBe(true);
    expect((await sharp(polyglot).metadata()).exif).toBeDefined();
    const row = await checked(polyglot, "photo.php.jpg", "image/jpeg");
    expect(row).toMatchObject({ state: "clean", type: "image/jpeg", width: 64 });
    const kept = await getBytes(row.key!);
    for (const word of [script, "script", "Secret camera", "Exif", "GPS"])
      expect(kept.includes(word)).toBe(false);
    const meta = await sharp(kept).metadata();
    expect([meta.exif, meta.xmp, meta.iptc]).toEqual([undefined, undefined, undefined]);
    expect(kept.subarray(-2)).toEqual(Buffer.from([0xff, 0xd9]));
  });

  it("goes by the bytes, not by what they are called", async () => {
    const png = await sharp(photo).png().toBuffer();
    expect(await checked(png, "events.txt", "text/plain")).toMatchObject({
      state: "clean",
      type: "image/jpeg",
    });
    const log = Buffer.from("12:01 reallocated 51\n12:02 <html> seen in an answer\n");
    expect(await checked(log, "photo.jpg", "image/jpeg")).toMatchObject({
      state: "clean",
      type: "text/plain",
      width: null,
    });
  });

  it("turns away a picture that is broken or too large to be opened", async () => {
    const cut = await sharp({ create: { width: 640, height: 480, channels: 3, background: "#888888" } })
      .png()
      .toBuffer();
    expect(await checked(cut.subarray(0, cut.length - 40), "p.png", "image/png")).toMatchObject({
      state: "rejected",
      reason: expect.stringMatching(/broken/) as string,
    });
    const bomb = await sharp({ create: { width: 8000, height: 5100, channels: 3, background: "#000000" } })
      .png({ compressionLevel: 9 })
      .toBuffer();
    expect(bomb.length).toBeLessThan(1_000_000);
    expect(await checked(bomb, "bomb.png", "image/png")).toMatchObject({
      state: "rejected",
      reason: expect.stringMatching(/40 million pixels/) as string,
    });
  });

  it("turns away a file of which not all arrived", async () => {
    const { fileIds } = must(
      await promiseFiles(as(s.sam), {
        purpose: "evidence",
        accountId: s.sam.accountId,
        files: [{ name: "photo.jpg", size: photo.length + 1, type: "image/jpeg" }],
      }),
    );
    const key = await putBytes(photo, "photo.jpg", "image/jpeg", fileIds[0]!);
    must(await fileArrived(job(), { fileId: fileIds[0]!, key, size: photo.length }));
    expect(must(await fileArrived(job(), { fileId: fileIds[0]!, key, size: photo.length })).state).toBe(
      "known",
    );
    await runDueJobs();
    expect(await rows(sql`select state::text, reason from file where id = ${fileIds[0]}`)).toEqual([
      { state: "rejected", reason: "Not all of the file arrived. Send it again." },
    ]);
  });
});

describe("before a file is sent", () => {
  it("an empty or too large one is refused by its declared size, and keeps no row", async () => {
    const n = await count("file");
    const ask = (size: number) =>
      promiseFiles(as(s.sam), {
        purpose: "evidence",
        accountId: s.sam.accountId,
        files: [{ name: "../../etc/photo.jpg", size, type: "image/jpeg" }],
      });
    expect(await ask(0)).toMatchObject({
      ok: false,
      refusal: { code: "invalid", message: "photo.jpg is empty. Choose it again." },
    });
    expect(await ask(25_000_001)).toMatchObject({ ok: false, refusal: { code: "too_large" } });
    const none = await storeBytes(job(), {
      bytes: Buffer.alloc(0),
      name: "a.jpg",
      type: "image/jpeg",
      purpose: "evidence",
      accountId: null,
    });
    expect(none).toMatchObject({ ok: false, refusal: { code: "invalid" } });
    expect(await count("file")).toBe(n);
  });

  it("a customer's goes into their own account only", async () => {
    const foreign = await promiseFiles(as(s.sam), {
      purpose: "evidence",
      accountId: s.dana.accountId,
      files: [{ name: "a.jpg", size: 10, type: "image/jpeg" }],
    }).catch((thrown: unknown) => thrown);
    expect(foreign).not.toMatchObject({ ok: true });
    expect(await rows(sql`select id from file where account_id = ${s.dana.accountId}`)).toEqual([]);
  });
});
