import { describe, expect, it } from "vitest";
import { readHolidays } from "@/lib/ledger/holidays";

const days = (text: string) => {
  const read = readHolidays(text);
  return read.ok ? read.value.map((h) => `${h.day} ${h.name}`) : read.refusal.fields?.holidays;
};

describe("a list of holidays", () => {
  it.each([
    ["comma", "2026-12-25, Christmas Day\n2026-12-26, Boxing Day"],
    [
      "semicolon, quotes, a head",
      'day;name\r\n"2026-12-25";"Christmas Day"\r\n\r\n2026-12-26;Boxing Day\r\n',
    ],
    [
      "tab, the mark of a text file, a remark",
      "\uFEFF# ours\n2026-12-25\tChristmas Day\n2026-12-26\tBoxing Day",
    ],
    ["out of order and twice", "2026-12-26,Boxing Day\n2026-12-25,Christmas Day\n2026-12-25,Again"],
  ])("with %s is read, in order, each day once", (_how, text) =>
    expect(days(text)).toEqual(["2026-12-25 Christmas Day", "2026-12-26 Boxing Day"]),
  );

  // RFC 5545: 3.1 folding, 3.3.4 DATE, 3.6.1 VEVENT with an end that is not counted.
  it("as iCalendar is read: folded lines, days without a time, an end that is not counted", () => {
    const ics = [
      "BEGIN:VCALENDAR",
      "VERSION:2.0",
      "BEGIN:VEVENT",
      "DTSTART;VALUE=DATE:20261225",
      "DTEND;VALUE=DATE:20261227",
      "SUMMARY:Christmas\\, and the da",
      " y after",
      "END:VEVENT",
      "BEGIN:VEVENT",
      "DTSTART;VALUE=DATE:20270101",
      "SUMMARY:New Year",
      "END:VEVENT",
      "END:VCALENDAR",
    ].join("\r\n");
    expect(days(ics)).toEqual([
      "2026-12-25 Christmas, and the day after",
      "2026-12-26 Christmas, and the day after",
      "2027-01-01 New Year",
    ]);
  });

  it.each([
    ["", ["Paste the holidays, or choose a file."]],
    ["2026-02-30, No such day", ["Line 1: “2026-02-30” is no day. Write it as 2026-12-25."]],
    ["25.12.2026, Christmas", ["Line 1: “25.12.2026” is no day. Write it as 2026-12-25."]],
    [
      "2026-12-25, Christmas\nhello\n2026-12-26",
      [
        "Line 2: “hello” is no day. Write it as 2026-12-25.",
        "Line 3: 2026-12-26 has no name. Write what is celebrated after a comma.",
      ],
    ],
    ["1066-10-14, Hastings", ["Line 1: 1066-10-14 lies outside 2000 to 2100."]],
    ["PK\u0003\u0004\u0000\u0000", ["This is no text file. Save the calendar as text, CSV or .ics."]],
    ["BEGIN:VCALENDAR\nEND:VCALENDAR", ["There is no holiday in it."]],
    [
      "BEGIN:VCALENDAR\nBEGIN:VEVENT\nDTSTART:20261225\nDTEND:20261224\nSUMMARY:Christmas\nEND:VEVENT\nEND:VCALENDAR",
      ["Christmas: it ends on 2026-12-24, before it starts."],
    ],
  ])("that is nonsense is refused with the reason: %j", (text, why) => expect(days(text)).toEqual(why));

  it("tells the first ten wrong lines and takes none of the right ones", () => {
    const text = ["2026-12-25, Christmas", ...Array.from({ length: 30 }, (_, i) => `nonsense ${i}`)].join(
      "\n",
    );
    expect(days(text)).toHaveLength(10);
  });
});
