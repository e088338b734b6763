import { afterEach, beforeEach, expect, test, vi } from "vitest";

const LOCAL = {
  DATABASE_URL: "postgres://mendbay@127.0.0.1:5432/mendbay",
  MENDBAY_SECRET: "a secret that only tests know, 32 and more",
  MENDBAY_URL: "http://127.0.0.1:3000",
  SMTP_URL: "smtp://127.0.0.1:2525",
  UPLOADTHING_INGEST_URL: "http://localhost:4010",
  MENDBAY_DEMO: "1",
};

beforeEach(() => vi.resetModules());
afterEach(() => vi.unstubAllEnvs());

async function read(more: Record<string, string> = {}) {
  for (const [name, value] of Object.entries({ ...LOCAL, ...more })) vi.stubEnv(name, value);
  return (await import("@/lib/env")).env();
}

test("the demo door opens where everything is on this machine", async () => {
  expect((await read()).MENDBAY_DEMO).toBe("1");
});

test.each([
  ["DATABASE_URL", "postgres://mendbay@db.ostwick.example/mendbay"],
  ["SMTP_URL", "smtps://mail.ostwick.example"],
  ["MENDBAY_URL", "https://desk.ostwick.example"],
  ["UPLOADTHING_INGEST_URL", "https://upload.ostwick.example"],
])("it does not start beside %s elsewhere", async (name, value) => {
  await expect(read({ [name]: value })).rejects.toThrow(/demo door/);
  vi.resetModules();
  expect((await read({ [name]: value, MENDBAY_DEMO: "0" })).MENDBAY_DEMO).toBe("0");
});

test("wrong settings are all named at once", async () => {
  await expect(read({ MENDBAY_SECRET: "short", RECEIVER_PORT: "99999" })).rejects.toThrow(
    /MENDBAY_SECRET[\s\S]*RECEIVER_PORT/,
  );
});
