import { and, eq, inArray, sql } from "drizzle-orm";
import type { z } from "zod";
import { isUniqueViolation, transact } from "@/db/client";
import { coverageDecisions } from "@/db/schema/coverage";
import { parcels } from "@/db/schema/dock";
import { models, units } from "@/db/schema/ledger";
import { feeNotices, rmaLines, rmas } from "@/db/schema/rma";
import { tickets, ticketUnits } from "@/db/schema/tickets";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { addDays, civilDayIn, rollToWorkday } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { showDay } from "@/lib/base/show";
import { goodwillOfTicket } from "@/lib/coverage/goodwill.queries";
import { lawBeside } from "@/lib/coverage/law.queries";
import { REMEDY_WORDS, type Decision } from "@/lib/coverage/schema";
import { actorName, type Ctx, type TxCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { defaultSite } from "@/lib/ledger/queries";
import { enqueueMail } from "@/lib/mail/commands";
import { recordEntry } from "@/lib/tickets/commands";
import { grantFor, type Grant } from "@/lib/tickets/goodwill";
import { openLineOf } from "./queries";
import { canStep, cautionsFor, rmaNumber, sendBy, type RmaAct } from "./rules";
import {
  AuthorizeRma,
  DeclineRma,
  MarkSent,
  WithdrawRma,
  type RmaState,
  FEE_KINDS,
  type FeeKind,
} from "./schema";

async function nextNumber(ctx: TxCtx): Promise<string> {
  for (;;) {
    const next = await ctx.tx.execute<{ n: string }>(sql`select nextval('rma_number') as n`);
    const number = rmaNumber(Number(next.rows[0]!.n));
    if (number !== null) return number;
  }
}

const euros = (cents: number) => `${(cents / 100).toFixed(2)} EUR`;

/**
 * Authorizes a return: lines, remedy, the day to send by, fees told before, the parcel expected
 * and the customer's mail with the traveler. A customer may do so only on a stored decision that
 * covers, with a remedy it permits. What is not covered goes by a manager's grant, for its remedy
 * alone, whoever authorizes. A unit has at most one open line, whoever is first.
 */
export async function authorizeRma(
  ctx: Ctx,
  raw: z.input<typeof AuthorizeRma>,
): Promise<Result<{ rmaId: string; number: string; ref: string }>> {
  const may = permit(ctx, "rma.authorize");
  if (!may.ok) return may;
  const input = parse(AuthorizeRma, raw);
  if (!input.ok) return input;
  const v = input.value;
  if (v.battery?.damaged) {
    return refuse(
      "rule",
      "A damaged battery must not be shipped. Isolate the unit, keep away from it and call the desk; a person arranges what follows.",
    );
  }
  let contested: string | null = null;
  try {
    return await transact(ctx, async (ctx) => {
      const [ticket] = await ctx.tx.select().from(tickets).where(eq(tickets.id, v.ticketId)).for("update");
      if (!ticket) return refuse("not_found", "This ticket is not there.");
      if (!ticket.accountId)
        return refuse("rule", "Tie the ticket to a unit first: the RMA goes to the customer who bought it.");
      const accountId = ticket.accountId;
      const lines = await ctx.tx
        .select({
          id: ticketUnits.id,
          unitId: ticketUnits.unitId,
          slot: ticketUnits.slot,
          state: ticketUnits.state,
          answers: ticketUnits.answers,
          faultWords: ticketUnits.faultWords,
          serial: units.serial,
          modelName: models.name,
          family: models.family,
          weightKg: models.weightKg,
          dataBearing: models.dataBearing,
          battery: models.battery,
        })
        .from(ticketUnits)
        .innerJoin(units, eq(units.id, ticketUnits.unitId))
        .innerJoin(models, eq(models.id, units.modelId))
        .where(
          and(
            eq(ticketUnits.ticketId, v.ticketId),
            inArray(
              ticketUnits.id,
              v.lines.map((l) => l.ticketUnitId),
            ),
          ),
        );
      if (lines.length !== v.lines.length || lines.some((l) => l.state !== "tied"))
        return refuse("rule", "Every line needs a unit that is tied to this ticket.");
      const decisions = await ctx.tx
        .select({
          id: coverageDecisions.id,
          unitId: coverageDecisions.unitId,
          outcome: coverageDecisions.outcome,
          remedies: coverageDecisions.remedies,
          answer: coverageDecisions.answer,
          madeAt: coverageDecisions.madeAt,
        })
        .from(coverageDecisions)
        .where(
          and(
            eq(coverageDecisions.ticketId, v.ticketId),
            inArray(
              coverageDecisions.unitId,
              lines.map((l) => l.unitId),
            ),
          ),
        )
        .orderBy(sql`${coverageDecisions.madeAt} desc`);
      const newest = (unitId: string) => decisions.find((d) => d.unitId === unitId);
      const harmed = lines.find((l) => l.answers.battery === "damaged");
      if (harmed) {
        return refuse(
          "rule",
          `The customer reports a damaged battery in ${harmed.serial}: no label for it. Call them, have it isolated, and arrange collection by who may carry it.`,
        );
      }
      const goodwill = await goodwillOfTicket(ctx, v.ticketId);
      const grants = new Map<string, Grant>();
      for (const l of lines) {
        const d = newest(l.unitId);
        if (!d) return refuse("rule", `Take the coverage decision for ${l.serial} first.`);
        const covers = d.outcome === "covered" || d.outcome === "covered_doa";
        if (ctx.actor.kind === "customer" && !covers)
          return refuse("rule", "A person of the desk must look at this first. You hear from us.");
        if (!covers) {
          const grant = grantFor(
            { serial: l.serial, decisionId: d.id, remedy: v.remedy },
            goodwill.filter((g) => g.ticketUnitId === l.id && g.state === "granted"),
          );
          if (grant.ok) grants.set(l.id, grant.value);
          else if (d.outcome === "not_covered") return grant;
        }
        // Where a person decides, what the clause gives is still the most they may give without goodwill.
        if (!grants.has(l.id) && !d.remedies.includes(v.remedy))
          return refuse(
            "rule",
            `The clause does not give ${REMEDY_WORDS[v.remedy]} for ${l.serial}. Choose one it gives.`,
          );
        const open = await openLineOf(ctx, l.unitId);
        if (open)
          return refuse("conflict", `${l.serial} is on ${open.rmaNumber} already.`, {
            details: { rmaNumber: open.rmaNumber, ticketNumber: open.ticketNumber },
          });
      }
      const site = await defaultSite(ctx);
      const number = await nextNumber(ctx);
      const rmaId = ctx.newId();
      const today = civilDayIn(ctx.now, site.zone);
      const expiresOn = sendBy(today, site);
      // The clause says how long the old part may take; of several lines the shortest counts.
      const backWithin = lines.flatMap(
        (l) => (newest(l.unitId)!.answer as Decision).handling?.dueBackDays ?? [],
      );
      const dueBackOn =
        backWithin.length > 0 ? rollToWorkday(addDays(today, Math.min(...backWithin)), site) : expiresOn;
      await ctx.tx.insert(rmas).values({
        id: rmaId,
        number,
        ticketId: v.ticketId,
        accountId,
        state: "authorized",
        remedy: v.remedy,
        siteId: site.id,
        authorizedAt: ctx.now,
        authorizedByName: ctx.actor.kind === "customer" ? "Mendbay, by the decision" : actorName(ctx.actor),
        expiresOn,
        dueBackOn: v.remedy === "advance_replacement" ? dueBackOn : null,
        shipTo: v.shipTo,
        battery: v.battery ?? null,
        createdAt: ctx.now,
      });
      const fees: string[] = [];
      for (const [sort, l] of lines.entries()) {
        const decision = newest(l.unitId)!;
        contested = l.unitId;
        const lineId = ctx.newId();
        await ctx.tx.insert(rmaLines).values({
          id: lineId,
          rmaId,
          accountId,
          ticketUnitId: l.id,
          unitId: l.unitId,
          decisionId: decision.id,
          remedy: v.remedy,
          faultWords: l.faultWords || ticket.faultWords,
          state: "open",
          sort,
        });
        // Told before, or it may not be asked for: every fee that this remedy can bring. Goodwill brings none.
        const mayApply = (decision.answer as Decision).fees.filter(
          (f) =>
            !grants.has(l.id) &&
            (FEE_KINDS as readonly string[]).includes(f.kind) &&
            (f.kind !== "not_returned" || v.remedy === "advance_replacement"),
        );
        for (const fee of mayApply) {
          await ctx.tx.insert(feeNotices).values({
            id: ctx.newId(),
            rmaLineId: lineId,
            accountId,
            kind: fee.kind as FeeKind,
            cents: fee.cents,
            currency: "EUR",
            words: fee.words,
            noticedAt: ctx.now,
          });
          fees.push(`${fee.words} ${euros(fee.cents)}.`);
        }
      }
      await ctx.tx.insert(parcels).values({
        id: ctx.newId(),
        rmaId,
        siteId: site.id,
        state: "expected",
        expectedOn: expiresOn,
        createdAt: ctx.now,
      });
      const given = lines.flatMap((l) => {
        const grant = grants.get(l.id);
        return grant ? [{ ...grant, serial: l.serial }] : [];
      });
      const entry = await recordEntry(ctx, {
        ticketId: v.ticketId,
        kind: "rma_authorized",
        line: [
          `${number} authorized: ${REMEDY_WORDS[v.remedy]}`,
          ...(given.length > 0 ? ["by goodwill", ...given.map((g) => g.ref)] : []),
        ].join(", "),
        data: {
          rmaId,
          number,
          remedy: v.remedy,
          lines: lines.map((l) => ({ serial: l.serial, what: l.slot ?? l.modelName })),
          dueOn: expiresOn,
          ...(given.length > 0
            ? { goodwill: given.map(({ goodwillId, ref, serial }) => ({ goodwillId, ref, serial })) }
            : {}),
        },
      });
      if (!entry.ok) return entry;
      const sent = await enqueueMail(ctx, {
        to: ticket.personEmail,
        toName: ticket.personName,
        template: "rma_authorized",
        props: {
          personName: ticket.personName,
          rmaNumber: number,
          remedy: REMEDY_WORDS[v.remedy],
          lines: lines.map((l) => ({
            serial: l.serial,
            what: l.slot ? `${l.slot}, ${l.modelName}` : l.modelName,
          })),
          sendBy: showDay(expiresOn),
          address: site.addressLines,
          fees: [...new Set(fees)],
          cautions: cautionsFor(lines).map((c) => `${c.title}. ${c.detail}`),
          link: `${env().MENDBAY_URL}/rma/${number}`,
          law: (await lawBeside(ctx, newest(lines[0]!.unitId)!.id)) ?? undefined,
          goodwill: given.map((g) => g.serial),
        },
        ticketId: v.ticketId,
        accountId,
        automatic: true,
        attachments: [{ paper: "traveler", id: rmaId, name: `traveler-${number}.pdf` }],
      });
      if (!sent.ok) return sent;
      await audit(ctx, {
        act: "rma.authorize",
        subject: ["rma", rmaId],
        after: {
          number,
          remedy: v.remedy,
          lines: lines.map((l) => l.serial),
          ...(given.length > 0 ? { goodwill: given.map((g) => g.goodwillId) } : {}),
        },
      });
      return ok({ rmaId, number, ref: entry.value.ref });
    });
  } catch (thrown) {
    // Two people at once: the index let one through. The other learns whose it is.
    if (!isUniqueViolation(thrown, "rma_line_one_open") || contested === null || ctx.tx) throw thrown;
    const open = await openLineOf(ctx, contested);
    return refuse(
      "conflict",
      open
        ? `Somebody was first: this unit is on ${open.rmaNumber} already.`
        : "Somebody was first: this unit is on another RMA already.",
      open ? { details: { rmaNumber: open.rmaNumber, ticketNumber: open.ticketNumber } } : {},
    );
  }
}

/** Moves an RMA one step by the state table, or refuses with the reason. Other modules' acts come through here. */
export async function advanceRma(
  ctx: Ctx,
  input: { rmaId: string; act: RmaAct },
): Promise<Result<{ from: RmaState; to: RmaState }>> {
  const may = permit(ctx, "rma.advance");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [row] = await ctx.tx
      .select({ state: rmas.state })
      .from(rmas)
      .where(eq(rmas.id, input.rmaId))
      .for("update");
    if (!row) return refuse("not_found", "This RMA is not there.");
    const to = canStep(row.state, input.act);
    if (!to.ok) return to;
    await ctx.tx
      .update(rmas)
      .set({
        state: to.value,
        version: sql`${rmas.version} + 1`,
        ...(to.value === "settled" ? { settledAt: ctx.now } : {}),
      })
      .where(eq(rmas.id, input.rmaId));
    if (["withdrawn", "expired", "declined"].includes(to.value))
      await ctx.tx
        .update(rmaLines)
        .set({ state: "cancelled" })
        .where(and(eq(rmaLines.rmaId, input.rmaId), inArray(rmaLines.state, ["open"])));
    await audit(ctx, {
      act: `rma.${input.act}`,
      subject: ["rma", input.rmaId],
      before: { state: row.state },
      after: { state: to.value },
    });
    return ok({ from: row.state, to: to.value });
  });
}

