import { baseSubject } from "@/lib/mail/ids";
import { eq, sql } from "drizzle-orm";
import type { z } from "zod";
import { transact } from "@/db/client";
import { rawMails } from "@/db/schema/mail";
import { ticketParticipants, tickets } from "@/db/schema/tickets";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { serialCandidates } from "@/lib/base/serial";
import type { Ctx, TxCtx } from "@/lib/ctx";
import { addEvidence } from "@/lib/evidence/commands";
import { enqueue } from "@/lib/jobs/commands";
import { contactByEmail, unitsBySerials } from "@/lib/ledger/queries";
import { readArrival } from "@/lib/mail/arrival.queries";
import { enqueueMail, holdMail, markBounced, releaseHeld, storeInbound } from "@/lib/mail/commands";
import type { ReadMail } from "@/lib/mail/parsed";
import { filesOfMail, messageOfRaw, rawMail } from "@/lib/mail/queries";
import { AdmitHeld, DiscardHeld } from "@/lib/mail/schema";
import { addTicketUnit, openTicket, recordEntry } from "./commands";

export type Filed = {
  messageRowId: string | null;
  ticketId: string | null;
  to: "append" | "note" | "new" | "hold" | "park" | "again";
};

/**
 * Files a received mail: into its record, into a new ticket, to the held ones, or aside. One
 * transaction with everything that follows from it, the acknowledgement included; run again it
 * finds its work done.
 */
export async function fileMail(
  ctx: Ctx,
  input: { rawMailId: string; read: ReadMail },
): Promise<Result<Filed>> {
  const may = permit(ctx, "mail.receive");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [locked] = await ctx.tx
      .select({ state: rawMails.state })
      .from(rawMails)
      .where(eq(rawMails.id, input.rawMailId))
      .for("update");
    const raw = locked ? await rawMail(ctx, input.rawMailId) : null;
    if (!raw) return refuse("not_found", "This mail is not in the store.");
    if (raw.state !== "received") {
      const before = await messageOfRaw(ctx, raw.id);
      return ok<Filed>({ messageRowId: before?.id ?? null, ticketId: before?.ticketId ?? null, to: "again" });
    }
    const sender = (input.read.ok ? input.read.mail : input.read.head)?.from[0]?.email ?? raw.envelopeFrom;
    // One sender's mails are filed one after another: a reply and what it answers may come at once.
    await ctx.tx.execute(sql`select pg_advisory_xact_lock(hashtext(${`mail from ${sender.toLowerCase()}`}))`);
    const contact = await contactByEmail(ctx, sender);
    const arrival = await readArrival(ctx, raw, input.read, contact !== null);
    const { filing, message } = arrival;
    let { ticketId } = filing;
    let accountId: string | null = null;

    if (!arrival.again && filing.to === "new") {
      const opened = await openTicket(ctx, {
        accountId: contact?.accountId ?? null,
        contactId: contact?.contactId ?? null,
        personName: message.fromName || contact?.name || "",
        personEmail: message.fromEmail,
        channel: "mail",
        subject: message.subject,
        faultWords: faultWords(message.subject, arrival.words),
        receivedAt: raw.receivedAt,
      });
      if (!opened.ok) return opened;
      ticketId = opened.value.ticketId;
      accountId = contact?.accountId ?? null;
    } else if (ticketId) {
      const [ticket] = await ctx.tx
        .select({ accountId: tickets.accountId })
        .from(tickets)
        .where(eq(tickets.id, ticketId));
      accountId = ticket?.accountId ?? null;
    }

    const stored = await storeInbound(ctx, { ...message, rawMailId: raw.id, ticketId, accountId });
    if (!stored.ok) return stored;
    if (stored.value.again) return ok<Filed>({ messageRowId: null, ticketId: null, to: "again" });
    const { messageRowId } = stored.value;

    if (filing.to === "hold") {
      const held = await holdMail(ctx, {
        messageRowId,
        reason: filing.why,
        hintTicketId: filing.hintTicketId,
      });
      if (!held.ok) return held;
    }
    if (arrival.bounced) {
      const marked = await markBounced(ctx, arrival.bounced);
      if (!marked.ok) return marked;
    }
    if (ticketId && filing.to !== "hold") {
      const entry = await recordEntry(ctx, {
        ticketId,
        kind: filing.to === "note" ? "mail_noted" : "mail_in",
        line: arrival.line,
        data: { messageId: messageRowId, channel: "mail", proof: message.proof },
      });
      if (!entry.ok) return entry;
      if (filing.to !== "note") {
        const proposed = await proposeUnits(ctx, ticketId, accountId, `${message.subject}\n${arrival.words}`);
        if (!proposed.ok) return proposed;
      }
    }
    if (arrival.acknowledge && ticketId) {
      const acked = await acknowledge(ctx, ticketId, message.fromEmail, message.subject);
      if (!acked.ok) return acked;
    }
    await audit(ctx, {
      act: "mail.file",
      subject: ["message", messageRowId],
      after: { to: filing.to, ticketId, steps: message.filing },
    });
    return ok<Filed>({ messageRowId, ticketId, to: filing.to });
  });
}

