import { and, desc, eq, inArray } from "drizzle-orm";
import type { z } from "zod";
import { transact } from "@/db/client";
import { coverageDecisions, goodwills } from "@/db/schema/coverage";
import { units } from "@/db/schema/ledger";
import { rmaLines, rmas } from "@/db/schema/rma";
import { tickets, ticketUnits } from "@/db/schema/tickets";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { showInstant } from "@/lib/base/show";
import { storeAnswer, storeAsk } from "@/lib/coverage/goodwill.commands";
import { goodwillOfTicket } from "@/lib/coverage/goodwill.queries";
import { REMEDY_WORDS, type Decision } from "@/lib/coverage/schema";
import { actorName, type Ctx, type TxCtx } from "@/lib/ctx";
import { defaultSite } from "@/lib/ledger/queries";
import { enqueueMail } from "@/lib/mail/commands";
import { recordEntry } from "./commands";
import { AnswerGoodwill, AskGoodwill, exceptionLetter, exceptionLine, mayAnswer, mayAsk } from "./goodwill";

async function newestDecision(ctx: TxCtx, ticketId: string, unitId: string) {
  const [row] = await ctx.tx
    .select({
      id: coverageDecisions.id,
      outcome: coverageDecisions.outcome,
      answer: coverageDecisions.answer,
    })
    .from(coverageDecisions)
    .where(and(eq(coverageDecisions.ticketId, ticketId), eq(coverageDecisions.unitId, unitId)))
    .orderBy(desc(coverageDecisions.madeAt))
    .limit(1);
  return row ? { ...row, headline: (row.answer as Decision).headline.staff } : null;
}

/** Asks a manager for cover that the terms do not give, with the reason. No customer sees it. */
export async function askGoodwill(
  ctx: Ctx,
  raw: z.input<typeof AskGoodwill>,
): Promise<Result<{ goodwillId: string; ref: string }>> {
  const may = permit(ctx, "goodwill.ask");
  if (!may.ok) return may;
  const input = parse(AskGoodwill, raw);
  if (!input.ok) return input;
  const { ticketId, ticketUnitId, reason, remedy } = input.value;
  return transact(ctx, async (ctx) => {
    // The ticket's lock first, as everywhere: two asks at once are one after the other.
    const [ticket] = await ctx.tx.select().from(tickets).where(eq(tickets.id, ticketId)).for("update");
    const [unit] = await ctx.tx
      .select({ unitId: ticketUnits.unitId, state: ticketUnits.state, serial: units.serial })
      .from(ticketUnits)
      .innerJoin(units, eq(units.id, ticketUnits.unitId))
      .where(and(eq(ticketUnits.id, ticketUnitId), eq(ticketUnits.ticketId, ticketId)));
    if (!ticket || !unit) return refuse("not_found", "This unit is not on the ticket.");
    const newest = await newestDecision(ctx, ticketId, unit.unitId);
    const known = (await goodwillOfTicket(ctx, ticketId)).filter((g) => g.ticketUnitId === ticketUnitId);
    const [onRma] = await ctx.tx
      .select({ number: rmas.number })
      .from(rmaLines)
      .innerJoin(rmas, eq(rmas.id, rmaLines.rmaId))
      .where(and(eq(rmaLines.unitId, unit.unitId), inArray(rmaLines.state, ["open", "received", "tested"])));
    const allowed = mayAsk({
      serial: unit.serial,
      tied: unit.state === "tied",
      outcome: newest?.outcome ?? null,
      waits: known.find((g) => g.state === "asked")?.askedByName ?? null,
      granted: known.filter((g) => g.state === "granted" && !g.usedBy && g.decisionId === newest?.id),
      onRma: onRma?.number ?? null,
      wish: remedy,
    });
    if (!allowed.ok) return allowed;
    const decisionId = newest!.id;
    const kept = await storeAsk(ctx, {
      ticketId,
      ticketUnitId,
      accountId: ticket.accountId,
      unitId: unit.unitId,
      decisionId,
      reason,
      remedy,
    });
    if (!kept.ok) return kept;
    const { goodwillId } = kept.value;
    const entry = await recordEntry(ctx, {
      ticketId,
      kind: "goodwill_asked",
      line: `Goodwill asked for ${unit.serial}: ${REMEDY_WORDS[remedy]}`,
      data: { goodwillId, decisionId, unitSerial: unit.serial, remedy, reason },
      customerSees: false,
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "ticket.ask_goodwill", subject: ["ticket", ticketId], after: { goodwillId } });
    return ok({ goodwillId, ref: entry.value.ref });
  });
}

