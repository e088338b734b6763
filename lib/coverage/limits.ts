import { EXCLUSIONS, type ClauseFact, type DecideInput } from "./schema";
import { clauseFor } from "./windows";

const SCALE = 1e12;
/** The limits of use of a clause, hours and bytes written. */
export const limitsOf = (clause: ClauseFact | null | undefined) => ({
  limitHours: clause?.enduranceHours ?? null,
  limitBytes: clause?.enduranceTb ? clause.enduranceTb * SCALE : null,
});

/** Clauses of exclusion that this fault, or a person's finding, brings up. */
export function exclusionsFor(input: DecideInput): { name: string; clause: ClauseFact; asked: boolean }[] {
  return EXCLUSIONS.flatMap((name) => {
    const clause = clauseFor(
      input.clauses.filter((c) => c.exclusion === name),
      "exclusion",
      input.part,
      input.sale.condition,
    );
    return clause ? [{ name, clause, asked: input.faultClass === name }] : [];
  });
}
