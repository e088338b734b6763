import { mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { createServer } from "node:net";
import { afterAll, expect, test } from "vitest";
import { plainWords, Plain } from "@/lib/standins/plain";
import { takePort } from "@/lib/standins/ports";
import { keptSettings, prepareFolder, realServices, takeFolder } from "@/lib/standins/settings";

const dir = mkdtempSync(join(tmpdir(), "mendbay-settings-"));
afterAll(() => rmSync(dir, { recursive: true, force: true }));

const env = (more: Record<string, string>) => ({ NODE_ENV: "test", ...more }) as NodeJS.ProcessEnv;

test("secrets are made once, kept, and readable by their owner alone", () => {
  const made = keptSettings(dir);
  expect(made.secret.length).toBeGreaterThanOrEqual(32);
  expect(made.uploadKey).toMatch(/^sk_/);
  expect(keptSettings(dir)).toEqual(made);
  expect(statSync(join(dir, "settings.json")).mode & 0o077).toBe(0);
});

test("damaged settings are told in one line", () => {
  const other = mkdtempSync(join(dir, "damaged-"));
  writeFileSync(join(other, "settings.json"), "{");
  expect(() => keptSettings(other)).toThrow(Plain);
});

test("no service named: stand-ins. All named: real. Some named: refused, with the names that are missing", () => {
  expect(realServices(env({}))).toBe(false);
  const all = {
    DATABASE_URL: "postgres://db.ostwick.example/mendbay",
    SMTP_URL: "smtps://mail.ostwick.example",
    UPLOADTHING_TOKEN: "token",
    MENDBAY_URL: "https://desk.ostwick.example",
  };
  expect(realServices(env(all))).toBe(true);
  expect(() => realServices(env({ DATABASE_URL: all.DATABASE_URL }))).toThrow(
    /SMTP_URL, UPLOADTHING_TOKEN, MENDBAY_URL/,
  );
  expect(() => realServices(env({ ...all, MENDBAY_DEMO: "1" }))).toThrow(/demo door/);
});

test("a folder with too little room, or held by a running start, is refused in one line", () => {
  expect(() => prepareFolder(dir, 1e12)).toThrow(/are free/);
  writeFileSync(join(dir, "running.pid"), String(process.ppid));
  expect(() => takeFolder(dir)).toThrow(/runs here already/);
  // What a killed start wrote holds nothing back: no process has this number.
  writeFileSync(join(dir, "running.pid"), "4194305");
  takeFolder(dir);
  expect(readFileSync(join(dir, "running.pid"), "utf8")).toBe(String(process.pid));
});

test("a port in use gives way to another", async () => {
  const holder = createServer();
  await new Promise<void>((done) => holder.listen(0, "127.0.0.1", done));
  const held = (holder.address() as { port: number }).port;
  const found = await takePort(held);
  expect(found).not.toBe(held);
  expect(found).toBeGreaterThan(0);
  holder.close();
});

test("causes that a person can mend are told without a stack", () => {
  expect(plainWords(Object.assign(new Error("write"), { code: "ENOSPC" }))).toMatch(/disk is full/);
  expect(plainWords(new Error("initdb failed: No space left on device"))).toMatch(/disk is full/);
  expect(plainWords(new TypeError("x is not a function"))).toBeUndefined();
});
