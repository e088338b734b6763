/**
 * What a search for look-alikes costs beside one look-up of an exact key, in a ledger of a million units with
 * sparse serials, and how often the unit meant is among its three suggestions. Interleaved, medians; only the
 * ratios mean anything.
 *
 *   npm run bench:serials -- [units]
 */
import { tmpdir } from "node:os";
import { join } from "node:path";
import pg from "pg";
import { migrateDatabase } from "@/db/migrate";
import { closePool } from "@/db/client";
import { alikeKeys } from "@/lib/base/alike";
import { serialKey, serialLoose } from "@/lib/base/serial";
import { jobCtx } from "@/lib/ctx";
import { lookAlikes, unitBySerial } from "@/lib/ledger/queries";
import { ensureDatabase } from "@/lib/standins/databases";
import { removeHome, startPostgres } from "@/lib/standins/postgres";
import { pick, seeded, sparseSerials, withOneError } from "../factories/serials";

const count = Number(process.argv[2] ?? 1_000_000);
const ERRORS = 1000;
const home = join(tmpdir(), `mendbay-bench-${process.pid}`);
const MODEL = "insert into model (code, name, kind, family) values ('M', 'Model', 'part', 'drive')";
const UNITS = `
  insert into unit (id, serial, serial_key, serial_loose, model_id, condition, whereabouts, created_at)
  select gen_random_uuid(), given.serial, given.key, given.loose, (select id from model), 'new', 'customer', now()
  from unnest($1::text[], $2::text[], $3::text[]) as given(serial, key, loose)`;

const median = (list: number[]) => [...list].sort((a, b) => a - b)[Math.floor(list.length / 2)]!;
async function timed<T>(into: number[], run: () => Promise<T>): Promise<T> {
  const from = performance.now();
  const result = await run();
  into.push(performance.now() - from);
  return result;
}

const cluster = await startPostgres({ home, throwaway: true });
const db = new pg.Client({ connectionString: cluster.url("mendbay_bench") });
try {
  await ensureDatabase(cluster, "mendbay_bench");
  const url = cluster.url("mendbay_bench");
  await migrateDatabase(url);
  Object.assign(process.env, {
    DATABASE_URL: url,
    MENDBAY_SECRET: "a secret that only benches know, 32 and more",
  });
  await db.connect();
  const random = seeded(20_261_112);
  const ledger = sparseSerials(random, count);
  await db.query(MODEL);
  for (let from = 0; from < count; from += 50_000) {
    const some = ledger.slice(from, from + 50_000);
    await db.query(UNITS, [some, some.map(serialKey), some.map(serialLoose)]);
  }
  await db.query("vacuum analyze unit");

  const ctx = jobCtx("bench", { now: new Date("2026-11-12T10:00:00Z") });
  const errors = Array.from({ length: ERRORS }, () => {
    const meant = pick(random, ledger);
    return { meant, given: withOneError(random, meant) };
  });
  // The caches of both are warmed by others of the same kind.
  for (let n = 0; n < 100; n++) {
    await unitBySerial(ctx, pick(random, ledger));
    await lookAlikes(ctx, withOneError(random, pick(random, ledger)));
  }
  const exact: number[] = [];
  const alike: number[] = [];
  const keys: number[] = [];
  const places = [0, 0, 0, 0];
  let taken = 0;
  for (const { meant, given } of errors) {
    await timed(exact, () => unitBySerial(ctx, meant));
    const found = await timed(alike, () => lookAlikes(ctx, given));
    keys.push(alikeKeys(given).length);
    const place = found.findIndex((u) => u.serial === meant);
    places[place < 0 ? 3 : place]!++;
    if (await unitBySerial(ctx, given)) taken++;
  }
  const share = (n: number) => `${((n / ERRORS) * 100).toFixed(1)}%`;
  console.log(`${count} units, ${ERRORS} serials with one error; exact look-up 1.0`);
  console.log(`look-alikes ${(median(alike) / median(exact)).toFixed(1)} times the exact look-up (medians)`);
  console.log(`keys        ${median(keys)} in the median, ${Math.max(...keys)} at most`);
  console.log(`first       ${share(places[0]!)} have the unit meant first`);
  console.log(`first three ${share(ERRORS - places[3]!)} have it among three`);
  console.log(`exact hits  ${share(taken)} of the errors are another unit's serial`);
} finally {
  await db.end();
  await closePool();
  await cluster.stop();
  removeHome(home);
}
