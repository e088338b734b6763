import { and, eq, isNull, or, sql } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { benchTests, photos, receiptLines } from "@/db/schema/dock";
import { evidence } from "@/db/schema/evidence";
import { files } from "@/db/schema/files";
import { contacts, installations, saleLines, units } from "@/db/schema/ledger";
import { messages } from "@/db/schema/mail";
import { rmaLines, rmas } from "@/db/schema/rma";
import { entries, ticketParticipants, tickets, ticketUnits } from "@/db/schema/tickets";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { serialKey } from "@/lib/base/serial";
import { storeDecision } from "@/lib/coverage/commands";
import { EVIDENCE_FOR, type Decision } from "@/lib/coverage/schema";
import { actorName, type Ctx, type TxCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { addEvidence } from "@/lib/evidence/commands";
import { saleCase } from "@/lib/coverage/queries";
import { defaultSite } from "@/lib/ledger/queries";
import { enqueueMail, storePortalMessage } from "@/lib/mail/commands";
import { customerSeesByDefault, letterOf, NEW_TICKET, step, type TicketState } from "./rules";
import {
  AddNote,
  AddTicketUnit,
  AskEvidence,
  AttachEvidence,
  OpenTicket,
  RecordEntry,
  Reply,
  TakeDecision,
  TieUnit,
  type EntryLetter,
} from "./schema";

/** Opens a ticket. Its first entry is the caller's, in the same transaction. */
export async function openTicket(
  ctx: Ctx,
  raw: z.input<typeof OpenTicket>,
): Promise<Result<{ ticketId: string; number: number }>> {
  const may = permit(ctx, "ticket.open");
  if (!may.ok) return may;
  const input = parse(OpenTicket, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const next = await ctx.tx.execute<{ n: string }>(sql`select nextval('ticket_number') as n`);
    const number = Number(next.rows[0]!.n);
    const ticketId = ctx.newId();
    const email = v.personEmail.toLowerCase();
    await ctx.tx.insert(tickets).values({
      id: ticketId,
      number,
      accountId: v.accountId ?? null,
      contactId: v.contactId ?? null,
      personName: v.personName || email,
      personEmail: email,
      channel: v.channel,
      subject: v.subject,
      faultWords: v.faultWords || v.subject || "no words yet",
      receivedAt: v.receivedAt,
      claimOn: civilDayIn(v.receivedAt, env().MENDBAY_ZONE),
      ...NEW_TICKET,
      lastEntryAt: v.receivedAt,
      lastEntryLine: "",
      createdAt: ctx.now,
    });
    await ctx.tx
      .insert(ticketParticipants)
      .values({ id: ctx.newId(), ticketId, email, name: v.personName || email, createdAt: ctx.now });
    await audit(ctx, {
      act: "ticket.open",
      subject: ["ticket", ticketId],
      after: { number, channel: v.channel },
    });
    return ok({ ticketId, number });
  });
}

/**
 * Writes one entry of the record and steps the ticket's derived state with it.
 * The reference (M1, E1, …) comes from the database under the ticket's lock.
 */