/**
 * Grants or declines what another person asked for. Of two managers at once the first answers; of a
 * unit that was decided again, only who has read the newest decision. A grant holds for that one.
 */
export async function answerGoodwill(
  ctx: Ctx,
  raw: z.input<typeof AnswerGoodwill>,
): Promise<Result<{ ref: string; number: number; state: "granted" | "declined" }>> {
  const may = permit(ctx, "goodwill.answer");
  if (!may.ok) return may;
  const input = parse(AnswerGoodwill, raw);
  if (!input.ok) return input;
  const v = input.value;
  const { actor } = ctx;
  if (actor.kind !== "staff") return refuse("forbidden", "A person answers, under their name.");
  return transact(ctx, async (ctx) => {
    const [of] = await ctx.tx
      .select({ ticketId: goodwills.ticketId })
      .from(goodwills)
      .where(eq(goodwills.id, v.goodwillId));
    if (!of) return refuse("not_found", "Nothing like this was asked.");
    const [ticket] = await ctx.tx.select().from(tickets).where(eq(tickets.id, of.ticketId)).for("update");
    const [ask] = await ctx.tx
      .select({ row: goodwills, serial: units.serial })
      .from(goodwills)
      .innerJoin(units, eq(units.id, goodwills.unitId))
      .where(eq(goodwills.id, v.goodwillId))
      .for("update", { of: goodwills });
    const { row, serial } = ask!;
    const newest = (await newestDecision(ctx, row.ticketId, row.unitId))!;
    const { zone } = await defaultSite(ctx);
    const allowed = mayAnswer({
      serial,
      state: row.state,
      askedBy: row.askedBy,
      answered: row.answeredAt
        ? `${row.state} by ${row.answeredByName} on ${showInstant(row.answeredAt, zone)}`
        : "",
      by: actor.userId,
      newest,
      seen: v.decisionId,
      answer: v.answer,
    });
    if (!allowed.ok) return allowed;
    const granted = v.answer === "granted" ? { remedy: v.remedy, limitCents: v.limit } : null;
    const kept = await storeAnswer(ctx, {
      goodwillId: row.id,
      decisionId: newest.id,
      words: v.words,
      grant: granted,
    });
    if (!kept.ok) return kept;
    let messageId: string | null = null;
    if (granted && v.answer === "granted" && v.tell) {
      const sent = await enqueueMail(ctx, {
        to: ticket!.personEmail,
        toName: ticket!.personName,
        template: "reply",
        props: {
          personName: ticket!.personName,
          ticketNumber: ticket!.number,
          text: exceptionLetter(serial, granted.remedy),
          byName: actorName(actor),
        },
        ticketId: row.ticketId,
        accountId: ticket!.accountId,
        automatic: false,
      });
      if (!sent.ok) return sent;
      messageId = sent.value.messageRowId;
    }
    const entry = await recordEntry(ctx, {
      ticketId: row.ticketId,
      kind: granted ? "goodwill_granted" : "goodwill_declined",
      line: granted ? exceptionLine(serial, granted.remedy) : `Goodwill for ${serial} declined`,
      data: {
        goodwillId: row.id,
        decisionId: newest.id,
        unitSerial: serial,
        // A grant is seen by the customer, under whose role the database shows an entry whole: what it
        // may cost us and the manager's words stay in the ask's own row.
        ...(granted ? { remedy: granted.remedy } : {}),
        ...(messageId ? { messageId } : {}),
      },
      customerSees: granted !== null,
    });
    if (!entry.ok) return entry;
    await audit(ctx, {
      act: "ticket.answer_goodwill",
      subject: ["ticket", row.ticketId],
      after: { goodwillId: row.id, state: v.answer },
    });
    return ok({ ref: entry.value.ref, number: ticket!.number, state: v.answer });
  });
}
