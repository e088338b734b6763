import { showClock, showClockSpan, showNear } from "../base/show";
import { civilDayIn } from "../base/civil";
import { businessMinutes, type BusinessCalendar } from "./calendar";

/** How a due clock reads now: what is left in working time, or the day to chase. */
export type ClockView = {
  state: "running" | "over" | "rest";
  share: number;
  words: string;
  late: boolean;
  by: string | null;
};

export function clockView(
  t: {
    dueAt: Date | null;
    clockStartedAt: Date | null;
    chaseOn: string | null;
    waitingOn: string;
    closedAt?: Date | null;
  },
  now: Date,
  cal: BusinessCalendar,
): ClockView {
  const today = civilDayIn(now, cal.zone);
  if (t.closedAt) return { state: "rest", share: 0, words: "closed", late: false, by: null };
  if (!t.dueAt) {
    if (!t.chaseOn) return { state: "rest", share: 0, words: "no clock", late: false, by: null };
    const late = t.chaseOn <= today;
    return {
      state: "rest",
      share: 0,
      words: t.chaseOn === today ? "chase today" : `chase ${showNear(t.chaseOn, today)}`,
      late,
      by: null,
    };
  }
  const left = businessMinutes(now, t.dueAt, cal);
  const total = t.clockStartedAt ? Math.max(1, businessMinutes(t.clockStartedAt, t.dueAt, cal)) : 480;
  const dueDay = civilDayIn(t.dueAt, cal.zone);
  const by = `by ${showClock(t.dueAt, cal.zone)} ${dueDay === today ? "today" : showNear(dueDay, today)}`;
  if (now > t.dueAt)
    return { state: "over", share: 1, words: `${showClockSpan(-left)} over`, late: true, by };
  return {
    state: "running",
    share: Math.min(1, left / total),
    words: left >= 10 * 60 ? `${showNear(dueDay, today)}` : `${showClockSpan(left)} left`,
    late: false,
    by,
  };
}

/** "12 min ago", "1 h ago", "Tue 12": how long ago, for the last column. */
export function agoWords(at: Date, now: Date, zone: string): string {
  const minutes = Math.max(0, Math.round((now.getTime() - at.getTime()) / 60_000));
  if (minutes < 60) return minutes < 1 ? "just now" : `${minutes} min ago`;
  if (minutes < 24 * 60) return `${Math.floor(minutes / 60)} h ago`;
  return showNear(civilDayIn(at, zone), civilDayIn(now, zone));
}
