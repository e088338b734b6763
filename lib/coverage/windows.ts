import {
  addDays,
  addPeriod,
  daysBetween,
  earlierDay,
  laterDay,
  rollToWorkday,
  type DaySpan,
  type Workweek,
} from "../base/civil";
import { periodWords } from "../base/period";
import { showDay } from "../base/show";
import type { ClauseFact, ClauseKind, CoverWindow, PartFact, SaleFact } from "./schema";

const byNumber = new Intl.Collator("en", { numeric: true });

/**
 * The clause of a kind that applies: one that names the part's own family; else the one of the
 * system it was sold in; else one for every part. Among those, a named condition comes first.
 */
export function clauseFor(
  clauses: readonly ClauseFact[],
  kind: ClauseKind,
  part: Pick<PartFact, "family" | "within">,
  condition: string,
): ClauseFact | null {
  const fits = clauses
    .filter((c) => c.kind === kind && (c.condition === null || c.condition === condition))
    .sort(
      (a, b) =>
        Number(a.condition === null) - Number(b.condition === null) || byNumber.compare(a.number, b.number),
    );
  const of = (family: string | null) =>
    family === null ? undefined : fits.find((c) => c.families.includes(family));
  return of(part.family) ?? of(part.within) ?? fits.find((c) => c.families.length === 0) ?? null;
}

const BASIS = {
  delivered: { day: "deliveredOn", word: "delivered", proof: "there is no proof of delivery" },
  invoiced: { day: "invoicedOn", word: "invoiced", proof: "no invoice day is known" },
  installed: { day: "installedOn", word: "set up", proof: "no day of setting it up is known" },
} as const;

/** The fact of the sale that a clause's period runs from, when it is not the ship day. */
export function basisFact(clause: ClauseFact): (typeof BASIS)[keyof typeof BASIS]["day"] | null {
  const { startBasis } = clause;
  return startBasis === null || startBasis === "shipped" ? null : BASIS[startBasis].day;
}

/** The day a clause's period runs from, and the words for it. */
export function startOf(clause: ClauseFact, sale: SaleFact): { day: string; words: string } {
  const shipped = `shipped ${showDay(sale.shippedOn)}`;
  const { startBasis } = clause;
  if (startBasis === null || startBasis === "shipped") return { day: sale.shippedOn, words: shipped };
  const { day, word, proof } = BASIS[startBasis];
  const known = sale[day];
  if (known) return { day: known, words: `${word} ${showDay(known)}` };
  const days = clause.deliveryGraceDays;
  if (days === 0) return { day: sale.shippedOn, words: `${shipped}, as ${proof}` };
  return {
    day: addDays(sale.shippedOn, days),
    words: `${shipped} and taken as ${word} ${days} ${days === 1 ? "day" : "days"} later, as ${proof}`,
  };
}

/**
 * The end with its pauses added: whole days, both ends counted, overlaps once. A pause counts as
 * far as it lies between the start and the end reached by then, so the order they are given in
 * makes no difference, and one that begins after the end cannot bring cover back.
 */
export function endWithPauses(start: string, end: string, pauses: readonly DaySpan[]): string {
  let reached = addDays(start, -1);
  let last = end;
  for (const pause of [...pauses].sort((a, b) => (a.from < b.from ? -1 : a.from > b.from ? 1 : 0))) {
    const from = laterDay(pause.from, addDays(reached, 1));
    if (from > last || from > pause.to) continue;
    last = addDays(last, daysBetween(from, pause.to) + 1);
    reached = laterDay(reached, pause.to);
  }
  return last;
}

export type Given = {
  clause: ClauseFact | null;
  on: string;
  noticedOn: string | null;
  /** The last day for the written notice; none: the clause sets no limit, or needs no notice. */
  noticeBy: string | null;
  state: "unnamed" | "first_buyer" | "notice_open" | "not_noticed" | "noticed" | "follows";
};