export async function recordEntry(
  ctx: Ctx,
  raw: z.input<typeof RecordEntry>,
): Promise<Result<{ entryId: string; ref: string }>> {
  const may = permit(ctx, "ticket.record");
  if (!may.ok) return may;
  const input = parse(RecordEntry, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const letter: EntryLetter = letterOf(v.kind);
    const next = await ctx.tx.execute<{ number: number; seq: number }>(
      sql`select number, seq from mendbay_next_entry(${v.ticketId}, ${letter}::entry_letter)`,
    );
    const { number, seq } = next.rows[0]!;
    const [ticket] = await ctx.tx.select().from(tickets).where(eq(tickets.id, v.ticketId));
    if (!ticket) return refuse("not_found", "This ticket is not there.");
    const entryId = ctx.newId();
    const { actor } = ctx;
    await ctx.tx.insert(entries).values({
      id: entryId,
      ticketId: v.ticketId,
      accountId: ticket.accountId,
      letter,
      number,
      kind: v.kind,
      at: ctx.now,
      actorKind: actor.kind,
      actorId: actor.kind === "staff" || actor.kind === "customer" ? actor.userId : null,
      actorName: actorName(actor),
      customerSees: v.customerSees ?? customerSeesByDefault(v.kind),
      line: v.line,
      data: v.data,
      seq,
    });
    const before: TicketState = ticket;
    const after = step(before, { kind: v.kind, at: ctx.now, data: v.data }, await defaultSite(ctx));
    await ctx.tx
      .update(tickets)
      .set({
        ...pick(after),
        lastEntryAt: ctx.now,
        lastEntryLine: v.line,
        version: sql`${tickets.version} + 1`,
      })
      .where(eq(tickets.id, v.ticketId));
    await audit(ctx, {
      act: `entry.${v.kind}`,
      subject: ["ticket", v.ticketId],
      after: { ref: `${letter}${number}`, line: v.line },
    });
    return ok({ entryId, ref: `${letter}${number}` });
  });
}

function pick(s: TicketState): TicketState {
  return {
    waitingOn: s.waitingOn,
    waitingFor: s.waitingFor,
    clockStartedAt: s.clockStartedAt,
    dueAt: s.dueAt,
    chaseOn: s.chaseOn,
    closedAt: s.closedAt,
    evidenceWanted: s.evidenceWanted,
    evidenceCame: s.evidenceCame,
  };
}

async function ticketOf(ctx: TxCtx, id: string) {
  const [row] = await ctx.tx.select().from(tickets).where(eq(tickets.id, id));
  return row ?? null;
}

/** Puts a unit on a ticket: proposed by the machine, or tied by who reports it. */
export async function addTicketUnit(
  ctx: Ctx,
  raw: z.input<typeof AddTicketUnit>,
): Promise<Result<{ ticketUnitId: string }>> {
  const may = permit(ctx, "ticket.record");
  if (!may.ok) return may;
  const input = parse(AddTicketUnit, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const ticket = await ticketOf(ctx, v.ticketId);
    if (!ticket) return refuse("not_found", "This ticket is not there.");
    const [place] = await ctx.tx
      .select({ systemUnitId: saleLines.unitId, slot: installations.slot })
      .from(installations)
      .leftJoin(saleLines, eq(saleLines.id, installations.saleLineId))
      .where(and(eq(installations.unitId, v.unitId), isNull(installations.toOn)))
      .limit(1);
    const id = ctx.newId();
    const values = {
      state: v.state,
      systemUnitId: place?.systemUnitId ?? null,
      slot: place?.slot ?? null,
      faultClass: v.faultClass ?? null,
      faultWords: v.faultWords,
      answers: v.answers,
      ...(v.claimOn ? { claimOn: v.claimOn } : {}),
    };
    const [row] = await ctx.tx
      .insert(ticketUnits)
      .values({
        id,
        ticketId: v.ticketId,
        accountId: ticket.accountId,
        unitId: v.unitId,
        ...values,
        createdAt: ctx.now,
      })
      .onConflictDoUpdate({ target: [ticketUnits.ticketId, ticketUnits.unitId], set: values })
      .returning({ id: ticketUnits.id });
    await audit(ctx, {
      act: "ticket.add_unit",
      subject: ["ticket", v.ticketId],
      after: { unitId: v.unitId, state: v.state },
    });
    return ok({ ticketUnitId: row!.id });
  });
}

