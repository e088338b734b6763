import type { DecisionView } from "@/lib/coverage/queries";
import type { Remedy } from "@/lib/coverage/schema";
import type { RmaView } from "@/lib/rma/schema";
import type { TicketView } from "@/lib/tickets/queries";

type Unit = TicketView["units"][number];
export type Standing = {
  unit: Unit;
  decision: DecisionView;
  /** The RMA it is on, while that is not over by withdrawal, expiry or refusal. */
  rmaNumber: string | null;
  /** Covered and not yet on its way: a remedy can be chosen. */
  open: boolean;
};

const covers = (d: DecisionView) => d.answer.outcome === "covered" || d.answer.outcome === "covered_doa";

/** How each unit of a case stands by its newest decision, in the order of the case. */
export function standingOf(
  units: readonly Unit[],
  decisions: readonly DecisionView[],
  rmas: readonly RmaView[],
): Standing[] {
  return units.flatMap((unit) => {
    const decision = decisions.findLast((d) => d.ticketUnitId === unit.id);
    if (unit.state !== "tied" || !decision) return [];
    const rmaNumber =
      rmas.find((r) => r.lines.some((l) => l.ticketUnitId === unit.id && l.state !== "cancelled"))?.number ??
      null;
    return [{ unit, decision, rmaNumber, open: covers(decision) && rmaNumber === null }];
  });
}

/** Units that one RMA can take together: those whose clauses give the same remedies as the first one's. */
export function together(all: readonly Standing[]): { now: Standing[]; later: number; remedies: Remedy[] } {
  const open = all.filter((s) => s.open);
  const remedies = open[0]?.decision.answer.remedies ?? [];
  const now = open.filter((s) => s.decision.answer.remedies.join() === remedies.join());
  return { now: now.slice(0, 50), later: open.length - Math.min(now.length, 50), remedies };
}
