import { sql } from "drizzle-orm";
import { beforeEach, expect, test, vi } from "vitest";
import { rawDb, transact } from "@/db/client";
import { ok } from "@/lib/base/result";
import { jobCtx } from "@/lib/ctx";
import { enqueue } from "@/lib/jobs/commands";
import { runDueJobs, startWorker } from "@/lib/jobs/worker.io";
import { freshDb } from "../db";

/* The worker between the queue and the handlers. The handlers themselves are tested with their modules. */

const seen = vi.hoisted(() => ({ jobs: [] as unknown[], actors: [] as unknown[], fail: false }));

vi.mock("@/lib/jobs/handlers/registry", () => ({
  HANDLERS: {
    "mail.send": async () => ({
      handle: async (ctx: { actor: unknown }, payload: unknown) => {
        if (seen.fail) throw new Error("the other side is away");
        seen.actors.push(ctx.actor);
        seen.jobs.push(payload);
      },
    }),
    "mail.parse": () => Promise.reject(new Error("this handler is broken")),
  },
}));

await freshDb();

beforeEach(async () => {
  Object.assign(seen, { jobs: [], actors: [], fail: false });
  await rawDb().execute(sql`delete from graphile_worker._private_jobs`);
});

const idOf = (n: number) => `4b7d2f2a-58a1-4a5e-9d0e-0a6a52f1c${String(n).padStart(3, "0")}`;

const put = (n: number, at?: Date) =>
  transact(jobCtx("test"), async (ctx) => {
    await enqueue(ctx, "mail.send", { outboxId: idOf(n) }, { at });
    return ok();
  });

const waiting = async () =>
  (
    await rawDb().execute<{ task: string; attempts: number; last_error: string | null; later: boolean }>(
      sql`select task_identifier as task, attempts, last_error, run_at > now() as later from graphile_worker.jobs order by id`,
    )
  ).rows;

test("a job runs once, as a job, with its payload, and is gone", async () => {
  await put(1);
  await runDueJobs();
  await runDueJobs();
  expect(seen.jobs).toEqual([{ outboxId: idOf(1) }]);
  expect(seen.actors).toEqual([{ kind: "job", name: "mail.send" }]);
  expect(await waiting()).toEqual([]);
});

test("a job that fails waits for a later try and says why", async () => {
  seen.fail = true;
  await put(2);
  await runDueJobs();
  expect(await waiting()).toEqual([
    { task: "mail.send", attempts: 1, last_error: "the other side is away", later: true },
  ]);
});

test("a broken handler stops its own jobs and no other", async () => {
  await transact(jobCtx("test"), async (ctx) => {
    await enqueue(ctx, "mail.parse", { rawMailId: idOf(3) });
    return ok();
  });
  await put(4);
  await runDueJobs();
  expect(seen.jobs).toEqual([{ outboxId: idOf(4) }]);
  expect((await waiting()).map((j) => [j.task, j.attempts])).toEqual([["mail.parse", 1]]);
});

test("how a job went is written before the run is over, however slow the database", async () => {
  // The database itself is slow here, so that a run which does not wait is always caught.
  await rawDb().execute(sql`
    create function slow_write() returns trigger language plpgsql as
      $$ begin perform pg_sleep(0.3); return coalesce(new, old); end $$`);
  await rawDb().execute(sql`
    create trigger slow_write before update or delete on graphile_worker._private_jobs
      for each row execute function slow_write()`);
  try {
    await put(6);
    await runDueJobs();
    expect(await waiting()).toEqual([]);
    seen.fail = true;
    await put(7);
    await runDueJobs();
    expect((await waiting()).map((j) => j.last_error)).toEqual(["the other side is away"]);
  } finally {
    await rawDb().execute(sql`drop function slow_write() cascade`);
  }
});

test("a job for later is left alone", async () => {
  await put(5, new Date("2999-01-01T00:00:00Z"));
  await runDueJobs();
  expect(seen.jobs).toEqual([]);
  expect((await waiting()).map((j) => j.attempts)).toEqual([0]);
});

test("a payload put in by other means is checked when it is taken out", async () => {
  await rawDb().execute(sql`select graphile_worker.add_job('mail.send', '{"outboxId": "x"}')`);
  await runDueJobs();
  expect(seen.jobs).toEqual([]);
  expect((await waiting())[0]?.attempts).toBe(1);
});

test("two workers on one database do every job once", async () => {
  const workers = [await startWorker(), await startWorker()];
  for (let n = 100; n < 140; n++) await put(n);
  await expect.poll(async () => (await waiting()).length, { timeout: 20_000 }).toBe(0);
  await Promise.all(workers.map((worker) => worker.stop()));
  expect(seen.jobs).toHaveLength(40);
  expect(new Set(seen.jobs.map((job) => JSON.stringify(job))).size).toBe(40);
});