/** A person ties a unit: what the machine proposed, or another one. A stranger's ticket finds its account by it. */
export async function tieUnit(
  ctx: Ctx,
  raw: z.input<typeof TieUnit>,
): Promise<Result<{ ticketUnitId: string; ref: string }>> {
  const may = permit(ctx, "ticket.tie");
  if (!may.ok) return may;
  const input = parse(TieUnit, raw);
  if (!input.ok) return input;
  const { ticketId, unitId, namedIn } = input.value;
  return transact(ctx, async (ctx) => {
    const ticket = await ticketOf(ctx, ticketId);
    if (!ticket) return refuse("not_found", "This ticket is not there.");
    let claimOn: string | null = null;
    if (namedIn) {
      const [entry] = await ctx.tx
        .select({ at: entries.at })
        .from(entries)
        .where(
          and(
            eq(entries.ticketId, ticketId),
            sql`${entries.letter}::text || ${entries.number}::text = ${namedIn}`,
          ),
        );
      if (!entry)
        return refuse("invalid", `This record has no entry ${namedIn}.`, {
          fields: {
            namedIn: [`This record has no entry ${namedIn}. Its references stand beside the entries.`],
          },
        });
      claimOn = civilDayIn(entry.at, env().MENDBAY_ZONE);
      // Nobody claims a unit before the ticket's own first receipt.
      if (claimOn < ticket.claimOn) claimOn = ticket.claimOn;
    }
    const sale = await saleCase(ctx, unitId);
    if (!sale) return refuse("rule", "This unit has no sale in the ledger. Look at the serial again.");
    if (ticket.accountId && ticket.accountId !== sale.sale.accountId) {
      return refuse(
        "rule",
        `This unit was sold to ${sale.sale.accountName}, and the ticket belongs to another customer.`,
      );
    }
    if (!ticket.accountId) {
      const { accountId } = sale.sale;
      const [contact] = await ctx.tx
        .select({ id: contacts.id })
        .from(contacts)
        .where(and(eq(contacts.email, ticket.personEmail), eq(contacts.accountId, accountId)));
      await ctx.tx
        .update(tickets)
        .set({ accountId, contactId: contact?.id ?? null })
        .where(eq(tickets.id, ticketId));
      await ctx.tx.update(messages).set({ accountId }).where(eq(messages.ticketId, ticketId));
      await ctx.tx.update(evidence).set({ accountId }).where(eq(evidence.ticketId, ticketId));
      await ctx.tx.update(ticketUnits).set({ accountId }).where(eq(ticketUnits.ticketId, ticketId));
      await ctx.tx
        .update(files)
        .set({ accountId })
        .where(sql`${files.id} in (select file_id from evidence where ticket_id = ${ticketId})`);
    }
    const tied = await addTicketUnit(ctx, {
      ticketId,
      unitId,
      state: "tied",
      faultWords: ticket.faultWords,
      claimOn,
    });
    if (!tied.ok) return tied;
    await ctx.tx
      .update(ticketUnits)
      .set({ accountId: sale.sale.accountId })
      .where(eq(ticketUnits.id, tied.value.ticketUnitId));
    const [unit] = await ctx.tx.select({ serial: units.serial }).from(units).where(eq(units.id, unitId));
    const entry = await recordEntry(ctx, {
      ticketId,
      kind: "unit_tied",
      line: `${unit!.serial} tied to this ticket`,
      data: { unitId, serial: unit!.serial, ...(claimOn ? { namedIn, claimOn } : {}) },
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "ticket.tie", subject: ["ticket", ticketId], after: { unitId } });
    return ok({ ticketUnitId: tied.value.ticketUnitId, ref: entry.value.ref });
  });
}

/** The proposed unit is not the one. */
export async function dismissUnit(ctx: Ctx, raw: z.input<typeof TieUnit>): Promise<Result<undefined>> {
  const may = permit(ctx, "ticket.tie");
  if (!may.ok) return may;
  const input = parse(TieUnit, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    await ctx.tx
      .update(ticketUnits)
      .set({ state: "dismissed" })
      .where(
        and(
          eq(ticketUnits.ticketId, input.value.ticketId),
          eq(ticketUnits.unitId, input.value.unitId),
          eq(ticketUnits.state, "proposed"),
        ),
      );
    await audit(ctx, {
      act: "ticket.dismiss_unit",
      subject: ["ticket", input.value.ticketId],
      after: { unitId: input.value.unitId },
    });
    return ok();
  });
}

