import { and, asc, eq, isNotNull, isNull, or, sql } from "drizzle-orm";
import type { z } from "zod";
import { accounts, coverPauses, installations, saleLines, saleTransfers, units } from "@/db/schema/ledger";
import { tickets, ticketUnits } from "@/db/schema/tickets";
import { transact } from "@/db/client";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { civilDayIn, daysBetween } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { showDay } from "@/lib/base/show";
import type { Ctx, TxCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { GiveOn, MovePart, NoteNotice, PauseCover } from "./schema";

/** What is noted has happened: a day to come would bring cover that nobody has yet. */
function notToCome(ctx: Ctx, days: Record<string, string | null | undefined>): Result<undefined> {
  const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
  for (const [field, day] of Object.entries(days))
    if (day && day > today) {
      const why = `${showDay(day)} is still to come. Note it when it has happened.`;
      return refuse("invalid", why, { fields: { [field]: [why] } });
    }
  return ok();
}
const LONGEST_PAUSE = 366;

async function openSaleOf(ctx: TxCtx, unitId: string) {
  const [sale] = await ctx.tx
    .select()
    .from(saleLines)
    .where(and(eq(saleLines.unitId, unitId), isNull(saleLines.endedOn)))
    .for("update");
  return sale ?? null;
}

/**
 * A sold unit was given on to another company. The sale goes along with its days and terms, and
 * what becomes of cover is for its transfer clause to say.
 */
export async function giveOn(
  ctx: Ctx,
  raw: z.input<typeof GiveOn>,
): Promise<Result<{ saleLineId: string; transferId: string }>> {
  const may = permit(ctx, "ledger.give_on");
  if (!may.ok) return may;
  const input = parse(GiveOn, raw);
  if (!input.ok) return input;
  const { unitId, accountCode, onDay, noticedOn } = input.value;
  const happened = notToCome(ctx, { onDay, noticedOn });
  if (!happened.ok) return happened;
  return transact(ctx, async (ctx) => {
    const sale = await openSaleOf(ctx, unitId);
    if (!sale)
      return refuse("rule", "This unit has no open sale of its own, so there is nothing to give on.");
    const [to] = await ctx.tx.select().from(accounts).where(eq(accounts.code, accountCode.toUpperCase()));
    if (!to)
      return refuse("not_found", `No account has the code ${accountCode}.`, {
        fields: { accountCode: [`No account has the code ${accountCode}. Look it up in the ledger.`] },
      });
    if (to.id === sale.accountId)
      return refuse("rule", `${to.name} has it already.`, {
        fields: { accountCode: [`${to.name} has it already.`] },
      });
    if (onDay < sale.shippedOn)
      return refuse(
        "invalid",
        `It was shipped on ${showDay(sale.shippedOn)}; it cannot be given on before.`,
        {
          fields: { onDay: [`It was shipped on ${showDay(sale.shippedOn)}; it cannot be given on before.`] },
        },
      );
    // Its claims are its holder's: they end before it changes hands, or two customers share a record.
    const [claim] = await ctx.tx
      .select({ number: tickets.number })
      .from(ticketUnits)
      .innerJoin(tickets, eq(tickets.id, ticketUnits.ticketId))
      .where(
        and(
          or(eq(ticketUnits.unitId, unitId), eq(ticketUnits.systemUnitId, unitId)),
          eq(ticketUnits.state, "tied"),
          eq(tickets.accountId, sale.accountId),
          isNull(tickets.closedAt),
        ),
      )
      .limit(1);
    if (claim)
      return refuse(
        "conflict",
        `Ticket ${claim.number} is open about it. Settle or close that first; then note who holds it.`,
        { details: { ticketNumber: claim.number } },
      );
    const transferId = ctx.newId();
    await ctx.tx.insert(saleTransfers).values({
      id: transferId,
      saleLineId: sale.id,
      fromAccountId: sale.accountId,
      toAccountId: to.id,
      onDay,
      noticedOn: noticedOn ?? null,
      createdAt: ctx.now,
    });
    await ctx.tx
      .update(saleLines)
      .set({ accountId: to.id, buyerKind: to.buyerKind, country: to.country, siteNote: null })
      .where(eq(saleLines.id, sale.id));
    await audit(ctx, {
      act: "ledger.give_on",
      subject: ["sale_line", sale.id],
      before: { accountId: sale.accountId },
      after: { accountId: to.id, onDay, noticedOn: noticedOn ?? null },
    });
    return ok({ saleLineId: sale.id, transferId });
  });
}

/** The written notice of the last time a unit was given on has come. */
export async function noteNotice(
  ctx: Ctx,
  raw: z.input<typeof NoteNotice>,
): Promise<Result<{ saleLineId: string }>> {
  const may = permit(ctx, "ledger.give_on");
  if (!may.ok) return may;
  const input = parse(NoteNotice, raw);
  if (!input.ok) return input;
  const { unitId, noticedOn } = input.value;
  const happened = notToCome(ctx, { noticedOn });
  if (!happened.ok) return happened;
  return transact(ctx, async (ctx) => {
    // A part that came from another customer's system has its notice where it stands.
    const [place] = await ctx.tx
      .select()
      .from(installations)
      .where(
        and(
          eq(installations.unitId, unitId),
          isNull(installations.toOn),
          isNotNull(installations.givenOn),
          isNull(installations.noticedOn),
        ),
      )
      .for("update");
    if (place?.saleLineId) {
      if (noticedOn < place.givenOn!)
        return refuse("invalid", "The notice cannot come before the day it was given on.", {
          fields: { noticedOn: [`It was given on on ${showDay(place.givenOn!)}.`] },
        });
      await ctx.tx.update(installations).set({ noticedOn }).where(eq(installations.id, place.id));
      await audit(ctx, { act: "ledger.notice", subject: ["unit", unitId], after: { noticedOn } });
      return ok({ saleLineId: place.saleLineId });
    }
    const sale = await openSaleOf(ctx, unitId);
    const [open] = sale
      ? await ctx.tx
          .select()
          .from(saleTransfers)
          .where(and(eq(saleTransfers.saleLineId, sale.id), isNull(saleTransfers.noticedOn)))
          .orderBy(asc(saleTransfers.onDay))
          .limit(1)
      : [];
    if (!sale || !open) return refuse("rule", "No transfer of this unit is still without its notice.");
    if (noticedOn < open.onDay)
      return refuse("invalid", "The notice cannot come before the day it was given on.", {
        fields: { noticedOn: [`It was given on on ${showDay(open.onDay)}.`] },
      });
    await ctx.tx.update(saleTransfers).set({ noticedOn }).where(eq(saleTransfers.id, open.id));
    await audit(ctx, { act: "ledger.notice", subject: ["sale_line", sale.id], after: { noticedOn } });
    return ok({ saleLineId: sale.id });
  });
}

/**
 * A part stands in another system now. It keeps the terms it was sold under; where the other system
 * is another customer's, it was given on that day.
 */
export async function movePart(
  ctx: Ctx,
  raw: z.input<typeof MovePart>,
): Promise<Result<{ installationId: string; saleLineIds: string[] }>> {
  const may = permit(ctx, "ledger.swap");
  if (!may.ok) return may;
  const input = parse(MovePart, raw);
  if (!input.ok) return input;
  const { partUnitId, toUnitId, slot, onDay, noticedOn } = input.value;
  const happened = notToCome(ctx, { onDay, noticedOn });
  if (!happened.ok) return happened;
  return transact(ctx, async (ctx) => {
    const [from] = await ctx.tx
      .select()
      .from(installations)
      .where(and(eq(installations.unitId, partUnitId), isNull(installations.toOn)))
      .for("update");
    if (!from?.saleLineId)
      return refuse("rule", "This part stands in no sold system, so it cannot be moved.");
    const to = await openSaleOf(ctx, toUnitId);
    if (!to) return refuse("rule", "The system it goes into has no open sale.");
    if (to.id === from.saleLineId && from.parentUnitId === toUnitId && from.slot === slot)
      return refuse("rule", "It stands there already.");
    if (onDay < from.fromOn)
      return refuse("invalid", `It stands where it is since ${showDay(from.fromOn)}.`, {
        fields: { onDay: [`It stands where it is since ${showDay(from.fromOn)}; give a day from then on.`] },
      });
    const [inside] = await ctx.tx
      .select({ serial: units.serial, slot: installations.slot })
      .from(installations)
      .innerJoin(units, eq(units.id, installations.unitId))
      .where(and(eq(installations.parentUnitId, partUnitId), isNull(installations.toOn)))
      .limit(1);
    if (inside)
      return refuse(
        "rule",
        `${inside.serial} stands in it (${inside.slot}). Note first where the parts in it go; then move it.`,
      );
    const [taken] = await ctx.tx
      .select({ serial: units.serial })
      .from(installations)
      .innerJoin(units, eq(units.id, installations.unitId))
      .where(
        and(
          eq(installations.parentUnitId, toUnitId),
          eq(installations.slot, slot),
          isNull(installations.toOn),
        ),
      );
    if (taken)
      return refuse("conflict", `${slot} holds ${taken.serial}. Note first where that went.`, {
        fields: { slot: [`${slot} holds ${taken.serial}. Note first where that went.`] },
      });
    const [before] = await ctx.tx
      .select({ accountId: saleLines.accountId })
      .from(saleLines)
      .where(eq(saleLines.id, from.saleLineId));
    await ctx.tx
      .update(installations)
      .set({ toOn: onDay, removedReason: "moved" })
      .where(eq(installations.id, from.id));
    const origin = from.coverSaleLineId ?? from.saleLineId;
    const given = before?.accountId !== to.accountId;
    const installationId = ctx.newId();
    await ctx.tx.insert(installations).values({
      id: installationId,
      parentUnitId: toUnitId,
      unitId: partUnitId,
      slot,
      saleLineId: to.id,
      source: "moved",
      fromOn: onDay,
      swaps: from.swaps,
      coverSaleLineId: origin === to.id ? null : origin,
      givenOn: given ? onDay : from.givenOn,
      noticedOn: given ? (noticedOn ?? null) : from.noticedOn,
      createdAt: ctx.now,
    });
    await audit(ctx, {
      act: "ledger.move_part",
      subject: ["unit", partUnitId],
      before: { parentUnitId: from.parentUnitId, slot: from.slot },
      after: { parentUnitId: toUnitId, slot, onDay },
    });
    return ok({ installationId, saleLineIds: [...new Set([from.saleLineId, to.id])] });
  });
}

/** Cover of a sale rests for some days, such as while we had the unit. */
export async function pauseCover(
  ctx: Ctx,
  raw: z.input<typeof PauseCover>,
): Promise<Result<{ saleLineId: string; pauseId: string }>> {
  const may = permit(ctx, "ledger.pause");
  if (!may.ok) return may;
  const input = parse(PauseCover, raw);
  if (!input.ok) return input;
  const { unitId, from, to, reason } = input.value;
  const happened = notToCome(ctx, { from, to });
  if (!happened.ok) return happened;
  if (daysBetween(from, to) >= LONGEST_PAUSE) {
    const why = `A pause of more than ${LONGEST_PAUSE} days is no pause. Note it year by year, with the reason of each.`;
    return refuse("invalid", why, { fields: { to: [why] } });
  }
  return transact(ctx, async (ctx) => {
    const sale = await openSaleOf(ctx, unitId);
    if (!sale) return refuse("rule", "This unit has no open sale of its own; pause the system it stands in.");
    if (to < sale.shippedOn)
      return refuse("invalid", `It was shipped on ${showDay(sale.shippedOn)}; nothing rests before that.`, {
        fields: { to: [`It was shipped on ${showDay(sale.shippedOn)}; nothing rests before that.`] },
      });
    const [many] = await ctx.tx
      .select({ n: sql<number>`count(*)::int` })
      .from(coverPauses)
      .where(eq(coverPauses.saleLineId, sale.id));
    if (many!.n >= 100) return refuse("rule", "This sale has a hundred pauses already; look at them first.");
    const pauseId = ctx.newId();
    await ctx.tx
      .insert(coverPauses)
      .values({ id: pauseId, saleLineId: sale.id, fromOn: from, toOn: to, reason });
    await audit(ctx, {
      act: "ledger.pause",
      subject: ["sale_line", sale.id],
      after: { from, to, reason },
    });
    return ok({ saleLineId: sale.id, pauseId });
  });
}