/**
 * Locks a line for what follows: first its RMA, then itself, everywhere in this order, so that the
 * dock, the bench and a withdrawal cannot wait for each other. Null when there is no such line.
 */
export async function lockLine(ctx: TxCtx, lineId: string): Promise<{ rmaId: string } | null> {
  const [line] = await ctx.tx.select({ rmaId: rmaLines.rmaId }).from(rmaLines).where(eq(rmaLines.id, lineId));
  if (!line) return null;
  await ctx.tx.select({ id: rmas.id }).from(rmas).where(eq(rmas.id, line.rmaId)).for("update");
  await ctx.tx.select({ id: rmaLines.id }).from(rmaLines).where(eq(rmaLines.id, lineId)).for("update");
  return line;
}

/** Sets the state of one line: received, tested, settled. */
export async function setLineState(
  ctx: Ctx,
  input: { lineId: string; state: "received" | "tested" | "settled" },
): Promise<Result<undefined>> {
  const may = permit(ctx, "rma.advance");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    await ctx.tx.update(rmaLines).set({ state: input.state }).where(eq(rmaLines.id, input.lineId));
    await audit(ctx, { act: "rma.line", subject: ["rma_line", input.lineId], after: { state: input.state } });
    return ok();
  });
}

/** The customer has handed the parcel over. */
export async function markSent(ctx: Ctx, raw: z.input<typeof MarkSent>): Promise<Result<undefined>> {
  const may = permit(ctx, "rma.advance");
  if (!may.ok) return may;
  const input = parse(MarkSent, raw);
  if (!input.ok) return input;
  const { rmaId, carrier, tracking } = input.value;
  return transact(ctx, async (ctx) => {
    const moved = await advanceRma(ctx, { rmaId, act: "mark_sent" });
    if (!moved.ok) return moved;
    const [rma] = await ctx.tx
      .select({ ticketId: rmas.ticketId, number: rmas.number })
      .from(rmas)
      .where(eq(rmas.id, rmaId));
    await ctx.tx
      .update(parcels)
      .set({ carrier, tracking: tracking || null })
      .where(and(eq(parcels.rmaId, rmaId), eq(parcels.state, "expected")));
    const entry = await recordEntry(ctx, {
      ticketId: rma!.ticketId,
      kind: "parcel_sent",
      line: `Parcel for ${rma!.number} handed to ${carrier}`,
      data: { rmaId, carrier, tracking },
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "rma.mark_sent", subject: ["rma", rmaId], after: { carrier, tracking } });
    return ok();
  });
}

