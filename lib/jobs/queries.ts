import { sql } from "drizzle-orm";
import { rawDb } from "@/db/client";
import journal from "@/db/migrations/meta/_journal.json";

export type Readiness = {
  ready: boolean;
  database: boolean;
  /** Every migration this build knows has been applied. */
  migrated: boolean;
};

/**
 * May this process take requests? Asks for nobody's data, so no role is set; the migration
 * tables belong to the owner alone.
 */
export async function readiness(): Promise<Readiness> {
  try {
    const found = await rawDb().execute<{ count: number }>(
      sql`select count(*)::int as count from drizzle.__drizzle_migrations`,
    );
    const migrated = (found.rows[0]?.count ?? 0) >= journal.entries.length;
    return { ready: migrated, database: true, migrated };
  } catch {
    return { ready: false, database: false, migrated: false };
  }
}
