import { randomBytes } from "node:crypto";
import pg from "pg";
import { afterAll, beforeAll, inject } from "vitest";
import { closePool } from "@/db/client";

/** Settings of the system under test. Nothing here reaches a network. */
const SETTINGS = {
  MENDBAY_SECRET: "a secret that only tests know, 32 and more",
  MENDBAY_URL: "http://127.0.0.1:3000",
  MENDBAY_LOG: "silent",
  MENDBAY_DEMO: "0",
  PG_POOL_MAX: "6",
};

async function asAdmin(statement: string): Promise<void> {
  const admin = new pg.Client({ connectionString: inject("adminUrl") });
  await admin.connect();
  try {
    // A template may be copied by one at a time: the lock queues the files that run beside us.
    await admin.query("select pg_advisory_lock(7236501)");
    await admin.query(statement);
  } finally {
    await admin.end();
  }
}

/**
 * A migrated, empty database for this test file alone. Call it once at the top of the file;
 * `DATABASE_URL` points to it before the first query, and it is dropped after the last test.
 */
export function freshDb(): Promise<void> {
  const name = `mendbay_${randomBytes(6).toString("hex")}`;
  Object.assign(process.env, SETTINGS, { DATABASE_URL: inject("ownerUrl").replace(/DATABASE$/, name) });
  const made = asAdmin(`create database ${name} template mendbay_template owner mendbay`);
  beforeAll(() => made);
  afterAll(async () => {
    await closePool();
    await asAdmin(`drop database if exists ${name} with (force)`);
  });
  return made;
}