/** Takes the coverage decision for one unit of the ticket and enters it, whole, into the record. */
export async function takeDecision(
  ctx: Ctx,
  raw: z.input<typeof TakeDecision>,
): Promise<Result<{ decisionId: string; ref: string; decision: Decision }>> {
  const may = permit(ctx, "cover.decide");
  if (!may.ok) return may;
  const input = parse(TakeDecision, raw);
  if (!input.ok) return input;
  const v = input.value;
  // What the evidence shows is a person's finding, never the claimant's.
  const staff = ctx.actor.kind === "staff";
  const established = staff ? v.established : [];
  const ruledOut = staff ? v.ruledOut : [];
  const both = established.find((x) => ruledOut.includes(x));
  if (both)
    return refuse("invalid", "A clause is shown or ruled out, not both.", {
      fields: { ruledOut: ["A clause is shown or ruled out, not both. Choose one."] },
    });
  return transact(ctx, async (ctx) => {
    const ticket = await ticketOf(ctx, v.ticketId);
    const [tied] = await ctx.tx
      .select({
        id: ticketUnits.id,
        unitId: ticketUnits.unitId,
        slot: ticketUnits.slot,
        serial: units.serial,
        state: ticketUnits.state,
        claimOn: ticketUnits.claimOn,
      })
      .from(ticketUnits)
      .innerJoin(units, eq(units.id, ticketUnits.unitId))
      .where(and(eq(ticketUnits.id, v.ticketUnitId), eq(ticketUnits.ticketId, v.ticketId)));
    if (!ticket || !tied) return refuse("not_found", "This unit is not on the ticket.");
    if (tied.state !== "tied")
      return refuse("rule", "Tie the unit first: a decision is about a unit that a person has named.");
    await ctx.tx.update(ticketUnits).set({ faultClass: v.faultClass }).where(eq(ticketUnits.id, tied.id));
    const kinds = await ctx.tx
      .select({ kind: evidence.kind, n: sql<number>`count(*)::int` })
      .from(evidence)
      .where(eq(evidence.ticketId, v.ticketId))
      .groupBy(evidence.kind);
    const n = (k: string) => kinds.find((x) => x.kind === k)?.n ?? 0;
    // What dock and bench saw of this unit is evidence too; a customer's own report comes before either.
    const ours = !staff
      ? undefined
      : (
          await ctx.tx
            .select({ n: sql<number>`count(distinct ${photos.id})::int` })
            .from(rmaLines)
            .innerJoin(rmas, eq(rmas.id, rmaLines.rmaId))
            .leftJoin(receiptLines, eq(receiptLines.rmaLineId, rmaLines.id))
            .leftJoin(benchTests, eq(benchTests.rmaLineId, rmaLines.id))
            .innerJoin(photos, or(eq(photos.subjectId, receiptLines.id), eq(photos.subjectId, benchTests.id)))
            .where(and(eq(rmas.ticketId, v.ticketId), eq(rmaLines.unitId, tied.unitId)))
        )[0];
    const [open] = await ctx.tx
      .select({ number: rmas.number })
      .from(rmaLines)
      .innerJoin(rmas, eq(rmas.id, rmaLines.rmaId))
      .where(
        and(
          eq(rmaLines.unitId, tied.unitId),
          sql`${rmaLines.state} in ('open','received','tested')`,
          ticket.accountId ? eq(rmas.accountId, ticket.accountId) : undefined,
        ),
      );
    const stored = await storeDecision(ctx, {
      ticketId: v.ticketId,
      ticketUnitId: tied.id,
      unitId: tied.unitId,
      claimOn: tied.claimOn ?? ticket.claimOn,
      faultClass: v.faultClass,
      what: tied.slot
        ? `${tied.slot.charAt(0).toLowerCase()}${tied.slot.slice(1)}, ${tied.serial}`
        : tied.serial,
      evidence: { photos: n("photo") + n("video") + (ours?.n ?? 0), logs: n("log") },
      established,
      ruledOut,
      readings: staff
        ? {
            powerOnHours: v.powerOnHours,
            bytesWritten: v.terabytesWritten === undefined ? undefined : v.terabytesWritten * 1e12,
            ...(v.logSerial
              ? { serial: v.logSerial, serialMatches: serialKey(v.logSerial) === serialKey(tied.serial) }
              : {}),
          }
        : {},
      openRma: open?.number ?? null,
    });
    if (!stored.ok) return stored;
    const { decision, decisionId } = stored.value;
    const entry = await recordEntry(ctx, {
      ticketId: v.ticketId,
      kind: "decision",
      line: decision.headline.staff,
      data: {
        decisionId,
        outcome: decision.outcome,
        unitSerial: tied.serial,
        clauseNumber: decision.clauseNumber,
        lastCoveredOn: decision.lastCoveredOn,
        shown: ctx.actor.kind === "customer",
      },
    });
    if (!entry.ok) return entry;
    await audit(ctx, {
      act: "ticket.decide",
      subject: ["ticket", v.ticketId],
      after: { decisionId, outcome: decision.outcome },
    });
    return ok({ decisionId, ref: entry.value.ref, decision });
  });
}