/** A subject that says something is the customer's own summary; else the first line that is no greeting. */
function faultWords(subject: string, words: string): string {
  const said = baseSubject(subject);
  if (said.length >= 10 && /\s/.test(said)) return said.slice(0, 400);
  const line = words.split("\n").find((l) => l.trim().length > 16);
  return (line ?? (words.trim() || subject)).trim().slice(0, 400);
}

/**
 * Serials that the text names are proposed, and a person ties one. To a customer only their own
 * are: else a mail would tell whether a serial of somebody else is in the ledger.
 */
async function proposeUnits(
  ctx: TxCtx,
  ticketId: string,
  accountId: string | null,
  text: string,
): Promise<Result<undefined>> {
  const named = await unitsBySerials(ctx, serialCandidates(text));
  for (const unit of named.filter((u) => accountId === null || u.accountId === accountId).slice(0, 10)) {
    const has = await ctx.tx.execute(
      sql`select 1 from ticket_unit where ticket_id = ${ticketId} and unit_id = ${unit.unitId}`,
    );
    // One that a person has tied or put away stays as they left it.
    if (has.rows.length > 0) continue;
    const added = await addTicketUnit(ctx, { ticketId, unitId: unit.unitId, state: "proposed" });
    if (!added.ok) return added;
  }
  return ok();
}

async function acknowledge(
  ctx: TxCtx,
  ticketId: string,
  to: string,
  subject: string,
): Promise<Result<undefined>> {
  const [ticket] = await ctx.tx
    .select({ number: tickets.number, personName: tickets.personName, accountId: tickets.accountId })
    .from(tickets)
    .where(eq(tickets.id, ticketId));
  const sent = await enqueueMail(ctx, {
    to,
    toName: ticket!.personName,
    template: "acknowledgement",
    props: { personName: ticket!.personName, ticketNumber: ticket!.number, subject },
    ticketId,
    accountId: ticket!.accountId,
    automatic: true,
  });
  if (!sent.ok) return sent;
  const entry = await recordEntry(ctx, {
    ticketId,
    kind: "mail_auto",
    line: "Told the sender that it has come",
    data: { messageId: sent.value.messageRowId, template: "acknowledgement" },
  });
  return entry.ok ? ok() : entry;
}

/** A mail's files become evidence of its ticket, once, with one entry that names the mail. */
export async function keepMailFiles(
  ctx: Ctx,
  input: { messageRowId: string; ticketId: string; fileIds: string[]; fromName: string; left: string[] },
): Promise<Result<{ again: boolean }>> {
  const may = permit(ctx, "mail.receive");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [ticket] = await ctx.tx
      .select({ accountId: tickets.accountId })
      .from(tickets)
      .where(eq(tickets.id, input.ticketId))
      .for("update");
    if (!ticket) return refuse("not_found", "This ticket is not there.");
    if ((await filesOfMail(ctx, input)).kept) return ok<{ again: boolean }>({ again: true });
    let evidenceIds: string[] = [];
    if (input.fileIds.length > 0) {
      const added = await addEvidence(ctx, {
        fileIds: input.fileIds,
        ticketId: input.ticketId,
        accountId: ticket.accountId,
        source: "mail",
        fromName: input.fromName,
      });
      if (!added.ok) return added;
      evidenceIds = added.value.evidenceIds;
    }
    const n = evidenceIds.length;
    const came =
      n === 0
        ? "No file of the mail was kept"
        : n === 1
          ? "One file came with the mail"
          : `${n} files came with the mail`;
    const left = input.left.length > 0 ? `${n === 0 ? "" : "; not kept"}: ${input.left.join(" ")}` : "";
    const entry = await recordEntry(ctx, {
      ticketId: input.ticketId,
      kind: "evidence_added",
      line: `${came}${left}`.slice(0, 400),
      data: { evidenceIds, source: "mail", messageId: input.messageRowId },
    });
    if (!entry.ok) return entry;
    await audit(ctx, { act: "mail.files", subject: ["message", input.messageRowId], after: { evidence: n } });
    return ok<{ again: boolean }>({ again: false });
  });
}

