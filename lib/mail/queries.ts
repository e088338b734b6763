import { and, asc, count, desc, eq, gt, inArray, or, sql } from "drizzle-orm";
import { read } from "@/db/client";
import { heldMails, messages, outbox, rawMails } from "@/db/schema/mail";
import { entries, ticketParticipants, tickets } from "@/db/schema/tickets";
import type { Ctx } from "@/lib/ctx";
import type { FilingTicket } from "./filing";
import type { DeadLetter, HeldView } from "./schema";
import { readReplyAddress, tokenHolds } from "./token.io";

export type RawMail = {
  id: string;
  receivedAt: Date;
  envelopeFrom: string;
  envelopeTo: string[];
  sha256: string;
  state: "received" | "parsed" | "unreadable" | "duplicate";
  bytes: Buffer;
};

export async function rawMail(ctx: Ctx, id: string): Promise<RawMail | null> {
  return read(ctx, async (tx) => {
    const [row] = await tx
      .select({
        id: rawMails.id,
        receivedAt: rawMails.receivedAt,
        envelopeFrom: rawMails.envelopeFrom,
        envelopeTo: rawMails.envelopeTo,
        sha256: rawMails.sha256,
        state: rawMails.state,
        bytes: rawMails.bytes,
      })
      .from(rawMails)
      .where(eq(rawMails.id, id));
    return row ?? null;
  });
}

/** The stored message of a raw mail, when it has been filed already. */
export async function messageOfRaw(ctx: Ctx, rawMailId: string) {
  return read(ctx, async (tx) => {
    const [row] = await tx
      .select({
        id: messages.id,
        ticketId: messages.ticketId,
        fromName: messages.fromName,
        fromEmail: messages.fromEmail,
      })
      .from(messages)
      .where(eq(messages.rawMailId, rawMailId));
    return row ?? null;
  });
}

async function withParticipants(
  ctx: Ctx,
  found: { ticketId: string; number: number; closedAt: Date | null }[],
): Promise<FilingTicket[]> {
  if (found.length === 0) return [];
  const people = await read(ctx, (tx) =>
    tx
      .select({ ticketId: ticketParticipants.ticketId, email: ticketParticipants.email })
      .from(ticketParticipants)
      .where(
        inArray(
          ticketParticipants.ticketId,
          found.map((f) => f.ticketId),
        ),
      ),
  );
  return found.map((f) => ({
    ...f,
    participants: people.filter((p) => p.ticketId === f.ticketId).map((p) => p.email.toLowerCase()),
  }));
}

const TICKET = { ticketId: tickets.id, number: tickets.number, closedAt: tickets.closedAt };

/** The ticket of the first address among these that we signed. `bad`: one of our form that we did not. */
export async function ticketOfAddress(
  ctx: Ctx,
  addresses: readonly string[],
): Promise<{ ticket: FilingTicket | null; bad: boolean }> {
  let bad = false;
  for (const address of [...new Set(addresses)].slice(0, 20)) {
    const reading = readReplyAddress(address);
    if (!reading) continue;
    const rows = await read(ctx, (tx) =>
      tx.select(TICKET).from(tickets).where(eq(tickets.number, reading.ticketNumber)).limit(1),
    );
    const [ticket] = await withParticipants(ctx, rows);
    if (ticket && tokenHolds(reading, ticket.participants)) return { ticket, bad: false };
    bad = true;
  }
  return { ticket: null, bad };
}

/**
 * Tickets that message ids lead to, in the order of the ids. Only ids of mails that we sent, and of
 * mails by the same sender, are known here: an id of somebody else's mail leads nowhere.
 * `own` is the id of the mail itself: a reply may have come before what it answers.
 */
export async function ticketsOfIds(
  ctx: Ctx,
  ids: readonly string[],
  own: string | null,
  fromEmail: string,
): Promise<FilingTicket[]> {
  const asked = [...new Set(ids)].slice(0, 60);
  if (asked.length === 0 && !own) return [];
  const rows = await read(ctx, (tx) =>
    tx
      .select({ ...TICKET, messageId: messages.messageId })
      .from(messages)
      .innerJoin(tickets, eq(tickets.id, messages.ticketId))
      .where(
        or(
          asked.length > 0
            ? and(
                inArray(messages.messageId, asked),
                or(eq(messages.direction, "out"), eq(messages.fromEmail, fromEmail)),
              )
            : undefined,
          own
            ? and(
                eq(messages.direction, "in"),
                eq(messages.fromEmail, fromEmail),
                or(eq(messages.inReplyTo, own), sql`${own} = any(${messages.references})`),
              )
            : undefined,
        ),
      )
      .orderBy(asc(messages.sentAt))
      .limit(60),
  );
  const place = (id: string) => (asked.includes(id) ? asked.indexOf(id) : asked.length);
  const sorted = [...rows].sort((a, b) => place(a.messageId) - place(b.messageId));
  const once = sorted.filter((r, i) => sorted.findIndex((x) => x.ticketId === r.ticketId) === i);
  return withParticipants(
    ctx,
    once.map(({ ticketId, number, closedAt }) => ({ ticketId, number, closedAt })),
  );
}

