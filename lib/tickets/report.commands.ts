import { transact } from "@/db/client";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { ok, refuse, type Result } from "@/lib/base/result";
import { FAULT_CLASSES, FAULT_WORDS, type FaultClass } from "@/lib/coverage/schema";
import type { Ctx } from "@/lib/ctx";
import { closeReport, moveReportEvidence } from "@/lib/evidence/commands";
import { report } from "@/lib/evidence/queries";
import { unitsByIds } from "@/lib/ledger/queries";
import { addTicketUnit, openTicket, recordEntry, takeDecision } from "./commands";

/**
 * A portal report becomes a ticket: its unit tied by the customer's own choice, evidence moved,
 * the coverage decision taken and shown. All or nothing; sent twice, the second finds the first.
 */
export async function sendReport(
  ctx: Ctx,
  reportId: string,
): Promise<Result<{ number: number; decisionId: string }>> {
  const may = permit(ctx, "report.write");
  if (!may.ok) return may;
  const { actor } = ctx;
  if (actor.kind !== "customer") return refuse("forbidden", "Reports are written by customers.");
  return transact(ctx, async (ctx) => {
    const found = await report(ctx, reportId);
    if (!found) return refuse("not_found", "This report is not there. Start again from your equipment.");
    const a = found.answers;
    const missing = [
      a.unitId ? null : "which unit it is",
      a.faultClass && (FAULT_CLASSES as readonly string[]).includes(a.faultClass) ? null : "what it does",
      a.words && a.words.trim().length >= 3 ? null : "what happens, in your words",
      a.battery ? null : "whether a battery is damaged",
    ].filter((m): m is string => m !== null);
    if (missing.length > 0) return refuse("invalid", `Still to answer: ${missing.join(", ")}.`);
    const unitId = a.partId && a.partId !== "whole" ? a.partId : a.unitId!;
    const [unit] = await unitsByIds(ctx, [unitId]);
    if (!unit) return refuse("not_found", "This unit is not among your equipment.");
    const faultClass = a.faultClass as FaultClass;
    const opened = await openTicket(ctx, {
      accountId: actor.accountId,
      contactId: actor.contactId,
      personName: actor.name,
      personEmail: actor.email,
      channel: "portal",
      subject: `${unit.serial}: ${FAULT_WORDS[faultClass]}`,
      faultWords: a.words!.trim(),
      receivedAt: ctx.now,
    });
    if (!opened.ok) return opened;
    const { ticketId, number } = opened.value;
    const closed = await closeReport(ctx, reportId, ticketId);
    if (!closed.ok) return closed;
    const answers = { since: a.since ?? "", battery: a.battery!, data: a.data ?? "", tried: a.tried ?? "" };
    const tied = await addTicketUnit(ctx, {
      ticketId,
      unitId,
      state: "tied",
      faultClass,
      faultWords: a.words!.trim(),
      answers,
    });
    if (!tied.ok) return tied;
    const said = await recordEntry(ctx, {
      ticketId,
      kind: "fault_reported",
      line: `${FAULT_WORDS[faultClass]}: ${a.words!.trim().slice(0, 200)}`,
      data: { unitId, serial: unit.serial, slot: unit.slot, faultClass, words: a.words, answers },
    });
    if (!said.ok) return said;
    const moved = await moveReportEvidence(ctx, {
      reportId,
      ticketId,
      ticketUnitId: tied.value.ticketUnitId,
    });
    if (!moved.ok) return moved;
    const n = moved.value.evidenceIds.length;
    if (n > 0) {
      const entry = await recordEntry(ctx, {
        ticketId,
        kind: "evidence_added",
        line: n === 1 ? "One piece of evidence" : `${n} pieces of evidence`,
        data: { evidenceIds: moved.value.evidenceIds, source: "portal" },
      });
      if (!entry.ok) return entry;
    }
    const decided = await takeDecision(ctx, { ticketId, ticketUnitId: tied.value.ticketUnitId, faultClass });
    if (!decided.ok) return decided;
    await audit(ctx, {
      act: "report.sent",
      subject: ["ticket", ticketId],
      after: { number, outcome: decided.value.decision.outcome },
    });
    return ok({ number, decisionId: decided.value.decisionId });
  });
}
