/**
 * How long the figures take against the least that any of them could: one GROUP BY over a table in
 * which every life is worked out already. Interleaved, median of five; only the ratios mean anything.
 *
 *   npm run bench:rates -- [parts]
 */
import { tmpdir } from "node:os";
import { join } from "node:path";
import pg from "pg";
import { migrateDatabase } from "@/db/migrate";
import { closePool } from "@/db/client";
import { must } from "@/lib/base/result";
import { jobCtx } from "@/lib/ctx";
import { rates, survival, triangle } from "@/lib/reliability/queries";
import { ratesFrom, survivalFrom } from "@/lib/reliability/rules";
import { RatesFilter, type LifeSums } from "@/lib/reliability/schema";
import { ensureDatabase } from "@/lib/standins/databases";
import { removeHome, startPostgres } from "@/lib/standins/postgres";

const parts = Number(process.argv[2] ?? 300_000);
const PER_SYSTEM = 15;
const home = join(tmpdir(), `mendbay-bench-${process.pid}`);

/** Systems of fifteen parts over two years, a few in a hundred of which came back and were judged. */
const FILL = `
  insert into account (id, code, name, buyer_kind, country, created_at)
    values ('00000000-0000-4000-8000-000000000001', 'A', 'Lowmere Hosting', 'business', 'GB', now());
  insert into site (id, code, name, zone, address_lines, country, workdays, opens_at, closes_at, is_default)
    values ('00000000-0000-4000-8000-000000000002', 'OST', 'Ostwick', 'Europe/London', '{}', 'GB', '{1,2,3,4,5}', '08:00', '17:00', true);
  insert into terms (id, code, name) values ('00000000-0000-4000-8000-000000000003', 'T', 'Terms');
  insert into terms_version (id, terms_id, issue, effective_on, created_at)
    values ('00000000-0000-4000-8000-000000000004', '00000000-0000-4000-8000-000000000003', 1, '2020-01-01', now());
  insert into clause (id, terms_version_id, number, kind, title, sort)
    values ('00000000-0000-4000-8000-000000000005', '00000000-0000-4000-8000-000000000004', '3', 'cover', 'Cover', 1);
  insert into model (code, name, kind, family)
    select 'M' || n, 'Model ' || n, case when n = 0 then 'system' else 'part' end::unit_kind,
      (enum_range(null::family))[case when n = 0 then 1 else 2 + n % 12 end] from generate_series(0, 24) n;
  create temp table made as select n, gen_random_uuid() as unit_id, gen_random_uuid() as place_id,
    date '2024-11-01' + (n / ${PER_SYSTEM + 1} ::bigint * 7919 % 730)::int as shipped, n % ${PER_SYSTEM + 1} as at
    from generate_series(0, $PARTS / ${PER_SYSTEM} * ${PER_SYSTEM + 1} - 1) n;
  create index on made (n);
  insert into unit (id, serial, serial_key, serial_loose, model_id, condition, whereabouts, created_at)
    select unit_id, 'S' || n, 'S' || n, 'S' || n, m.id, case when n % 7 = 0 then 'refurbished' else 'new' end::condition,
      'customer', now() from made join model m on m.code = 'M' || case when at = 0 then 0 else 1 + n % 24 end;
  insert into sale_line (id, unit_id, account_id, order_number, line_key, shipped_on, terms_version_id, condition, buyer_kind, country, created_at)
    select place_id, unit_id, '00000000-0000-4000-8000-000000000001', 'O' || n, 'O' || n, shipped,
      '00000000-0000-4000-8000-000000000004', 'new', 'business', 'GB', now() from made where at = 0;
  insert into installation (id, parent_unit_id, unit_id, slot, sale_line_id, source, from_on, created_at)
    select p.place_id, s.unit_id, p.unit_id, 'S' || p.at, s.place_id, 'as_built', p.shipped, now()
    from made p join made s on s.n = p.n - p.at where p.at > 0;
  insert into cover_window (sale_line_id, account_id, unit_id, installation_id, clause_id, kind, first_on, last_on, engine)
    select s.place_id, '00000000-0000-4000-8000-000000000001', p.unit_id, case when p.at > 0 then p.place_id end,
      '00000000-0000-4000-8000-000000000005', k.kind::window_kind, p.shipped, p.shipped + k.days, 'bench'
    from made p join made s on s.n = p.n - p.at cross join (values ('cover', 1096), ('doa', 30)) k(kind, days);
  create temp table back as select n, unit_id, gen_random_uuid() as id, shipped + 1 + (n::bigint * 31 % 700)::int as claim_on
    from made where n::bigint * 48271 % 100 < 4;
  insert into ticket (id, number, account_id, person_name, person_email, channel, subject, fault_words, received_at, claim_on,
      waiting_on, waiting_for, last_entry_at, last_entry_line, created_at)
    select id, n, '00000000-0000-4000-8000-000000000001', 'A', 'a@lowmere.example', 'mail', 's', 'f', now(), claim_on, 'nobody', '', now(), '', now() from back;
  insert into ticket_unit (id, ticket_id, unit_id, state, created_at) select id, id, unit_id, 'tied', now() from back;
  insert into rma (id, number, ticket_id, account_id, state, remedy, site_id, created_at)
    select id, 'R' || n, id, '00000000-0000-4000-8000-000000000001', 'settled', 'repair', '00000000-0000-4000-8000-000000000002', now() from back;
  insert into rma_line (id, rma_id, account_id, ticket_unit_id, unit_id, remedy, fault_words, state, sort)
    select id, id, '00000000-0000-4000-8000-000000000001', id, unit_id, 'repair', 'f', 'settled', 0 from back;
  insert into bench_test (id, rma_line_id, account_id, unit_id, sheet, sheet_issue, started_at, started_by_name, scan_in, outcome, closed_at)
    select id, id, '00000000-0000-4000-8000-000000000001', unit_id, 's', 1, now(), 'R', 'x',
      case when n % 5 = 0 then 'no_fault_found' else 'fault_confirmed' end::test_outcome, now() from back;
  create table plain_life as select u.model_id, least(730, date '2026-11-12' - m.shipped) as days, b.id is not null as failed
    from made m join unit u on u.id = m.unit_id left join back b on b.n = m.n;
`;
const PLAIN = "select model_id, days, failed, count(*) from plain_life group by 1, 2, 3";