/** A person lets a held mail in: to the ticket they name, or as a new one. Its files follow by the job. */
export async function admitHeld(
  ctx: Ctx,
  raw: z.input<typeof AdmitHeld>,
): Promise<Result<{ ticketId: string; number: number }>> {
  const may = permit(ctx, "mail.held");
  if (!may.ok) return may;
  const input = parse(AdmitHeld, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const about = await ctx.tx.execute<{
      from_email: string;
      from_name: string;
      subject: string;
      text: string;
      received_at: string;
      raw_mail_id: string | null;
      kind: string;
    }>(
      sql`select m.from_email, m.from_name, m.subject, m.text, coalesce(r.received_at, h.held_at) as received_at, m.raw_mail_id, m.kind
          from held_mail h join message m on m.id = h.message_id left join raw_mail r on r.id = m.raw_mail_id where h.id = ${v.heldId}`,
    );
    const mail = about.rows[0];
    if (!mail) return refuse("not_found", "This mail is not held any more.");
    let target: { ticketId: string; number: number; accountId: string | null };
    if (v.ticketNumber !== undefined) {
      const [found] = await ctx.tx
        .select({ ticketId: tickets.id, number: tickets.number, accountId: tickets.accountId })
        .from(tickets)
        .where(eq(tickets.number, v.ticketNumber));
      if (!found)
        return refuse("invalid", "There is no such ticket.", {
          fields: { ticketNumber: [`There is no ticket ${v.ticketNumber}.`] },
        });
      target = found;
    } else {
      const contact = await contactByEmail(ctx, mail.from_email);
      const opened = await openTicket(ctx, {
        accountId: contact?.accountId ?? null,
        contactId: contact?.contactId ?? null,
        personName: mail.from_name || contact?.name || "",
        personEmail: mail.from_email,
        channel: "mail",
        subject: mail.subject,
        faultWords: faultWords(mail.subject, mail.text),
        receivedAt: new Date(mail.received_at),
      });
      if (!opened.ok) return opened;
      target = { ...opened.value, accountId: contact?.accountId ?? null };
    }
    const released = await releaseHeld(ctx, { heldId: v.heldId, to: target });
    if (!released.ok) return released;
    const { messageRowId } = released.value;
    if (v.takesPart && v.ticketNumber !== undefined)
      await ctx.tx
        .insert(ticketParticipants)
        .values({
          id: ctx.newId(),
          ticketId: target.ticketId,
          email: mail.from_email.toLowerCase(),
          name: mail.from_name || mail.from_email,
          createdAt: ctx.now,
        })
        .onConflictDoNothing();
    const automatic = mail.kind === "auto_reply" || mail.kind === "bounce";
    const entry = await recordEntry(ctx, {
      ticketId: target.ticketId,
      kind: automatic ? "mail_noted" : "mail_in",
      line: (mail.text.split("\n").find((l) => l.trim() !== "") ?? (mail.subject || "No text"))
        .trim()
        .slice(0, 90),
      data: { messageId: messageRowId, channel: "mail", proof: "admitted" },
    });
    if (!entry.ok) return entry;
    if (!automatic) {
      const proposed = await proposeUnits(
        ctx,
        target.ticketId,
        target.accountId,
        `${mail.subject}\n${mail.text}`,
      );
      if (!proposed.ok) return proposed;
    }
    if (mail.raw_mail_id)
      await enqueue(ctx, "mail.parse", { rawMailId: mail.raw_mail_id }, { key: `raw:${mail.raw_mail_id}` });
    await audit(ctx, {
      act: "ticket.admit_mail",
      subject: ["ticket", target.ticketId],
      after: { heldId: v.heldId, takesPart: v.takesPart },
    });
    return ok({ ticketId: target.ticketId, number: target.number });
  });
}

/** A held mail that belongs nowhere. It is kept, and no record shows it. */
export async function discardHeld(ctx: Ctx, raw: z.input<typeof DiscardHeld>): Promise<Result<undefined>> {
  const may = permit(ctx, "mail.held");
  if (!may.ok) return may;
  const input = parse(DiscardHeld, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    const released = await releaseHeld(ctx, { heldId: input.value.heldId, to: null });
    if (!released.ok) return released;
    await audit(ctx, { act: "ticket.discard_mail", subject: ["held_mail", input.value.heldId] });
    return ok();
  });
}