/** What the terms say of each time a unit was given on, as far as it is known on the claim's day. */
export function givenOn(
  sale: SaleFact,
  clauses: readonly ClauseFact[],
  part: PartFact,
  week: Workweek,
  claimOn?: string,
): Given[] {
  const clause = clauseFor(clauses, "transfer", part, sale.condition);
  const rule = clause?.transferRule ?? null;
  return sale.transfers.map(({ on, noticedOn }) => {
    const limit =
      clause?.period && rule === "with_notice" ? addPeriod(on, clause.period, clause.dayRule) : null;
    const noticeBy = limit && clause?.rolls ? rollToWorkday(limit, week) : limit;
    const inTime = noticedOn !== null && (noticeBy === null || noticedOn <= noticeBy);
    const open = noticedOn === null && (noticeBy === null || claimOn === undefined || claimOn <= noticeBy);
    const state =
      rule === null
        ? "unnamed"
        : rule === "first_buyer"
          ? "first_buyer"
          : rule === "follows_serial"
            ? "follows"
            : inTime
              ? "noticed"
              : open
                ? "notice_open"
                : "not_noticed";
    return { clause, on, noticedOn, noticeBy, state };
  });
}

/** True where cover does not go along (yet). Terms that do not name it end nothing by themselves. */
export const endsCover = (g: Given): boolean =>
  g.state === "first_buyer" || g.state === "not_noticed" || g.state === "notice_open";

/**
 * Windows of cover of one unit or part under a sale: the DOA window and the cover window.
 * The remainder runs from the first sale, the floor of a replaced part from its last swap; which of
 * the two counts, the replaced-part clause says. Pauses are added after the clamp. Cover never rolls
 * to a working day; the DOA limit (a limit to act) does. Where a unit was given on and its terms do
 * not let cover go along, the day it was given on is the last.
 */
export function windowsFor(
  sale: SaleFact,
  clauses: readonly ClauseFact[],
  part: PartFact,
  week: Workweek,
): CoverWindow[] {
  if (!part.originKnown) return [];
  const found: CoverWindow[] = [];
  const cut = givenOn(sale, clauses, part, week).find(endsCover)?.on ?? null;
  const cutTo = (lastOn: string) => (cut !== null && cut < lastOn ? cut : lastOn);
  const swappedOn = part.swaps.at(-1) ?? null;
  const window = (
    clause: ClauseFact,
    kind: "doa" | "cover",
    firstOn: string,
    end: string,
    byFloor: boolean,
    startOn: string,
    startWords: string,
  ) => {
    const lastOn = cutTo(end);
    if (firstOn > lastOn) return;
    found.push({
      clauseId: clause.id,
      clauseNumber: clause.number,
      clauseTitle: clause.title,
      kind,
      firstOn,
      lastOn,
      byFloor,
      cutOn: lastOn < end ? lastOn : null,
      startOn,
      startWords,
    });
  };
  const doa = clauseFor(clauses, "doa", part, sale.condition);
  if (doa?.period && swappedOn === null) {
    const start = startOf(doa, sale);
    const end = addPeriod(start.day, doa.period, doa.dayRule);
    const lastOn = doa.rolls ? rollToWorkday(end, week) : end;
    window(doa, "doa", earlierDay(sale.shippedOn, lastOn), lastOn, false, start.day, start.words);
  }
  const cover = clauseFor(clauses, "cover", part, sale.condition);
  if (cover?.period) {
    const start = startOf(cover, sale);
    const plain = addPeriod(start.day, cover.period, cover.dayRule);
    const remainder = cover.clockStops ? endWithPauses(start.day, plain, sale.pauses) : plain;
    const replaced = swappedOn === null ? null : clauseFor(clauses, "replaced_part", part, sale.condition);
    const floor =
      swappedOn !== null && replaced?.period && replaced.replacedRule !== "remainder"
        ? addPeriod(swappedOn, replaced.period, replaced.dayRule)
        : null;
    const byFloor = floor !== null && (replaced?.replacedRule === "floor" || floor > remainder);
    const startWords = `${start.words}, ${periodWords(cover.period)}`;
    const end = byFloor ? floor : remainder;
    window(cover, "cover", swappedOn ?? earlierDay(sale.shippedOn, end), end, byFloor, start.day, startWords);
  }
  return found;
}
