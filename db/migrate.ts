import { fileURLToPath } from "node:url";
import { drizzle } from "drizzle-orm/node-postgres";
import { migrate } from "drizzle-orm/node-postgres/migrator";
import { runMigrations } from "graphile-worker";
import pg from "pg";

const FOLDER = fileURLToPath(new URL("./migrations", import.meta.url));
/** Any number, the same in every process: two starts at once migrate one after the other. */
const LOCK = 7236500;

/** Brings a database to the newest shape: job tables, our tables, roles and guards. */
export async function migrateDatabase(url: string): Promise<void> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    await client.query("select pg_advisory_lock($1)", [LOCK]);
    await runMigrations({ connectionString: url, logger: undefined });
    await migrate(drizzle(client), { migrationsFolder: FOLDER });
  } finally {
    await client.end();
  }
}

/** Causes outside of us, told in one line: no answer, unknown host, wrong password, no such database. */
const OUTSIDE = new Set(["ECONNREFUSED", "ENOTFOUND", "ETIMEDOUT", "28P01", "28000", "3D000", "42501"]);

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const url = process.env.DATABASE_URL;
  if (!url) throw new Error("DATABASE_URL says which database to migrate.");
  try {
    await migrateDatabase(url);
  } catch (thrown) {
    const { code, message } = thrown as { code?: string; message?: string };
    if (!code || !OUTSIDE.has(code)) throw thrown;
    const { host, pathname } = new URL(url);
    console.error(`PostgreSQL at ${host}${pathname} cannot be used: ${message || code}`);
    process.exitCode = 1;
  }
}
