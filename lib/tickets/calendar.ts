import { addDays, civilDayIn, instantAt, isWorkday } from "../base/civil";

/** A site's working time: weekdays worked, hours, holidays, zone. */
export type BusinessCalendar = {
  zone: string;
  workdays: number[];
  opensAt: string;
  closesAt: string;
  holidays: string[];
};

const MAX_DAYS = 400;

/**
 * The instant at which `minutes` of working time have passed since `from`.
 * A day's hours are wall-clock hours of the zone: where the clock is moved, the working day
 * still opens and closes by the wall.
 */
export function addBusinessMinutes(from: Date, minutes: number, cal: BusinessCalendar): Date {
  let left = minutes * 60_000;
  let day = civilDayIn(from, cal.zone);
  let at = from.getTime();
  for (let i = 0; i < MAX_DAYS; i++, day = addDays(day, 1)) {
    if (!isWorkday(day, cal)) continue;
    const opens = instantAt(day, cal.opensAt, cal.zone).getTime();
    const closes = instantAt(day, cal.closesAt, cal.zone).getTime();
    at = Math.max(at, opens);
    if (at >= closes) continue;
    if (at + left <= closes) return new Date(at + left);
    left -= closes - at;
  }
  throw new RangeError("No working day within 400 days: look at the site's calendar.");
}

/** Working minutes between two instants; negative when `to` is before `from`. */
export function businessMinutes(from: Date, to: Date, cal: BusinessCalendar): number {
  if (to < from) return -businessMinutes(to, from, cal);
  let sum = 0;
  const last = civilDayIn(to, cal.zone);
  for (let day = civilDayIn(from, cal.zone), i = 0; day <= last && i < MAX_DAYS; day = addDays(day, 1), i++) {
    if (!isWorkday(day, cal)) continue;
    const opens = Math.max(instantAt(day, cal.opensAt, cal.zone).getTime(), from.getTime());
    const closes = Math.min(instantAt(day, cal.closesAt, cal.zone).getTime(), to.getTime());
    if (closes > opens) sum += closes - opens;
  }
  return Math.round(sum / 60_000);
}
