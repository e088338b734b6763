import { tmpdir } from "node:os";
import { join } from "node:path";
import type { TestProject } from "vitest/node";
import { migrateDatabase } from "@/db/migrate";
import { ensureDatabase } from "@/lib/standins/databases";
import { removeHome, startPostgres, sweepHomes } from "@/lib/standins/postgres";

declare module "vitest" {
  interface ProvidedContext {
    adminUrl: string;
    ownerUrl: string;
  }
}

const PREFIX = "mendbay-test-";

/** One private cluster and one migrated template for the whole run. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  await sweepHomes(tmpdir(), PREFIX);
  const home = join(tmpdir(), `${PREFIX}${process.pid}`);
  removeHome(home);
  const cluster = await startPostgres({ home, throwaway: true });
  await ensureDatabase(cluster, "mendbay_template");
  await migrateDatabase(cluster.url("mendbay_template"));
  project.provide("adminUrl", cluster.adminUrl);
  project.provide("ownerUrl", cluster.url("DATABASE"));
  return async () => {
    await cluster.stop();
    removeHome(home);
  };
}
