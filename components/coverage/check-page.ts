import {
  checkSentence,
  fits,
  leftWords,
  SHOWN_ROWS,
  stateWords,
  CHECK_FILTERS,
  type CheckAnswer,
  type CheckFilter,
  type CheckState,
  type ReadLines,
} from "@/lib/coverage/check";
import { showDay, showDayShort } from "@/lib/base/show";
import type { CheckPage } from "./check-form";
import type { CheckRow } from "./check-table";
import type { GlyphState } from "./glyph";

const GLYPH: Record<CheckState, GlyphState> = {
  covered: "covered",
  doa: "doa",
  ended: "ended",
  later: "none",
  none: "person",
  not_found: "none",
};

const FILTER_WORDS: Record<CheckFilter, (n: string) => string> = {
  all: (n) => `all ${n}`,
  doubts: (n) => `the ${n} with a doubt`,
  covered: (n) => `the ${n} covered`,
  not_covered: (n) => `the ${n} not covered`,
  not_found: (n) => `the ${n} not found`,
};

function row(a: CheckAnswer, staff: boolean): CheckRow {
  const { unit } = a;
  return {
    line: a.line,
    given: a.given,
    serial: unit?.serial ?? null,
    isPart: unit?.isPart ?? false,
    href: unit ? `/${staff ? "ledger" : "equipment"}/${encodeURIComponent(unit.serial)}` : null,
    modelName: unit?.modelName ?? "",
    within: unit?.systemSerial ? `${unit.slot ?? "in"} of ${unit.systemSerial}` : "",
    accountName: unit?.accountName ?? null,
    glyph: GLYPH[a.state],
    words: stateWords(a),
    lastOn: a.lastOn ? showDayShort(a.lastOn) : null,
    clause: a.clause,
    rma: a.rma
      ? { number: a.rma.number, href: staff ? `/desk/${a.rma.ticketNumber}` : `/rma/${a.rma.number}` }
      : null,
    doubts: a.doubts,
    unitId: a.startable ? unit!.unitId : null,
  };
}

/** One check as its page shows it: the sentence, the filters that hold a line, and the first rows of one. */
export function checkPage(of: {
  day: string;
  read: ReadLines;
  answers: readonly CheckAnswer[];
  show: CheckFilter;
  chosen: string[];
  staff: boolean;
  formId: string;
  problem: CheckPage["problem"];
  typed: Record<string, string>;
}): CheckPage {
  const { answers, read } = of;
  const shown = answers.filter((a) => fits(a, of.show));
  const figure = (n: number) => n.toLocaleString("en-US");
  const left = leftWords(read.left);
  return {
    day: of.day,
    dayWords: showDay(of.day),
    text: read.text,
    sentence: checkSentence(answers, of.day, of.staff ? "in the ledger" : "among your equipment"),
    notes: [
      ...(left ? [left] : []),
      ...(read.column ? [`The serials were read from the column “${read.column}”.`] : []),
    ],
    filters: CHECK_FILTERS.map((filter) => ({
      filter,
      n: answers.filter((a) => fits(a, filter)).length,
    }))
      .filter(({ filter, n }) => filter === "all" || (n > 0 && n < answers.length))
      .map(({ filter, n }) => ({ filter, words: FILTER_WORDS[filter](figure(n)) })),
    show: of.show,
    rows: shown.slice(0, SHOWN_ROWS).map((a) => row(a, of.staff)),
    more: Math.max(0, shown.length - SHOWN_ROWS),
    total: answers.length,
    chosen: of.chosen,
    startable: answers.filter((a) => a.startable).length,
    formId: of.formId,
    problem: of.problem,
    typed: of.typed,
  };
}
