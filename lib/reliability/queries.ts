import { sql } from "drizzle-orm";
import { read, type Tx } from "@/db/client";
import { permit } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { FAMILIES, type Condition } from "@/lib/ledger/schema";
import { lives } from "./lives.io";
import { ratesFrom, standsOut, survivalFrom, monthsShown, type ConditionLives } from "./rules";
import {
  RatesFilter,
  type LifeSums,
  type RatesChoices,
  type RatesView,
  type SurvivalView,
  type TriangleView,
} from "./schema";
import { DAYS_PER_MONTH, triangle as triangleOf, type CohortCount } from "./triangle";

const today = (ctx: Ctx) => civilDayIn(ctx.now, env().MENDBAY_ZONE);

/** Asks who reads, and reads the filter. */
function asked(ctx: Ctx, raw: unknown): Result<RatesFilter> {
  const may = permit(ctx, "rates.read");
  return may.ok ? parse(RatesFilter, raw) : may;
}

/**
 * Reads lives. They pass through every part ever sold: compiling such a query costs more than it saves,
 * and sorting on disk the same. Both settings end with the transaction.
 */
function readLives<T>(ctx: Ctx, run: (tx: Tx) => Promise<T>): Promise<T> {
  return read(ctx, async (tx) => {
    await tx.execute(sql`select set_config('jit', 'off', true), set_config('work_mem', '64MB', true)`);
    return run(tx);
  });
}

/** Failures over exposure, by part family or by model, as of today. */
export async function rates(ctx: Ctx, raw: unknown): Promise<Result<RatesView>> {
  const filter = asked(ctx, raw);
  if (!filter.ok) return filter;
  const asOf = today(ctx);
  const sums = await readLives(ctx, async (tx) => {
    const found = await tx.execute<LifeSums>(sql`
      with ${lives(filter.value, asOf, env().MENDBAY_ZONE)}
      select family, model_code as "modelCode", model_name as "modelName", condition,
        count(*)::int as units, sum(days)::float8 as days,
        (count(*) filter (where failed))::int as failures,
        (count(*) filter (where last_on = ${asOf}::date and not failed and not dead_on_arrival))::int as "inView",
        (count(*) filter (where open_on <= last_on and not failed and not dead_on_arrival))::int as open,
        sum(judged)::int as judged, sum(no_fault_found)::int as "noFaultFound",
        (count(*) filter (where doa_on <= ${asOf}::date))::int as arrived,
        (count(*) filter (where doa_on <= ${asOf}::date and confirmed_on <= doa_on))::int as "arrivedDead",
        mode() within group (order by cover_on - start_on) as "coverDays"
      from life group by family, model_code, model_name, condition
      order by family, model_code, condition`);
    return found.rows;
  });
  return ok(ratesFrom(sums, filter.value, asOf));
}

/** Share still working by age, of one part family, new and refurbished apart. */
export async function survival(ctx: Ctx, raw: unknown): Promise<Result<SurvivalView>> {
  const filter = asked(ctx, raw);
  if (!filter.ok) return filter;
  const asOf = today(ctx);
  const rows = await readLives(ctx, async (tx) => {
    const found = await tx.execute<{
      condition: Condition;
      time: number;
      failed: boolean;
      count: number;
      coverDays: number | null;
    }>(sql`
      with ${lives(filter.value, asOf, env().MENDBAY_ZONE)}, own as (
        select * from life where family = ${filter.value.family} and days > 0
      ), most as (
        select condition, mode() within group (order by cover_on - start_on) as cover_days from own group by condition
      )
      select own.condition, days as time, failed, count(*)::int as count, max(cover_days) as "coverDays"
      from own join most using (condition) group by own.condition, days, failed
      order by own.condition, days, failed`);
    return found.rows;
  });
  const groups = new Map<Condition, ConditionLives>();
  for (const { condition, coverDays, ...life } of rows) {
    const group = groups.get(condition) ?? { condition, lives: [], coverDays };
    group.lives.push(life);
    groups.set(condition, group);
  }
  return ok(survivalFrom(filter.value.family, asOf, [...groups.values()]));
}

/** Ship month against months in service, of one part family, for the last twelve months. */
export async function triangle(ctx: Ctx, raw: unknown): Promise<Result<TriangleView>> {
  const filter = asked(ctx, raw);
  if (!filter.ok) return filter;
  const asOf = today(ctx);
  const { family } = filter.value;
  const months = monthsShown(asOf);
  const all = sql`with ${lives(filter.value, asOf, env().MENDBAY_ZONE)}`;
  return readLives(ctx, async (tx) => {
    const counts = await tx.execute<CohortCount>(sql`
      ${all}
      select to_char(start_on, 'YYYY-MM') as month, ceil(days / ${DAYS_PER_MONTH}::float8)::int as ended,
        (count(*) filter (where failed))::int as failed, count(*)::int as count
      from life where family = ${family} and start_on >= ${`${months[0]}-01`}::date
      group by 1, 2 order by 1, 2`);
    const cohorts = triangleOf(counts.rows, asOf, months.length);
    const odd = standsOut(cohorts);
    if (!odd) return ok({ family, asOf, cohorts, standsOut: null });
    const lots = await tx.execute<{ code: string; units: number }>(sql`
      ${all}
      select lot.code, count(*)::int as units from life join lot on lot.id = life.lot_id
      where family = ${family} and to_char(start_on, 'YYYY-MM') = ${odd.month}
      group by lot.code order by 2 desc, 1 limit 1`);
    const of = cohorts.find((c) => c.month === odd.month)!.units;
    const lot = lots.rows[0] ? { ...lots.rows[0], of } : null;
    return ok({ family, asOf, cohorts, standsOut: { ...odd, lot } });
  });
}

/** What the sentence of filters may choose from. */
export async function ratesChoices(ctx: Ctx): Promise<Result<RatesChoices>> {
  const may = permit(ctx, "rates.read");
  if (!may.ok) return may;
  return read(ctx, async (tx) => {
    const found = await tx.execute<RatesChoices>(sql`
      select
        (select coalesce(jsonb_agg(jsonb_build_object('code', code, 'name', name) order by name, code), '[]')
         from model m where kind = 'system') as systems,
        (select coalesce(jsonb_agg(distinct m.family), '[]') from model m) as families,
        (select case when min(shipped_on) is null then null
           else jsonb_build_object('first', to_char(min(shipped_on), 'YYYY-MM'), 'last', to_char(max(shipped_on), 'YYYY-MM'))
         end from sale_line) as months`);
    const row = found.rows[0]!;
    return ok({ ...row, families: FAMILIES.filter((f) => row.families.includes(f)) });
  });
}
