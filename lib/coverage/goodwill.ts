import { stringify } from "csv-stringify/sync";
import { z } from "zod";
import { civilDayIn } from "../base/civil";
import { countWord, plural, showMonth } from "../base/show";
import type { GoodwillState, Outcome, Remedy } from "./schema";

/** What of the list is shown. Nothing chosen: what was answered, of all months. */
export const GoodwillFilter = z.object({
  state: z.enum(["asked", "granted", "declined"]).nullable().catch(null).default(null),
  /** Month in which it was asked. */
  month: z
    .string()
    .regex(/^20\d{2}-(0[1-9]|1[0-2])$/)
    .nullable()
    .catch(null)
    .default(null),
  /** The last row of the page before. */
  after: z
    .string()
    .regex(/^20\d{2}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}\.\d{3}Z_[0-9a-f-]{36}$/)
    .nullable()
    .catch(null)
    .default(null),
});
export type GoodwillFilter = z.output<typeof GoodwillFilter>;

export type GoodwillView = {
  id: string;
  state: GoodwillState;
  ticketId: string;
  ticketNumber: number;
  ticketUnitId: string;
  serial: string;
  modelName: string;
  customer: string;
  faultWords: string;
  askedBy: string;
  askedByName: string;
  askedAt: Date;
  askRef: string;
  reason: string;
  wantedRemedy: Remedy;
  answeredByName: string | null;
  answeredAt: Date | null;
  answerRef: string | null;
  answer: string;
  remedy: Remedy | null;
  limitCents: number | null;
  decisionId: string;
};

/** An ask that waits, with the newest decision about its unit: what a manager answers by. */
export type OpenGoodwill = GoodwillView & {
  newest: { id: string; ref: string | null; outcome: Outcome; headline: string; reasons: string[] };
  /** True where the unit was decided again after the ask. */
  changed: boolean;
  /** What this customer was granted before. */
  before: { granted: number; cents: number };
};

export type GoodwillFigures = {
  asked: number;
  waiting: number;
  granted: number;
  declined: number;
  grantedCents: number;
};

export type GoodwillReport = {
  filter: GoodwillFilter;
  /** A person who answers nothing sees what they asked themselves. */
  mine: boolean;
  open: OpenGoodwill[];
  moreOpen: boolean;
  figures: GoodwillFigures;
  rows: GoodwillView[];
  next: string | null;
  /** Months in which something was asked, newest first. */
  months: string[];
};

const times = (n: number) => (n === 1 ? "once" : n === 2 ? "twice" : `${countWord(n)} times`);

/** The figures as a sentence: "In November four were asked, three granted up to 420.00 EUR in all; one declined." */
export function goodwillSentence(
  f: GoodwillFigures,
  at: { month: string | null; mine: boolean; thisYear: string },
): string {
  const name = at.month ? showMonth(`${at.month}-01`) : "";
  const when = at.month ? `In ${at.month.startsWith(at.thisYear) ? name.split(" ")[0] : name}` : "So far";
  if (f.asked === 0) return `${when} ${at.mine ? "you asked for no goodwill" : "no goodwill was asked for"}.`;
  const asked = at.mine
    ? `${when} you asked ${times(f.asked)}`
    : `${when} ${countWord(f.asked)} ${plural(f.asked, "was", "were")} asked`;
  const granted =
    f.granted > 0
      ? `, ${countWord(f.granted)} granted up to ${(f.grantedCents / 100).toFixed(2)} EUR in all`
      : "";
  const rest = [
    f.declined > 0 ? `${countWord(f.declined)} declined` : null,
    f.waiting > 0 ? `${countWord(f.waiting)} ${plural(f.waiting, "waits", "wait")} for an answer` : null,
  ].filter((w) => w !== null);
  return `${asked}${granted}${rest.length > 0 ? `; ${rest.join(", ")}` : ""}.`;
}

/** The list as CSV. Text that a table program would run is escaped; money keeps its cents. */
export function goodwillSheet(rows: readonly GoodwillView[], zone: string): string {
  const lines = rows.map((r) => ({
    asked_on: civilDayIn(r.askedAt, zone),
    ticket: r.ticketNumber,
    serial: r.serial,
    customer: r.customer,
    asked_by: r.askedByName,
    reason: r.reason,
    wanted_remedy: r.wantedRemedy,
    state: r.state,
    answered_on: r.answeredAt ? civilDayIn(r.answeredAt, zone) : null,
    answered_by: r.answeredByName,
    words: r.answer,
    remedy: r.remedy,
    limit_eur: r.limitCents === null ? null : (r.limitCents / 100).toFixed(2),
  }));
  return stringify(lines, {
    header: true,
    columns:
      "asked_on ticket serial customer asked_by reason wanted_remedy state answered_on answered_by words remedy limit_eur".split(
        " ",
      ),
    escape_formulas: true,
    record_delimiter: "windows",
  });
}
