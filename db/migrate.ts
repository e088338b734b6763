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

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const url = process.env.DATABASE_URL;
  if (!url) throw new Error("DATABASE_URL says which database to migrate.");
  await migrateDatabase(url);
}
