import { mkdirSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { removeHome, sweepHomes } from "../../lib/standins/postgres";
import { startAll } from "../../lib/standins/system";

const DATABASE = "mendbay-e2e-db-";
const DATA = "mendbay-e2e-data-";

/** The whole system with the demo in it: built application, real worker, receiver and stand-ins. */
export default async function setup(): Promise<() => Promise<void>> {
  // A system that runs already may be tested too: MENDBAY_E2E says where it is, as Running in fixtures.ts.
  if (process.env.MENDBAY_E2E) return async () => undefined;
  await sweepHomes(tmpdir(), DATABASE);
  const clusterHome = join(tmpdir(), `${DATABASE}${process.pid}`);
  const dataDir = join(tmpdir(), `${DATA}${process.pid}`);
  rmSync(dataDir, { recursive: true, force: true });
  mkdirSync(dataDir, { recursive: true });
  const system = await startAll({
    dataDir,
    clusterHome,
    throwaway: true,
    demo: true,
    // Slow enough that progress and a pause can be seen on loopback.
    chunkDelayMs: 4,
    say: (line) => console.log(line),
  });
  const { url, mailUrl, uploadUrl, databaseUrl, receiver } = system;
  process.env.MENDBAY_E2E = JSON.stringify({ url, mailUrl, uploadUrl, databaseUrl, receiver, dataDir });
  return async () => {
    await system.stop();
    removeHome(clusterHome);
    // With MENDBAY_KEEP=1 the logs of a failed run stay for a look.
    if (process.env.MENDBAY_KEEP !== "1") rmSync(dataDir, { recursive: true, force: true });
  };
}