/** Refuses when the ticket has moved on since the caller read it. Holds its lock until the end. */
async function atVersion(
  ctx: TxCtx,
  ticketId: string,
  version: number | undefined,
): Promise<Result<undefined>> {
  if (version === undefined) return ok();
  const [now] = await ctx.tx
    .select({ version: tickets.version })
    .from(tickets)
    .where(eq(tickets.id, ticketId))
    .for("update");
  if (!now || now.version === version) return ok();
  return refuse("stale", "The ticket has changed since you read it. Read it again.", {
    details: { version: now.version },
  });
}

/** A person of the desk answers, or the customer answers in the portal. Both are in one record. */
export async function reply(
  ctx: Ctx,
  raw: z.input<typeof Reply>,
  version?: number,
): Promise<Result<{ ref: string }>> {
  const may = permit(ctx, "ticket.reply");
  if (!may.ok) return may;
  const input = parse(Reply, raw);
  if (!input.ok) return input;
  const { ticketId, text } = input.value;
  return transact(ctx, async (ctx) => {
    const current = await atVersion(ctx, ticketId, version);
    if (!current.ok) return current;
    const ticket = await ticketOf(ctx, ticketId);
    if (!ticket) return refuse("not_found", "This ticket is not there.");
    const first = text.split("\n").find((l) => l.trim() !== "") ?? text;
    const line = first.length > 90 ? `${first.slice(0, 88)}…` : first;
    if (ctx.actor.kind === "customer") {
      const kept = await storePortalMessage(ctx, {
        ticketId,
        accountId: ctx.actor.accountId,
        fromEmail: ctx.actor.email,
        fromName: ctx.actor.name,
        text,
      });
      if (!kept.ok) return kept;
      const entry = await recordEntry(ctx, {
        ticketId,
        kind: "mail_in",
        line,
        data: { messageId: kept.value.messageRowId, channel: "portal" },
      });
      if (!entry.ok) return entry;
      await audit(ctx, { act: "ticket.reply", subject: ["ticket", ticketId] });
      return ok({ ref: entry.value.ref });
    }
    const sent = await enqueueMail(ctx, {
      to: ticket.personEmail,
      toName: ticket.personName,
      template: "reply",
      props: {
        personName: ticket.personName,
        ticketNumber: ticket.number,
        text,
        byName: actorName(ctx.actor),
      },
      ticketId,
      accountId: ticket.accountId,
      automatic: false,
    });
    if (!sent.ok) return sent;
    const entry = await recordEntry(ctx, {
      ticketId,
      kind: "mail_out",
      line,
      data: { messageId: sent.value.messageRowId },
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "ticket.reply", subject: ["ticket", ticketId] });
    return ok({ ref: entry.value.ref });
  });
}

