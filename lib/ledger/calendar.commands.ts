import { and, eq, sql } from "drizzle-orm";
import { z } from "zod";
import { holidays, sites } from "@/db/schema/ledger";
import { transact } from "@/db/client";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { enqueue } from "@/lib/jobs/commands";
import { readHolidays } from "./holidays";

const KeepHolidays = z.object({
  holidays: z.string().max(1_000_000, "More than a list of holidays has. Cut it down to the days."),
});

/**
 * Sets the holidays of our site for every year the list names; other years stay as they are. Limits to
 * act follow: kept windows that end about those days are made anew in the background.
 */
export async function keepHolidays(
  ctx: Ctx,
  raw: z.input<typeof KeepHolidays>,
): Promise<Result<{ years: string[]; days: number }>> {
  const may = permit(ctx, "site.write");
  if (!may.ok) return may;
  const input = parse(KeepHolidays, raw);
  if (!input.ok) return input;
  const found = readHolidays(input.value.holidays);
  if (!found.ok) return found;
  const days = found.value;
  const years = [...new Set(days.map((h) => h.day.slice(0, 4)))];
  return transact(ctx, async (ctx) => {
    const [site] = await ctx.tx
      .select({ id: sites.id })
      .from(sites)
      .where(eq(sites.isDefault, true))
      .for("update");
    if (!site) return refuse("rule", "No site is set up yet.");
    const ofYears = and(
      eq(holidays.siteId, site.id),
      sql`to_char(${holidays.day}, 'YYYY') in (${sql.join(
        years.map((y) => sql`${y}`),
        sql`, `,
      )})`,
    );
    const before = await ctx.tx
      .select({ day: holidays.day, name: holidays.name })
      .from(holidays)
      .where(ofYears);
    await ctx.tx.delete(holidays).where(ofYears);
    await ctx.tx.insert(holidays).values(days.map((h) => ({ id: ctx.newId(), siteId: site.id, ...h })));
    await audit(ctx, {
      act: "site.holidays",
      subject: ["site", site.id],
      before: { days: before },
      after: { days },
    });
    const had = new Set(before.map((h) => h.day));
    const has = new Set(days.map((h) => h.day));
    const moved = [...had].filter((d) => !has.has(d)).concat([...has].filter((d) => !had.has(d)));
    if (moved.length > 0) {
      const [from, to] = [moved.reduce((a, b) => (a < b ? a : b)), moved.reduce((a, b) => (a > b ? a : b))];
      await enqueue(ctx, "cover.follow_days", { from, to });
    }
    return ok({ years, days: days.length });
  });
}
