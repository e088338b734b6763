import pg from "pg";
import type { Cluster } from "./postgres";

/** Makes the database when it is missing. True when it was made now. */
export async function ensureDatabase(cluster: Cluster, name = "mendbay"): Promise<boolean> {
  return asAdmin(cluster, async (admin) => {
    const found = await admin.query("select from pg_database where datname = $1", [name]);
    if (found.rowCount) return false;
    await admin.query(`create database ${pg.escapeIdentifier(name)} owner mendbay`);
    return true;
  });
}

/** Drops the database with everybody in it. */
export async function dropDatabase(cluster: Cluster, name = "mendbay"): Promise<void> {
  await asAdmin(cluster, (admin) =>
    admin.query(`drop database if exists ${pg.escapeIdentifier(name)} with (force)`),
  );
}

/** A word kept with the database itself, so that it lives and dies with the data. */
export async function databaseMark(cluster: Cluster, name = "mendbay"): Promise<string | null> {
  return asAdmin(cluster, async (admin) => {
    const q = "select shobj_description(oid, 'pg_database') as mark from pg_database where datname = $1";
    return ((await admin.query<{ mark: string | null }>(q, [name])).rows[0]?.mark ?? null) as string | null;
  });
}

export async function markDatabase(cluster: Cluster, mark: string, name = "mendbay"): Promise<void> {
  await asAdmin(cluster, (admin) =>
    admin.query(`comment on database ${pg.escapeIdentifier(name)} is ${pg.escapeLiteral(mark)}`),
  );
}

async function asAdmin<T>(cluster: Cluster, run: (admin: pg.Client) => Promise<T>): Promise<T> {
  const admin = new pg.Client({ connectionString: cluster.adminUrl });
  await admin.connect();
  try {
    return await run(admin);
  } finally {
    await admin.end();
  }
}
