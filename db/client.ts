import "server-only";
import { sql } from "drizzle-orm";
import { drizzle, type NodePgDatabase } from "drizzle-orm/node-postgres";
import pg from "pg";
import type { Ctx, TxCtx } from "@/lib/ctx";
import type { Result } from "@/lib/base/result";
import { env } from "@/lib/env";
import { log } from "@/lib/log";

// Civil days stay text: a JavaScript Date would move them by the machine's zone.
pg.types.setTypeParser(pg.types.builtins.DATE, (v) => v);

export type Db = NodePgDatabase;
export type Tx = Parameters<Parameters<Db["transaction"]>[0]>[0];

const kept = globalThis as unknown as { mendbayPool?: pg.Pool };

/** The one pool of this process. */
export function pool(): pg.Pool {
  if (!kept.mendbayPool) {
    kept.mendbayPool = new pg.Pool({ connectionString: env().DATABASE_URL, max: env().PG_POOL_MAX });
    // A connection that breaks is the pool's to replace, or its query's to report; unheard, it would
    // end the process.
    const broke = (broken: Error) => log.warn({ err: broken }, "a database connection broke");
    kept.mendbayPool.on("error", broke);
    kept.mendbayPool.on("connect", (client) => void client.on("error", broke));
  }
  return kept.mendbayPool;
}

/** Ends the pool, so that a process may stop and a test may drop its database. */
export async function closePool(): Promise<void> {
  await kept.mendbayPool?.end();
  kept.mendbayPool = undefined;
}

/**
 * The database without a role set: for the session reader and migrations alone.
 * Everything else goes through read and transact.
 */
export function rawDb(): Db {
  return drizzle(pool());
}

class RolledBack extends Error {
  constructor(readonly result: Result<unknown>) {
    super("rolled back by a refusal");
  }
}

async function takeRole(tx: Tx, ctx: Ctx): Promise<void> {
  // Local to the transaction: a setting on the session would leak to the pool's next user.
  if (ctx.actor.kind === "customer") {
    await tx.execute(
      sql`select set_config('role', 'mendbay_portal', true), set_config('mendbay.account', ${ctx.actor.accountId}, true)`,
    );
  } else if (ctx.actor.kind === "anonymous") {
    await tx.execute(
      sql`select set_config('role', 'mendbay_portal', true), set_config('mendbay.account', '00000000-0000-0000-0000-000000000000', true)`,
    );
  } else {
    await tx.execute(sql`select set_config('role', 'mendbay_staff', true)`);
  }
}

/** Runs reads as the actor's database role. Joins the transaction of `ctx` when there is one. */
export async function read<T>(ctx: Ctx, run: (tx: Tx) => Promise<T>): Promise<T> {
  if (ctx.tx) return run(ctx.tx);
  return rawDb().transaction(
    async (tx) => {
      await takeRole(tx, ctx);
      return run(tx);
    },
    { accessMode: "read only" },
  );
}

/**
 * Runs a command's body in one transaction as the actor's database role, or joins the one
 * in `ctx`. A refusal rolls everything back, also what outer commands wrote: when a joined
 * command's refusal shall not end the outer one, the outer one must ask its rules first.
 */
export async function transact<T>(ctx: Ctx, run: (ctx: TxCtx) => Promise<Result<T>>): Promise<Result<T>> {
  if (ctx.tx) return run(ctx as TxCtx);
  for (let tries = 0; ; tries++) {
    try {
      return await once(ctx, run);
    } catch (thrown) {
      // Two writers waited for each other, and PostgreSQL ended one: it has done nothing, and may try again.
      if (tries >= 2 || !hasCode(thrown, "40P01", "40001")) throw thrown;
    }
  }
}

async function once<T>(ctx: Ctx, run: (ctx: TxCtx) => Promise<Result<T>>): Promise<Result<T>> {
  try {
    return await rawDb().transaction(async (tx) => {
      await takeRole(tx, ctx);
      const result = await run({ ...ctx, tx });
      if (!result.ok) throw new RolledBack(result);
      return result;
    });
  } catch (thrown) {
    if (thrown instanceof RolledBack) return thrown.result as Result<T>;
    throw thrown;
  }
}

function hasCode(thrown: unknown, ...codes: string[]): boolean {
  for (let at: unknown = thrown; at instanceof Error; at = at.cause) {
    if (codes.includes((at as Error & { code?: string }).code ?? "")) return true;
  }
  return false;
}

/** True when `thrown` is PostgreSQL's unique violation of the named constraint or index. */
export function isUniqueViolation(thrown: unknown, constraint: string): boolean {
  for (let at: unknown = thrown; at instanceof Error; at = at.cause) {
    const e = at as Error & { code?: string; constraint?: string };
    if (e.code === "23505" && e.constraint === constraint) return true;
  }
  return false;
}
