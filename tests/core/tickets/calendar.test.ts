import { describe, expect, it } from "vitest";
import { addBusinessMinutes, businessMinutes, type BusinessCalendar } from "@/lib/tickets/calendar";

const week = (zone: string, more: Partial<BusinessCalendar> = {}): BusinessCalendar => ({
  zone,
  workdays: [1, 2, 3, 4, 5],
  opensAt: "09:00",
  closesAt: "17:00",
  holidays: [],
  ...more,
});
const night = (zone: string) =>
  week(zone, { workdays: [1, 2, 3, 4, 5, 6, 7], opensAt: "00:00", closesAt: "06:00" });

/**
 * Both clock changes of 2026 in three zones (source: IANA tz database, files europe, northamerica,
 * australasia): EU last Sundays of March and October at 01:00 UTC; US second Sunday of March, first
 * of November at 02:00 local; Sydney first Sundays of April and October at 02:00 standard time.
 * The instants below are written out in UTC by hand from those rules.
 */
const CHANGES: [zone: string, fridayAt16: string, mondayAt10: string][] = [
  ["Europe/Berlin", "2026-03-27T15:00Z", "2026-03-30T08:00Z"],
  ["Europe/Berlin", "2026-10-23T14:00Z", "2026-10-26T09:00Z"],
  ["America/New_York", "2026-03-06T21:00Z", "2026-03-09T14:00Z"],
  ["America/New_York", "2026-10-30T20:00Z", "2026-11-02T15:00Z"],
  ["Australia/Sydney", "2026-04-03T05:00Z", "2026-04-06T00:00Z"],
  ["Australia/Sydney", "2026-10-02T06:00Z", "2026-10-04T23:00Z"],
];

describe("working time over a change of the clock", () => {
  it.each(CHANGES)("%s: two hours from Friday 16:00 (%s) end Monday 10:00 by the wall", (zone, from, to) => {
    expect(addBusinessMinutes(new Date(from), 120, week(zone)).toISOString()).toBe(
      new Date(to).toISOString(),
    );
    expect(businessMinutes(new Date(from), new Date(to), week(zone))).toBe(120);
  });

  /** A night shift from 00:00 to 06:00 has five or seven hours when the clock is moved within it. */
  const NIGHTS: [zone: string, midnight: string, hours: number][] = [
    ["Europe/Berlin", "2026-03-28T23:00Z", 5],
    ["Europe/Berlin", "2026-10-24T22:00Z", 7],
    ["America/New_York", "2026-03-08T05:00Z", 5],
    ["America/New_York", "2026-11-01T04:00Z", 7],
    ["Australia/Sydney", "2026-10-03T14:00Z", 5],
    ["Australia/Sydney", "2026-04-04T13:00Z", 7],
  ];
  it.each(NIGHTS)("%s: the night that begins %s has %i hours", (zone, midnight, hours) => {
    const from = new Date(midnight);
    expect(businessMinutes(from, new Date(from.getTime() + 12 * 3_600_000), night(zone))).toBe(hours * 60);
    expect(addBusinessMinutes(from, hours * 60, night(zone)).getTime()).toBe(
      from.getTime() + hours * 3_600_000,
    );
    // One minute more is the next night's first.
    const next = addBusinessMinutes(from, hours * 60 + 1, night(zone));
    expect(next.getTime()).toBe(from.getTime() + (hours + 18) * 3_600_000 + 60_000);
  });
});

describe("working time", () => {
  const cal = week("Europe/London", { holidays: ["2026-12-25", "2026-12-28"] });
  it.each([
    ["in hours", "2026-06-03T09:00Z", 60, "2026-06-03T10:00Z"],
    ["to the last minute of the day", "2026-06-03T15:00Z", 60, "2026-06-03T16:00Z"],
    ["before opening", "2026-06-03T03:00Z", 30, "2026-06-03T08:30Z"],
    ["after closing", "2026-06-03T20:00Z", 30, "2026-06-04T08:30Z"],
    ["on a Saturday", "2026-06-06T10:00Z", 1, "2026-06-08T08:01Z"],
    ["over Christmas and its Monday", "2026-12-24T16:30Z", 60, "2026-12-29T09:30Z"],
    ["nothing at all", "2026-06-03T09:00Z", 0, "2026-06-03T09:00Z"],
  ])("%s", (_what, from, minutes, to) => {
    expect(addBusinessMinutes(new Date(from), minutes, cal).toISOString()).toBe(new Date(to).toISOString());
  });
  it("is counted back to front as it is counted forth", () => {
    const [a, b] = [new Date("2026-06-01T09:00Z"), new Date("2026-06-10T12:00Z")];
    expect(businessMinutes(b, a, cal)).toBe(-businessMinutes(a, b, cal));
    expect(businessMinutes(a, addBusinessMinutes(a, 1234, cal), cal)).toBe(1234);
  });
  it("tells a calendar without a working day", () => {
    expect(() => addBusinessMinutes(new Date("2026-06-01T09:00Z"), 1, { ...cal, workdays: [] })).toThrow(
      /calendar/,
    );
  });
});