export async function withdrawRma(ctx: Ctx, raw: z.input<typeof WithdrawRma>): Promise<Result<undefined>> {
  const may = permit(ctx, "rma.withdraw");
  if (!may.ok) return may;
  const input = parse(WithdrawRma, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    const moved = await advanceRma(ctx, { rmaId: input.value.rmaId, act: "withdraw" });
    if (!moved.ok) return moved;
    const [rma] = await ctx.tx
      .select({ ticketId: rmas.ticketId, number: rmas.number })
      .from(rmas)
      .where(eq(rmas.id, input.value.rmaId));
    const entry = await recordEntry(ctx, {
      ticketId: rma!.ticketId,
      kind: "rma_withdrawn",
      line: `${rma!.number} withdrawn`,
      data: { rmaId: input.value.rmaId, number: rma!.number, reason: input.value.reason },
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "rma.withdraw", subject: ["rma", input.value.rmaId] });
    return ok();
  });
}

/** A claim is declined: the letter carries the clause, the finding and what is offered instead. */
export async function declineClaim(
  ctx: Ctx,
  raw: z.input<typeof DeclineRma>,
): Promise<Result<{ ref: string }>> {
  const may = permit(ctx, "rma.decline");
  if (!may.ok) return may;
  const input = parse(DeclineRma, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const [ticket] = await ctx.tx.select().from(tickets).where(eq(tickets.id, v.ticketId)).for("update");
    const [unit] = await ctx.tx
      .select({ unitId: ticketUnits.unitId, serial: units.serial })
      .from(ticketUnits)
      .innerJoin(units, eq(units.id, ticketUnits.unitId))
      .where(and(eq(ticketUnits.id, v.ticketUnitId), eq(ticketUnits.ticketId, v.ticketId)));
    if (!ticket || !unit) return refuse("not_found", "This ticket is not there.");
    if (ticket.closedAt) return refuse("conflict", "This ticket is closed already; its letter was sent.");
    const open = await openLineOf(ctx, unit.unitId);
    if (open) return refuse("conflict", `${unit.serial} is on ${open.rmaNumber}. Withdraw that first.`);
    const [decision] = await ctx.tx
      .select({
        id: coverageDecisions.id,
        answer: coverageDecisions.answer,
        outcome: coverageDecisions.outcome,
      })
      .from(coverageDecisions)
      .where(and(eq(coverageDecisions.ticketId, v.ticketId), eq(coverageDecisions.unitId, unit.unitId)))
      .orderBy(sql`${coverageDecisions.madeAt} desc`)
      .limit(1);
    if (!decision) return refuse("rule", "Take the coverage decision first: a refusal cites its clause.");
    if (decision.outcome === "covered" || decision.outcome === "covered_doa")
      return refuse(
        "rule",
        "The decision says covered. Take it again with the new facts before you decline.",
      );
    const answer = decision.answer as Decision;
    const sent = await enqueueMail(ctx, {
      to: ticket.personEmail,
      toName: ticket.personName,
      template: "rma_declined",
      props: {
        personName: ticket.personName,
        ticketNumber: ticket.number,
        serial: unit.serial,
        law: (await lawBeside(ctx, decision.id)) ?? undefined,
        why: [...answer.reasons.map((r) => r.customer), v.reason],
        wouldChange: answer.wouldChange.map((w) => w.customer),
        offers: [
          "A price for a paid repair, before we touch it.",
          "The part back to you as it is.",
          "We scrap it for you, with a record.",
        ],
      },
      ticketId: v.ticketId,
      accountId: ticket.accountId,
      automatic: false,
    });
    if (!sent.ok) return sent;
    const entry = await recordEntry(ctx, {
      ticketId: v.ticketId,
      kind: "rma_declined",
      line: `Claim for ${unit.serial} declined`,
      data: {
        unitSerial: unit.serial,
        reason: v.reason,
        clauseNumber: answer.clauseNumber,
        messageId: sent.value.messageRowId,
      },
    });
    if (!entry.ok) return entry;
    await audit(ctx, {
      act: "rma.decline",
      subject: ["ticket", v.ticketId],
      after: { unitId: unit.unitId, reason: v.reason },
    });
    return ok({ ref: entry.value.ref });
  });
}

