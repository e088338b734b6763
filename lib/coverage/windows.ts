import {
  addDays,
  addPeriod,
  earlierDay,
  laterDay,
  pausedDays,
  rollToWorkday,
  type Workweek,
} from "../base/civil";
import { periodWords } from "../base/period";
import { showDay } from "../base/show";
import type { ClauseFact, CoverWindow, PartFact, SaleFact } from "./schema";

/** The clause of a kind that fits best: a named family before every family, a named condition before any. */
export function clauseFor(
  clauses: readonly ClauseFact[],
  kind: ClauseFact["kind"],
  family: string,
  condition: string,
): ClauseFact | null {
  const fits = clauses.filter(
    (c) =>
      c.kind === kind &&
      (c.families.length === 0 || c.families.includes(family)) &&
      (c.condition === null || c.condition === condition),
  );
  const weight = (c: ClauseFact) => (c.families.length > 0 ? 2 : 0) + (c.condition !== null ? 1 : 0);
  return fits.sort((a, b) => weight(b) - weight(a))[0] ?? null;
}

/** The day a clause's period runs from, and the words for it. */
export function startOf(clause: ClauseFact, sale: SaleFact, part: PartFact): { day: string; words: string } {
  switch (clause.startBasis) {
    case "delivered":
      if (sale.deliveredOn) return { day: sale.deliveredOn, words: `delivered ${showDay(sale.deliveredOn)}` };
      return {
        day: addDays(sale.shippedOn, clause.deliveryGraceDays),
        words: `shipped ${showDay(sale.shippedOn)} and taken as delivered ${clause.deliveryGraceDays} days later, as there is no proof of delivery`,
      };
    case "invoiced":
      if (sale.invoicedOn) return { day: sale.invoicedOn, words: `invoiced ${showDay(sale.invoicedOn)}` };
      break;
    case "installed":
      if (part.swappedOn) return { day: part.swappedOn, words: `fitted ${showDay(part.swappedOn)}` };
      break;
    default:
      break;
  }
  return { day: sale.shippedOn, words: `shipped ${showDay(sale.shippedOn)}` };
}

/**
 * Windows of cover of one unit or part under a sale: the DOA window and the cover window.
 * The remainder runs from the first sale, the floor of a replaced part from its swap; the later
 * counts. Pauses are added after the clamp. Cover never rolls to a working day, the DOA limit
 * (a limit to act) does.
 */
export function windowsFor(
  sale: SaleFact,
  clauses: readonly ClauseFact[],
  part: PartFact,
  week: Workweek,
): CoverWindow[] {
  const found: CoverWindow[] = [];
  const doa = clauseFor(clauses, "doa", part.family, sale.condition);
  if (doa?.period && part.swappedOn === null) {
    const start = startOf(doa, sale, part);
    const lastOn = rollToWorkday(addPeriod(start.day, doa.period, doa.dayRule), week);
    found.push({
      clauseId: doa.id,
      clauseNumber: doa.number,
      clauseTitle: doa.title,
      kind: "doa",
      firstOn: earlierDay(sale.shippedOn, lastOn),
      lastOn,
      byFloor: false,
      startOn: start.day,
      startWords: start.words,
    });
  }
  const cover = clauseFor(clauses, "cover", part.family, sale.condition);
  if (cover?.period) {
    const start = startOf(cover, sale, part);
    const remainder = addDays(addPeriod(start.day, cover.period, cover.dayRule), pausedDays(sale.pauses));
    const replaced = part.swappedOn ? clauseFor(clauses, "replaced_part", part.family, sale.condition) : null;
    const floor =
      part.swappedOn && replaced?.period
        ? addPeriod(part.swappedOn, replaced.period, replaced.dayRule)
        : null;
    const lastOn = floor ? laterDay(remainder, floor) : remainder;
    const firstOn = part.swappedOn ?? sale.shippedOn;
    if (firstOn <= lastOn)
      found.push({
        clauseId: cover.id,
        clauseNumber: cover.number,
        clauseTitle: cover.title,
        kind: "cover",
        firstOn,
        lastOn,
        byFloor: floor !== null && floor > remainder,
        startOn: start.day,
        startWords: `${start.words}, ${periodWords(cover.period)}`,
      });
  }
  return found;
}
