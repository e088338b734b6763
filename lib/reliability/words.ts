import { addDays, type Day } from "../base/civil";
import { capital, countWord, plural, showMonth } from "../base/show";
import { DAYS_PER_YEAR } from "./exposure";
import type { RateRow } from "./schema";

/** Per 100 unit-years: "7.51", "0.10", "12.7", "<0.01". Never "0.00" for what is not nothing. */
export function per100(rate: number): string {
  const v = rate * 100;
  if (v > 0 && v < 0.005) return "<0.01";
  return v >= 100 ? v.toFixed(0) : v >= 10 ? v.toFixed(1) : v.toFixed(2);
}

/** A share as percent: "under 0.1%", "4.2%", "38%". Never "0.0%" for what is not nothing. */
export function percent(share: number): string {
  const v = share * 100;
  if (v > 0 && v < 0.1) return "under 0.1%";
  return `${v >= 10 || v === 0 ? v.toFixed(0) : v.toFixed(1)}%`;
}

/** "drive, fan and board"; by semicolons where a name has a comma of its own. */
function list(names: string[]): string {
  if (names.length < 2) return names[0] ?? "";
  const comma = names.some((n) => n.includes(",")) ? "; " : ", ";
  return `${names.slice(0, -1).join(comma)}${comma === "; " ? "; " : " "}and ${names.at(-1)}`;
}

/** What the intervals allow to be said. Small samples take no part. */
export function firmGround(rows: readonly RateRow[], all: RateRow): string[] {
  const good = rows.filter((r) => !r.small && r.limits !== null && r.rate !== null);
  const said: string[] = [];
  for (const used of good.filter((r) => r.condition === "refurbished")) {
    const fresh = good.find((r) => r.condition === "new" && base(r) === base(used));
    if (!fresh) continue;
    const name = capital(used.prose.replace(/^refurbished /, ""));
    if (used.limits!.lo > fresh.limits!.hi)
      said.push(`${name}: refurbished ones fail more often than new ones; their intervals do not meet.`);
    else if (used.limits!.hi < fresh.limits!.lo)
      said.push(`${name}: new ones fail more often than refurbished ones; their intervals do not meet.`);
  }
  const parts = good.filter((r) => r.family !== "system");
  if (all.rate !== null && parts.length > 1) {
    const above = parts.filter((r) => r.limits!.lo > all.rate!).map((r) => r.prose);
    const below = parts.filter((r) => r.limits!.hi < all.rate!).map((r) => r.prose);
    if (above.length > 0) said.push(`Above the figure for all parts: ${list(above)}.`);
    const than = above.length > 0 ? "it" : "the figure for all parts";
    if (below.length > 0) said.push(`Below ${than}: ${list(below)}.`);
  }
  return said;
}

const base = (r: RateRow) => r.key.split("|")[0];

/** What the figures cannot say yet, and when to ask again. */
export function notYetFirm(rows: readonly RateRow[], asOf: Day, enoughYears = 200, most = 3): string[] {
  const small = rows.filter((r) => r.small);
  const said = small.slice(0, most).map((r) => {
    if (r.limits === null) return `${capital(r.prose)}: no time in service yet, so there is no rate.`;
    const years =
      r.unitYears < 10
        ? r.unitYears.toFixed(1)
        : Math.round(r.unitYears).toLocaleString("en-US").replace(/,/g, "\u00a0");
    const seen =
      r.failures === 0
        ? `no failure in ${years} unit-years means at most ${per100(r.limits.hi)}, not none`
        : `${countWord(r.failures)} ${plural(r.failures, "failure")} in ${years} unit-years ${plural(r.failures, "fits", "fit")} anything from ${per100(r.limits.lo)} to ${per100(r.limits.hi)}`;
    return `${capital(r.prose)}: ${seen}. ${again(r, asOf, enoughYears)}`;
  });
  const rest = small.length - most;
  if (rest > 0) said.push(`${capital(countWord(rest))} more ${plural(rest, "row is", "rows are")} marked †.`);
  return said;
}

function again(r: RateRow, asOf: Day, enoughYears: number): string {
  if (r.unitYears >= enoughYears) return "There is time enough, but too few failures to place the rate.";
  if (r.inView === 0) return "None is in service under cover now, so this will not grow.";
  const days = Math.ceil(((enoughYears - r.unitYears) / r.inView) * DAYS_PER_YEAR);
  // Past ten years the stock will have changed: a month named so far off would be made up.
  if (days > 3650) return `At the number in service now, ${enoughYears} unit-years are over ten years away.`;
  return `Ask again after ${enoughYears} unit-years, about ${showMonth(addDays(asOf, days))}.`;
}