/** Settles an RMA whose lines are all done, and tells the customer. */
export async function settleRma(
  ctx: Ctx,
  input: { rmaId: string; what: string },
): Promise<Result<undefined>> {
  const may = permit(ctx, "rma.settle");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [left] = await ctx.tx
      .select({ n: sql<number>`count(*)::int` })
      .from(rmaLines)
      .where(and(eq(rmaLines.rmaId, input.rmaId), inArray(rmaLines.state, ["open", "received", "tested"])));
    if (left!.n > 0)
      return refuse("rule", `${left!.n} ${left!.n === 1 ? "line is" : "lines are"} not done yet.`);
    const moved = await advanceRma(ctx, { rmaId: input.rmaId, act: "settle" });
    if (!moved.ok) return moved;
    const [rma] = await ctx.tx
      .select({
        number: rmas.number,
        ticketId: rmas.ticketId,
        accountId: rmas.accountId,
        personName: tickets.personName,
        personEmail: tickets.personEmail,
      })
      .from(rmas)
      .innerJoin(tickets, eq(tickets.id, rmas.ticketId))
      .where(eq(rmas.id, input.rmaId));
    const sent = await enqueueMail(ctx, {
      to: rma!.personEmail,
      toName: rma!.personName,
      template: "settled",
      props: {
        personName: rma!.personName,
        rmaNumber: rma!.number,
        what: input.what,
        link: `${env().MENDBAY_URL}/rma/${rma!.number}`,
      },
      ticketId: rma!.ticketId,
      accountId: rma!.accountId,
      automatic: true,
    });
    if (!sent.ok) return sent;
    const entry = await recordEntry(ctx, {
      ticketId: rma!.ticketId,
      kind: "rma_settled",
      line: `${rma!.number} settled`,
      data: { rmaId: input.rmaId, number: rma!.number, what: input.what },
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "rma.settle", subject: ["rma", input.rmaId] });
    return ok();
  });
}
