import { sql } from "drizzle-orm";
import { expect, test } from "vitest";
import { rawDb, transact } from "@/db/client";
import { ok, refuse } from "@/lib/base/result";
import { jobCtx } from "@/lib/ctx";
import { enqueue } from "@/lib/jobs/commands";
import { freshDb } from "../db";

await freshDb();

const waiting = async () =>
  (await rawDb().execute(sql`select task_identifier, key from graphile_worker.jobs order by id`)).rows;

const outboxId = "4b7d2f2a-58a1-4a5e-9d0e-0a6a52f1c001";

test("a job is there once the transaction that put it in has ended", async () => {
  const done = await transact(jobCtx("test"), async (ctx) => {
    await enqueue(ctx, "mail.send", { outboxId });
    return ok();
  });
  expect(done.ok).toBe(true);
  expect(await waiting()).toEqual([{ task_identifier: "mail.send", key: null }]);
});

test("a refused command leaves no job behind", async () => {
  const before = (await waiting()).length;
  const done = await transact(jobCtx("test"), async (ctx) => {
    await enqueue(ctx, "mail.send", { outboxId });
    return refuse("rule", "No.");
  });
  expect(done.ok).toBe(false);
  expect((await waiting()).length).toBe(before);
});

test("a customer's transaction may put a job in, and one key waits once", async () => {
  const customer = jobCtx("test", {
    actor: {
      kind: "customer",
      userId: outboxId,
      contactId: outboxId,
      accountId: outboxId,
      name: "A customer",
      email: "a@pinnock.example",
    },
  });
  for (let i = 0; i < 2; i++)
    await transact(customer, async (ctx) => {
      await enqueue(ctx, "file.check", { fileId: outboxId }, { key: "once" });
      return ok();
    });
  expect((await waiting()).filter((j) => j.key === "once")).toHaveLength(1);
});

test("a payload of the wrong shape is refused when it is put in", async () => {
  await expect(
    transact(jobCtx("test"), async (ctx) => {
      await enqueue(ctx, "mail.send", { outboxId: "not an id" });
      return ok();
    }),
  ).rejects.toThrow();
});