const median = (list: number[]) => [...list].sort((a, b) => a - b)[Math.floor(list.length / 2)]!;
async function timed(run: () => Promise<unknown>): Promise<number> {
  const from = performance.now();
  await run();
  return performance.now() - from;
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
  for (const statement of FILL.replaceAll("$PARTS", String(parts)).split(/;\n/))
    if (statement.trim()) await db.query(statement);
  await db.query("analyze");
  const ctx = jobCtx("bench", { now: new Date("2026-11-12T10:00:00Z") });
  const filter = { family: "drive" };
  const works = {
    plain: () => db.query(PLAIN),
    rates: async () => must(await rates(ctx, filter)),
    survival: async () => must(await survival(ctx, filter)),
    triangle: async () => must(await triangle(ctx, filter)),
  };
  const times: Record<string, number[]> = {};
  for (let round = 0; round < 6; round++)
    for (const [name, work] of Object.entries(works)) {
      const ms = await timed(work);
      // The first round warms the caches of both.
      if (round > 0) (times[name] ??= []).push(ms);
    }
  const base = median(times.plain!);
  const view = must(await rates(ctx, filter));
  console.log(`${view.all.units} parts, ${view.all.failures} failures; plain GROUP BY 1.0`);
  for (const name of ["rates", "survival", "triangle"])
    console.log(`${name.padEnd(9)} ${(median(times[name]!) / base).toFixed(1)} times the plain GROUP BY`);

  // The statistics alone, from sums as the database hands them over.
  const sums: LifeSums[] = Array.from({ length: 500 }, (_, i) => ({
    family: "drive",
    modelCode: `M${i}`,
    modelName: "Model",
    condition: "new",
    units: 2000,
    days: 600_000,
    failures: 40 + i,
    inView: 1900,
    open: 3,
    judged: 60,
    noFaultFound: 9,
    arrived: 1900,
    arrivedDead: 4,
    coverDays: 1096,
  }));
  const lives = Array.from({ length: 1460 }, (_, i) => ({
    time: 1 + (i >> 1),
    failed: i % 2 === 0,
    count: 1 + (i % 9),
  }));
  const stats: number[] = [];
  for (let round = 0; round < 6; round++)
    stats.push(
      await timed(async () => {
        ratesFrom(sums, RatesFilter.parse({ by: "model" }), "2026-11-12");
        survivalFrom("drive", "2026-11-12", [{ condition: "new", lives, coverDays: 1096 }]);
      }),
    );
  console.log(
    `statistics ${((median(stats.slice(1)) / base) * 100).toFixed(1)}% of the plain GROUP BY (500 models)`,
  );
} finally {
  await db.end();
  await closePool();
  await cluster.stop();
  removeHome(home);
}
