import { addDays, isDay } from "../base/civil";
import { ok, refuse, type Result } from "../base/result";

export type Holiday = { day: string; name: string };

const MOST = 400;
const LINES = 5_000;
const YEARS = { first: 2000, last: 2100 };

/**
 * Holidays as people have them: lines of day and name (comma, semicolon or tab between), or an
 * iCalendar file (RFC 5545: folded lines, all-day events, an end that is not counted). All of it is
 * read or none: a list with a wrong day in it would move limits that people rely on.
 */
export function readHolidays(text: string): Result<Holiday[]> {
  const no = (why: string[]) =>
    refuse("invalid", why.length === 1 ? why[0]! : `${why.length} lines cannot be read.`, {
      fields: { holidays: why },
    });
  const bare = text.replace(/^\uFEFF/, "");
  if (bare.trim() === "") return no(["Paste the holidays, or choose a file."]);
  if (/\u0000/.test(bare)) return no(["This is no text file. Save the calendar as text, CSV or .ics."]);
  const lines = bare.split(/\r\n|\r|\n/);
  if (lines.length > LINES)
    return no([`More than ${LINES.toLocaleString("en-US")} lines: this is no list of holidays.`]);
  const read = /^BEGIN:VCALENDAR/im.test(bare) ? fromCalendar(lines) : fromLines(lines);
  if (!read.ok) return no(read.why);
  const byDay = new Map<string, string>();
  for (const { day, name } of read.value) if (!byDay.has(day)) byDay.set(day, name);
  if (byDay.size === 0) return no(["There is no holiday in it."]);
  if (byDay.size > MOST) return no([`${byDay.size} holidays are more than a site has; at most ${MOST}.`]);
  return ok([...byDay].map(([day, name]) => ({ day, name })).sort((a, b) => (a.day < b.day ? -1 : 1)));
}

type Read = { ok: true; value: Holiday[] } | { ok: false; why: string[] };
const TOLD = 10;

function wrongDay(day: string): string | null {
  if (!isDay(day)) return `“${day.slice(0, 30)}” is no day. Write it as 2026-12-25`;
  const year = Number(day.slice(0, 4));
  return year < YEARS.first || year > YEARS.last
    ? `${day} lies outside ${YEARS.first} to ${YEARS.last}`
    : null;
}

function fromLines(lines: string[]): Read {
  const value: Holiday[] = [];
  const why: string[] = [];
  let last = 0;
  lines.forEach((line, i) => {
    if (line.trim() === "" || line.trimStart().startsWith("#")) return;
    const [first, ...rest] = line.split(/[,;\t]/).map((c) => c.trim().replace(/^"(.*)"$/, "$1"));
    // A head such as "day, name" is no holiday and no mistake.
    if (value.length === 0 && why.length === 0 && last === 0 && /^(day|date)$/i.test(first!))
      return void (last = 1);
    last = 1;
    const wrong = wrongDay(first!);
    const name = rest.filter(Boolean).join(", ");
    if (wrong) why.push(`Line ${i + 1}: ${wrong}.`);
    else if (name === "")
      why.push(`Line ${i + 1}: ${first} has no name. Write what is celebrated after a comma.`);
    else value.push({ day: first!, name: name.slice(0, 80) });
  });
  return why.length > 0 ? { ok: false, why: why.slice(0, TOLD) } : { ok: true, value };
}

function fromCalendar(lines: string[]): Read {
  // RFC 5545 3.1: a line that begins with a blank goes on from the one before.
  const whole: string[] = [];
  for (const line of lines) {
    if (/^[ \t]/.test(line) && whole.length > 0) whole[whole.length - 1] += line.slice(1);
    else whole.push(line);
  }
  const value: Holiday[] = [];
  const why: string[] = [];
  let event: { start?: string; end?: string; name?: string } | null = null;
  const day = (v: string) => v.trim().replace(/^(\d{4})(\d{2})(\d{2})(T.*)?$/, "$1-$2-$3");
  for (const line of whole) {
    const [, name = "", content = ""] = /^([A-Z-]+)(?:;[^:]*)?:(.*)$/i.exec(line) ?? [];
    const key = name.toUpperCase();
    if (key === "BEGIN" && /^VEVENT$/i.test(content)) event = {};
    else if (event && key === "DTSTART") event.start = day(content);
    else if (event && key === "DTEND") event.end = day(content);
    else if (event && key === "SUMMARY")
      event.name = content
        .replace(/\\([,;\\])/g, "$1")
        .replace(/\\n/gi, " ")
        .trim();
    else if (event && key === "END" && /^VEVENT$/i.test(content)) {
      const { start = "", end, name = "" } = event;
      event = null;
      const wrong = wrongDay(start) ?? (end === undefined ? null : wrongDay(end));
      const told = name || "An event without a name";
      if (wrong) why.push(`${told}: ${wrong}.`);
      else if (name === "") why.push(`The event of ${start} has no name.`);
      else if (end !== undefined && end < start) why.push(`${told}: it ends on ${end}, before it starts.`);
      else
        for (
          let on = start, n = 0;
          n === 0 || (end !== undefined && on < end && n < 31);
          on = addDays(on, 1), n++
        )
          value.push({ day: on, name: name.slice(0, 80) });
    }
  }
  return why.length > 0 ? { ok: false, why: why.slice(0, TOLD) } : { ok: true, value };
}