/** Asks for evidence, each piece with why it helps. */
export async function askEvidence(
  ctx: Ctx,
  raw: z.input<typeof AskEvidence>,
): Promise<Result<{ ref: string }>> {
  const may = permit(ctx, "ticket.ask");
  if (!may.ok) return may;
  const input = parse(AskEvidence, raw);
  if (!input.ok) return input;
  const { ticketId, wanted, text } = input.value;
  return transact(ctx, async (ctx) => {
    const ticket = await ticketOf(ctx, ticketId);
    if (!ticket) return refuse("not_found", "This ticket is not there.");
    const known = Object.values(EVIDENCE_FOR).flat();
    const sent = await enqueueMail(ctx, {
      to: ticket.personEmail,
      toName: ticket.personName,
      template: "evidence_wanted",
      props: {
        personName: ticket.personName,
        ticketNumber: ticket.number,
        serial: null,
        wanted: wanted.map((what) => ({ what, why: known.find((k) => k.what === what)?.why ?? "" })),
        text,
        link: ticket.accountId ? `${env().MENDBAY_URL}/cases/${ticket.number}` : null,
      },
      ticketId,
      accountId: ticket.accountId,
      automatic: false,
    });
    if (!sent.ok) return sent;
    const entry = await recordEntry(ctx, {
      ticketId,
      kind: "evidence_wanted",
      line: `Asked for ${wanted.join(", ")}`,
      data: { wanted, text, messageId: sent.value.messageRowId },
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "ticket.ask", subject: ["ticket", ticketId], after: { wanted } });
    return ok({ ref: entry.value.ref });
  });
}

/** A note that no customer ever sees. */
export async function addNote(
  ctx: Ctx,
  raw: z.input<typeof AddNote>,
  version?: number,
): Promise<Result<{ ref: string }>> {
  const may = permit(ctx, "ticket.note");
  if (!may.ok) return may;
  const input = parse(AddNote, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    const { ticketId, text } = input.value;
    const current = await atVersion(ctx, ticketId, version);
    if (!current.ok) return current;
    const entry = await recordEntry(ctx, {
      ticketId,
      kind: "note",
      line: text.length > 90 ? `${text.slice(0, 88)}…` : text.replace(/\s+/g, " "),
      data: { text },
      customerSees: false,
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "ticket.note", subject: ["ticket", ticketId] });
    return ok({ ref: entry.value.ref });
  });
}

/** Files become evidence of a ticket, with one entry for all that came together. */
export async function attachEvidence(
  ctx: Ctx,
  raw: z.input<typeof AttachEvidence>,
): Promise<Result<{ ref: string; evidenceIds: string[] }>> {
  const may = permit(ctx, "evidence.add");
  if (!may.ok) return may;
  const input = parse(AttachEvidence, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const ticket = await ticketOf(ctx, v.ticketId);
    if (!ticket) return refuse("not_found", "This ticket is not there.");
    const added = await addEvidence(ctx, {
      fileIds: v.fileIds,
      ticketId: v.ticketId,
      ticketUnitId: v.ticketUnitId ?? null,
      accountId: ticket.accountId,
      source: v.source,
      fromName: v.fromName,
    });
    if (!added.ok) return added;
    const n = added.value.evidenceIds.length;
    const entry = await recordEntry(ctx, {
      ticketId: v.ticketId,
      kind: "evidence_added",
      line: n === 1 ? "One piece of evidence" : `${n} pieces of evidence`,
      data: { evidenceIds: added.value.evidenceIds, source: v.source },
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "ticket.attach", subject: ["ticket", v.ticketId], after: { evidence: n } });
    return ok({ ref: entry.value.ref, evidenceIds: added.value.evidenceIds });
  });
}

/** Nothing more to do here. A later mail opens it again. */
export async function closeTicket(
  ctx: Ctx,
  raw: { ticketId: string; reason: string },
): Promise<Result<{ ref: string }>> {
  const may = permit(ctx, "ticket.close");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const entry = await recordEntry(ctx, {
      ticketId: raw.ticketId,
      kind: "closed",
      line: raw.reason || "Closed",
      data: {},
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "ticket.close", subject: ["ticket", raw.ticketId] });
    return ok({ ref: entry.value.ref });
  });
}
