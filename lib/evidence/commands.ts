import { and, eq, inArray, isNull } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { evidence, reports } from "@/db/schema/evidence";
import { files } from "@/db/schema/files";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { kindOf } from "./rules";
import { EVIDENCE_SOURCES } from "./schema";

const AddEvidence = z.object({
  fileIds: z.array(z.uuid()).min(1).max(60),
  ticketId: z.uuid().nullish(),
  ticketUnitId: z.uuid().nullish(),
  reportId: z.uuid().nullish(),
  accountId: z.uuid().nullish(),
  source: z.enum(EVIDENCE_SOURCES),
  fromName: z.string().max(200),
  wanted: z.string().max(200).nullish(),
});

/** Files become evidence. A file is evidence once: sent again it keeps its first place. */
export async function addEvidence(
  ctx: Ctx,
  raw: z.input<typeof AddEvidence>,
): Promise<Result<{ evidenceIds: string[] }>> {
  const may = permit(ctx, "evidence.add");
  if (!may.ok) return may;
  const input = parse(AddEvidence, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const found = await ctx.tx
      .select({ id: files.id, name: files.name, declaredType: files.declaredType })
      .from(files)
      .where(inArray(files.id, v.fileIds));
    if (found.length === 0) return refuse("not_found", "These files are not there. Send them again.");
    if (v.reportId) {
      // Read under the sender's own rights: a foreign key alone would let a foreign id through.
      const [report] = await ctx.tx
        .select({ sentAt: reports.sentAt })
        .from(reports)
        .where(eq(reports.id, v.reportId));
      if (!report) return refuse("not_found", "This report is not there. Start again from your equipment.");
      if (report.sentAt)
        return refuse("conflict", "This report was sent already. Add the file in your case.");
    }
    const rows = found.map((f) => ({
      id: ctx.newId(),
      fileId: f.id,
      ticketId: v.ticketId ?? null,
      ticketUnitId: v.ticketUnitId ?? null,
      reportId: v.reportId ?? null,
      accountId: v.accountId ?? null,
      kind: kindOf(f.declaredType, f.name),
      source: v.source,
      wanted: v.wanted ?? null,
      fromName: v.fromName,
      createdAt: ctx.now,
    }));
    await ctx.tx.insert(evidence).values(rows).onConflictDoNothing();
    const kept = await ctx.tx
      .select({ id: evidence.id })
      .from(evidence)
      .where(
        inArray(
          evidence.fileId,
          found.map((f) => f.id),
        ),
      );
    await audit(ctx, {
      act: "evidence.add",
      subject: ["ticket", v.ticketId ?? v.reportId ?? "none"],
      after: { files: found.map((f) => f.id) },
    });
    return ok({ evidenceIds: kept.map((k) => k.id) });
  });
}

/** Evidence of a portal report moves to the ticket that the report became. */
export async function moveReportEvidence(
  ctx: Ctx,
  input: { reportId: string; ticketId: string; ticketUnitId: string | null },
): Promise<Result<{ evidenceIds: string[] }>> {
  const may = permit(ctx, "evidence.add");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const moved = await ctx.tx
      .update(evidence)
      .set({ ticketId: input.ticketId, ticketUnitId: input.ticketUnitId })
      .where(and(eq(evidence.reportId, input.reportId), isNull(evidence.ticketId)))
      .returning({ id: evidence.id });
    await audit(ctx, {
      act: "evidence.move",
      subject: ["ticket", input.ticketId],
      after: { evidence: moved.length },
    });
    return ok({ evidenceIds: moved.map((m) => m.id) });
  });
}

/** Starts a portal report, or gives back the one this person has under way for the unit. */
export async function startReport(
  ctx: Ctx,
  answers: Record<string, string>,
): Promise<Result<{ reportId: string }>> {
  const may = permit(ctx, "report.write");
  if (!may.ok) return may;
  const { actor } = ctx;
  if (actor.kind !== "customer") return refuse("forbidden", "Reports are written by customers.");
  return transact(ctx, async (ctx) => {
    const reportId = ctx.newId();
    await ctx.tx.insert(reports).values({
      id: reportId,
      accountId: actor.accountId,
      userId: actor.userId,
      answers,
      createdAt: ctx.now,
      updatedAt: ctx.now,
    });
    await audit(ctx, { act: "report.start", subject: ["report", reportId] });
    return ok({ reportId });
  });
}

/** Keeps the answers of one page. Going back shows them again. */
export async function keepAnswers(
  ctx: Ctx,
  reportId: string,
  answers: Record<string, string>,
): Promise<Result<undefined>> {
  const may = permit(ctx, "report.write");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [report] = await ctx.tx
      .select({ answers: reports.answers, sentAt: reports.sentAt })
      .from(reports)
      .where(eq(reports.id, reportId))
      .for("update");
    if (!report) return refuse("not_found", "This report is not there. Start again from your equipment.");
    if (report.sentAt) return refuse("conflict", "This report was sent already.");
    await ctx.tx
      .update(reports)
      .set({ answers: { ...report.answers, ...answers }, updatedAt: ctx.now })
      .where(eq(reports.id, reportId));
    await audit(ctx, {
      act: "report.keep",
      subject: ["report", reportId],
      after: { pages: Object.keys(answers) },
    });
    return ok();
  });
}

/** Marks a report sent, once. A second press finds the ticket of the first. */
export async function closeReport(ctx: Ctx, reportId: string, ticketId: string): Promise<Result<undefined>> {
  const may = permit(ctx, "report.write");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const done = await ctx.tx
      .update(reports)
      .set({ sentAt: ctx.now, ticketId })
      .where(and(eq(reports.id, reportId), isNull(reports.sentAt)))
      .returning({ id: reports.id });
    if (done.length === 0) return refuse("conflict", "This report was sent already.");
    await audit(ctx, { act: "report.send", subject: ["report", reportId], after: { ticketId } });
    return ok();
  });
}
