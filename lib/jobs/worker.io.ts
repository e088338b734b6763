import { fileURLToPath } from "node:url";
import { Logger, parseCronItems, run, runOnce, type TaskList } from "graphile-worker";
import { pool, closePool } from "@/db/client";
import { jobCtx } from "@/lib/ctx";
import { log } from "@/lib/log";
import { HANDLERS, type Handler } from "./handlers/registry";
import { JOBS, type JobName } from "./schema";

/** Each job: its payload checked again, then its handler, which opens its own transactions. */
function tasks(): TaskList {
  const list: TaskList = {};
  for (const name of Object.keys(HANDLERS) as JobName[]) {
    list[name] = async (raw, helpers) => {
      const load = HANDLERS[name];
      if (!load) throw new Error(`no handler for ${name}`);
      const { handle } = (await load()) as { handle: Handler<JobName> };
      const payload = JOBS[name].parse(raw);
      await handle(jobCtx(name, { requestId: `job-${helpers.job.id}-${helpers.job.attempts}` }), payload);
    };
  }
  return list;
}

const logger = new Logger(() => (level, message, meta) => {
  if (level === "error")
    log.error({ job: meta?.job ? String((meta.job as { id: string }).id) : undefined }, message);
  else if (level === "warning") log.warn(message);
  else log.debug(message);
});

/**
 * The library writes how a job went without waiting for it; only what it batches does it see written
 * before it says that it has ended. Without a delay nothing stays locked longer for that.
 */
const preset = { worker: { completeJobBatchDelay: 0, failJobBatchDelay: 0 } };

export type Worker = { stop(): Promise<void>; gone: Promise<void> };

/** Starts taking jobs. Stopping waits for those that run. */
export async function startWorker(more: { concurrency?: number } = {}): Promise<Worker> {
  const runner = await run({
    pgPool: pool(),
    taskList: tasks(),
    concurrency: more.concurrency ?? 4,
    pollInterval: 1000,
    noHandleSignals: true,
    // What a killed worker held is taken up again by this.
    parsedCronItems: parseCronItems(
      HANDLERS["mail.sweep"]
        ? [{ task: "mail.sweep", match: "*/2 * * * *", options: { maxAttempts: 1 } }]
        : [],
    ),
    logger,
    preset,
  });
  return { stop: () => runner.stop(), gone: runner.promise };
}

/** Runs every job that is due now, then returns: for tests and the demo. */
export async function runDueJobs(): Promise<void> {
  await runOnce({ pgPool: pool(), taskList: tasks(), noHandleSignals: true, logger, preset });
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const worker = await startWorker();
  log.info("worker ready");
  process.send?.("ready");
  const end = () => void worker.stop().catch(() => undefined);
  process.once("SIGTERM", end);
  process.once("SIGINT", end);
  await worker.gone;
  await closePool();
}
