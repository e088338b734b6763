import { readdirSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import type { TestProject } from "vitest/node";
import { migrateDatabase } from "@/db/migrate";
import { ensureDatabase, removeHome, startPostgres } from "@/lib/standins/postgres";

declare module "vitest" {
  interface ProvidedContext {
    adminUrl: string;
    ownerUrl: string;
  }
}

const PREFIX = "mendbay-test-";

/** What a run that was killed left behind is removed by the next one. */
async function sweep(): Promise<void> {
  for (const name of readdirSync(tmpdir()).filter((n) => n.startsWith(PREFIX))) {
    const owner = Number(name.slice(PREFIX.length));
    try {
      process.kill(owner, 0);
    } catch {
      const home = join(tmpdir(), name);
      const left = await startPostgres({ home, throwaway: true }).catch(() => undefined);
      await left?.stop();
      removeHome(home);
    }
  }
}

/** One private cluster and one migrated template for the whole run. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  await sweep();
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