/** A mail of ours by its Message-ID: what came back, or what an arrival pretends to be. */
export async function sentByUs(ctx: Ctx, ids: readonly string[]) {
  if (ids.length === 0) return null;
  const rows = await read(ctx, (tx) =>
    tx
      .select({ messageRowId: messages.id, toEmails: messages.toEmails, ticketId: messages.ticketId })
      .from(messages)
      .where(and(eq(messages.direction, "out"), inArray(messages.messageId, ids.slice(0, 20))))
      .limit(1),
  );
  return rows[0] ?? null;
}

export async function ticketForFiling(ctx: Ctx, ticketId: string): Promise<FilingTicket | null> {
  const rows = await read(ctx, (tx) => tx.select(TICKET).from(tickets).where(eq(tickets.id, ticketId)));
  return (await withParticipants(ctx, rows))[0] ?? null;
}

/** A ticket that somebody names by its number: for a hint, never for filing. */
export async function ticketNamed(ctx: Ctx, number: number) {
  const rows = await read(ctx, (tx) =>
    tx
      .select({ ticketId: tickets.id, number: tickets.number })
      .from(tickets)
      .where(eq(tickets.number, number)),
  );
  return rows[0] ?? null;
}

export async function alreadyStored(ctx: Ctx, messageId: string, contentHash: string): Promise<boolean> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({ id: messages.id })
      .from(messages)
      .where(
        and(
          eq(messages.direction, "in"),
          eq(messages.messageId, messageId),
          eq(messages.contentHash, contentHash),
        ),
      )
      .limit(1),
  );
  return rows.length > 0;
}

/** Whether the files of a mail are in the record already, and whose the ticket is. */
export async function filesOfMail(
  ctx: Ctx,
  at: { ticketId: string; messageRowId: string },
): Promise<{ kept: boolean; accountId: string | null }> {
  return read(ctx, async (tx) => {
    const [ticket] = await tx
      .select({ accountId: tickets.accountId })
      .from(tickets)
      .where(eq(tickets.id, at.ticketId));
    const found = await tx
      .select({ id: entries.id })
      .from(entries)
      .where(
        and(
          eq(entries.ticketId, at.ticketId),
          eq(entries.kind, "evidence_added"),
          sql`${entries.data} ->> 'messageId' = ${at.messageRowId}`,
        ),
      )
      .limit(1);
    return { kept: found.length > 0, accountId: ticket?.accountId ?? null };
  });
}

/** What we wrote on a ticket before, newest first: it is known again in a reply. */
export async function sentTexts(ctx: Ctx, ticketId: string): Promise<string[]> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({ text: messages.text })
      .from(messages)
      .where(and(eq(messages.ticketId, ticketId), eq(messages.direction, "out")))
      .orderBy(desc(messages.sentAt))
      .limit(20),
  );
  return rows.map((r) => r.text);
}

export async function acksSince(ctx: Ctx, email: string, since: Date): Promise<number> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({ n: count() })
      .from(outbox)
      .where(
        and(eq(outbox.template, "acknowledgement"), eq(outbox.toEmail, email), gt(outbox.createdAt, since)),
      ),
  );
  return rows[0]?.n ?? 0;
}

export const HELD_LIMIT = 100;

/** Mail that waits for a person's look, oldest first. */
export async function heldList(ctx: Ctx): Promise<HeldView[]> {
  return read(ctx, (tx) =>
    tx
      .select({
        heldId: heldMails.id,
        heldAt: heldMails.heldAt,
        reason: heldMails.reason,
        hintTicketNumber: tickets.number,
        kind: messages.kind,
        fromEmail: messages.fromEmail,
        fromName: messages.fromName,
        subject: messages.subject,
        text: sql<string>`left(${messages.text}, 4000)`,
        sentAt: messages.sentAt,
        filing: messages.filing,
      })
      .from(heldMails)
      .innerJoin(messages, eq(messages.id, heldMails.messageId))
      .leftJoin(tickets, eq(tickets.id, heldMails.hintTicketId))
      .where(eq(heldMails.state, "held"))
      .orderBy(asc(heldMails.heldAt), asc(heldMails.id))
      .limit(HELD_LIMIT),
  );
}

/** How many wait, for the desk: counted to a bound. */
export async function heldCount(ctx: Ctx): Promise<number> {
  return read(ctx, async (tx) => {
    const result = await tx.execute<{ n: number }>(
      sql`select count(*)::int as n from (select 1 from held_mail where state = 'held' limit 500) h`,
    );
    return result.rows[0]?.n ?? 0;
  });
}

/** Mails of ours that could not be delivered, newest first. */
export async function deadLetters(ctx: Ctx): Promise<DeadLetter[]> {
  return read(ctx, (tx) =>
    tx
      .select({
        outboxId: outbox.id,
        toEmail: outbox.toEmail,
        template: outbox.template,
        attempts: outbox.attempts,
        error: outbox.lastError,
        createdAt: outbox.createdAt,
        subject: messages.subject,
        ticketNumber: tickets.number,
      })
      .from(outbox)
      .innerJoin(messages, eq(messages.id, outbox.messageRowId))
      .leftJoin(tickets, eq(tickets.id, outbox.ticketId))
      .where(eq(outbox.state, "dead"))
      .orderBy(desc(outbox.createdAt), desc(outbox.id))
      .limit(HELD_LIMIT),
  );
}
