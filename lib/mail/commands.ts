import { createHash } from "node:crypto";
import { and, desc, eq, inArray, lt, or, sql } from "drizzle-orm";
import { transact } from "@/db/client";
import { heldMails, messages, outbox, rawMails } from "@/db/schema/mail";
import { tickets } from "@/db/schema/tickets";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { enqueue } from "@/lib/jobs/commands";
import { replyReferences } from "./ids";
import { backoffSeconds, headerText, MAX_ATTEMPTS, subjectFor } from "./rules";
import { TEMPLATE_PROPS, type EnqueueMail, type MailKind, type TemplateProps } from "./schema";
import { replyAddress } from "./token.io";

/**
 * Puts a mail into the outbox in the caller's transaction. Its Message-ID is fixed here, so that
 * every try, also after a crash, is the same message. It answers the newest mail of the ticket.
 */
export async function enqueueMail(
  ctx: Ctx,
  input: EnqueueMail,
): Promise<Result<{ messageRowId: string; outboxId: string; messageId: string }>> {
  const may = permit(ctx, "mail.enqueue");
  if (!may.ok) return may;
  const props = parse(TEMPLATE_PROPS[input.template], input.props);
  if (!props.ok) throw new Error(`${input.template}: ${JSON.stringify(props.refusal.fields)}`);
  return transact(ctx, async (ctx) => {
    const to = input.to.trim();
    const [ticket] = input.ticketId
      ? await ctx.tx
          .select({ number: tickets.number, subject: tickets.subject })
          .from(tickets)
          .where(eq(tickets.id, input.ticketId))
      : [];
    const [parent] = input.ticketId
      ? await ctx.tx
          .select({
            messageId: messages.messageId,
            references: messages.references,
            inReplyTo: messages.inReplyTo,
          })
          .from(messages)
          .where(eq(messages.ticketId, input.ticketId))
          .orderBy(desc(messages.sentAt))
          .limit(1)
      : [];
    const messageRowId = ctx.newId();
    const outboxId = ctx.newId();
    const messageId = `<${messageRowId}@${env().MENDBAY_MAIL_DOMAIN}>`;
    const subject = subjectFor(
      input.template,
      props.value as TemplateProps[typeof input.template],
      ticket?.subject || "your message",
    );
    const text = input.template === "reply" ? String((props.value as TemplateProps["reply"]).text) : "";
    await ctx.tx.insert(messages).values({
      id: messageRowId,
      direction: "out",
      ticketId: input.ticketId ?? null,
      accountId: input.accountId ?? null,
      messageId,
      inReplyTo: parent?.messageId ?? null,
      references: parent
        ? replyReferences({ ...parent, inReplyTo: parent.inReplyTo ? [parent.inReplyTo] : [] })
        : [],
      kind: "person",
      fromEmail: env().MENDBAY_MAIL_FROM,
      fromName: env().MENDBAY_SELLER,
      toEmails: [to],
      subject,
      sentAt: ctx.now,
      text,
      proof: "ours",
      contentHash: createHash("sha256").update(messageRowId).digest("hex"),
    });
    await ctx.tx.insert(outbox).values({
      id: outboxId,
      messageRowId,
      ticketId: input.ticketId ?? null,
      toEmail: to,
      toName: headerText(input.toName ?? ""),
      template: input.template,
      props: props.value as Record<string, unknown>,
      automatic: input.automatic,
      attachments: input.attachments ?? [],
      replyTo: ticket ? replyAddress(ticket.number, to) : null,
      state: "pending",
      nextAt: ctx.now,
      createdAt: ctx.now,
    });
    await audit(ctx, {
      act: "mail.enqueue",
      subject: ["message", messageRowId],
      after: { template: input.template, ticketId: input.ticketId ?? null },
    });
    await enqueue(ctx, "mail.send", { outboxId }, { key: `mail:${outboxId}` });
    return ok({ messageRowId, outboxId, messageId });
  });
}

/** What a customer writes in the portal: the same record as a mail of theirs. */
export async function storePortalMessage(
  ctx: Ctx,
  input: { ticketId: string; accountId: string; fromEmail: string; fromName: string; text: string },
): Promise<Result<{ messageRowId: string }>> {
  const may = permit(ctx, "mail.enqueue");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const id = ctx.newId();
    await ctx.tx.insert(messages).values({
      id,
      direction: "in",
      ticketId: input.ticketId,
      accountId: input.accountId,
      messageId: `<portal-${id}@${env().MENDBAY_MAIL_DOMAIN}>`,
      kind: "person",
      fromEmail: input.fromEmail,
      fromName: input.fromName,
      toEmails: [env().MENDBAY_MAIL_FROM],
      subject: "",
      sentAt: ctx.now,
      text: input.text,
      proof: "signed_in",
      contentHash: createHash("sha256").update(id).digest("hex"),
    });
    await audit(ctx, { act: "mail.portal_message", subject: ["message", id] });
    return ok({ messageRowId: id });
  });
}

/** Keeps a raw mail and the job that reads it, in one commit: the receiver says 250 only after this. */
export async function storeRaw(
  ctx: Ctx,
  input: { envelopeFrom: string; envelopeTo: string[]; remoteAddress: string; bytes: Buffer },
): Promise<Result<{ rawMailId: string; again: boolean }>> {
  const may = permit(ctx, "mail.receive");
  if (!may.ok) return may;
  const sha256 = createHash("sha256").update(input.bytes).digest("hex");
  return transact(ctx, async (ctx) => {
    const id = ctx.newId();
    const kept = await ctx.tx
      .insert(rawMails)
      .values({
        id,
        receivedAt: ctx.now,
        envelopeFrom: input.envelopeFrom,
        envelopeTo: [...input.envelopeTo].sort(),
        remoteAddress: input.remoteAddress,
        size: input.bytes.length,
        sha256,
        bytes: input.bytes,
        state: "received",
      })
      .onConflictDoNothing()
      .returning({ id: rawMails.id });
    // The same bytes from the same sender: the 250 was lost and it is sent again.
    if (kept.length === 0) return ok<{ rawMailId: string; again: boolean }>({ rawMailId: "", again: true });
    await audit(ctx, { act: "mail.receive", subject: ["raw_mail", id], after: { size: input.bytes.length } });
    await enqueue(ctx, "mail.parse", { rawMailId: id }, { key: `raw:${id}` });
    return ok({ rawMailId: id, again: false });
  });
}

export type InboundMessage = {
  rawMailId: string;
  messageId: string;
  inReplyTo: string | null;
  references: string[];
  kind: MailKind;
  fromEmail: string;
  fromName: string;
  toEmails: string[];
  subject: string;
  sentAt: Date;
  text: string;
  html: string | null;
  folds: [number, number][];
  proof: string;
  filing: { step: string; reason: string }[];
  contentHash: string;
  ticketId: string | null;
  accountId: string | null;
};

/** Stores a parsed mail and marks its raw one read. The same message twice gives `again`. */
export async function storeInbound(
  ctx: Ctx,
  input: InboundMessage,
): Promise<Result<{ messageRowId: string; again: boolean }>> {
  const may = permit(ctx, "mail.receive");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const id = ctx.newId();
    const kept = await ctx.tx
      .insert(messages)
      .values({ id, direction: "in", ...input })
      .onConflictDoNothing()
      .returning({ id: messages.id });
    const again = kept.length === 0;
    await ctx.tx
      .update(rawMails)
      .set({ state: again ? "duplicate" : input.kind === "unreadable" ? "unreadable" : "parsed" })
      .where(eq(rawMails.id, input.rawMailId));
    await audit(ctx, {
      act: "mail.store",
      subject: ["raw_mail", input.rawMailId],
      after: { again, filing: input.filing },
    });
    return ok({ messageRowId: again ? "" : id, again });
  });
}

/** Puts a mail aside for a person, with its reason. */
export async function holdMail(
  ctx: Ctx,
  input: { messageRowId: string; reason: string; hintTicketId: string | null },
): Promise<Result<{ heldId: string }>> {
  const may = permit(ctx, "mail.receive");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const id = ctx.newId();
    await ctx.tx.insert(heldMails).values({
      id,
      messageId: input.messageRowId,
      reason: input.reason,
      hintTicketId: input.hintTicketId,
      state: "held",
      heldAt: ctx.now,
    });
    await audit(ctx, {
      act: "mail.hold",
      subject: ["message", input.messageRowId],
      after: { reason: input.reason },
    });
    return ok({ heldId: id });
  });
}

/** Ties a message to a ticket after a person has looked, and closes its being held. */
export async function releaseHeld(
  ctx: Ctx,
  input: { heldId: string; to: { ticketId: string; accountId: string | null } | null },
): Promise<
  Result<{
    messageRowId: string;
    fromEmail: string;
    fromName: string;
    subject: string;
    text: string;
    sentAt: Date;
  }>
> {
  const may = permit(ctx, "mail.held");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [row] = await ctx.tx
      .select({
        messageRowId: messages.id,
        fromEmail: messages.fromEmail,
        fromName: messages.fromName,
        subject: messages.subject,
        text: messages.text,
        sentAt: messages.sentAt,
        state: heldMails.state,
      })
      .from(heldMails)
      .innerJoin(messages, eq(messages.id, heldMails.messageId))
      .where(eq(heldMails.id, input.heldId))
      .for("update", { of: heldMails });
    if (!row) return refuse("not_found", "This mail is not held any more.");
    if (row.state !== "held") return refuse("conflict", "Somebody has decided about this mail already.");
    await ctx.tx
      .update(heldMails)
      .set({
        state: input.to ? "admitted" : "discarded",
        decidedAt: ctx.now,
        decidedBy: ctx.actor.kind === "staff" ? ctx.actor.userId : null,
      })
      .where(eq(heldMails.id, input.heldId));
    if (input.to)
      await ctx.tx
        .update(messages)
        .set({ ticketId: input.to.ticketId, accountId: input.to.accountId })
        .where(eq(messages.id, row.messageRowId));
    await audit(ctx, {
      act: input.to ? "mail.admit" : "mail.discard",
      subject: ["held_mail", input.heldId],
      after: input.to,
    });
    return ok(row);
  });
}

export type Lease = {
  id: string;
  messageRowId: string;
  toEmail: string;
  toName: string;
  template: EnqueueMail["template"];
  props: Record<string, unknown>;
  automatic: boolean;
  attachments: (typeof outbox.$inferSelect)["attachments"];
  replyTo: string | null;
  attempts: number;
  messageId: string;
  inReplyTo: string | null;
  references: string[];
  subject: string;
};

/** Takes an outbox row for sending. A row that another worker holds, or that is sent, gives null. */
export async function leaseMail(ctx: Ctx, outboxId: string): Promise<Result<Lease | null>> {
  const may = permit(ctx, "mail.send");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const taken = await ctx.tx
      .update(outbox)
      .set({
        state: "sending",
        attempts: sql`${outbox.attempts} + 1`,
        leaseUntil: new Date(ctx.now.getTime() + 120_000),
      })
      .where(
        and(
          eq(outbox.id, outboxId),
          inArray(outbox.state, ["pending", "sending"]),
          or(sql`${outbox.leaseUntil} is null`, lt(outbox.leaseUntil, ctx.now)),
        ),
      )
      .returning();
    const row = taken[0];
    if (!row) return ok(null);
    const [m] = await ctx.tx
      .select({
        messageId: messages.messageId,
        inReplyTo: messages.inReplyTo,
        references: messages.references,
        subject: messages.subject,
      })
      .from(messages)
      .where(eq(messages.id, row.messageRowId));
    await audit(ctx, { act: "mail.lease", subject: ["outbox", outboxId], after: { attempts: row.attempts } });
    return ok({ ...row, ...m! });
  });
}

export async function markSent(ctx: Ctx, outboxId: string, text: string): Promise<Result<undefined>> {
  const may = permit(ctx, "mail.send");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [row] = await ctx.tx
      .update(outbox)
      .set({ state: "sent", sentAt: ctx.now, leaseUntil: null, lastError: null })
      .where(eq(outbox.id, outboxId))
      .returning({ messageRowId: outbox.messageRowId, template: outbox.template });
    // A sign-in link is worth a session: it is not kept.
    if (row && row.template !== "sign_in")
      await ctx.tx.update(messages).set({ text }).where(eq(messages.id, row.messageRowId));
    if (row && row.template === "sign_in")
      await ctx.tx.update(outbox).set({ props: {} }).where(eq(outbox.id, outboxId));
    await audit(ctx, { act: "mail.sent", subject: ["outbox", outboxId] });
    return ok();
  });
}

/** A try failed: later again, or dead and shown to a person. `jitter` is 0..1. */
export async function markFailed(
  ctx: Ctx,
  input: { outboxId: string; error: string; permanent: boolean; jitter: number },
): Promise<Result<{ dead: boolean }>> {
  const may = permit(ctx, "mail.send");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [row] = await ctx.tx
      .select({ attempts: outbox.attempts })
      .from(outbox)
      .where(eq(outbox.id, input.outboxId))
      .for("update");
    if (!row) return refuse("not_found", "This mail is not in the outbox.");
    const dead = input.permanent || row.attempts >= MAX_ATTEMPTS;
    const nextAt = new Date(ctx.now.getTime() + backoffSeconds(row.attempts, input.jitter) * 1000);
    await ctx.tx
      .update(outbox)
      .set({
        state: dead ? "dead" : "pending",
        lastError: input.error.slice(0, 500),
        leaseUntil: null,
        nextAt,
      })
      .where(eq(outbox.id, input.outboxId));
    await audit(ctx, {
      act: dead ? "mail.dead" : "mail.again",
      subject: ["outbox", input.outboxId],
      after: { error: input.error.slice(0, 200) },
    });
    if (!dead)
      await enqueue(
        ctx,
        "mail.send",
        { outboxId: input.outboxId },
        { key: `mail:${input.outboxId}`, at: nextAt },
      );
    return ok({ dead });
  });
}

const OVERDUE_MS = 5 * 60_000;

/**
 * Mails whose job is gone: a worker that was killed holds its jobs for hours. Jobs are put in again
 * under the same keys, and the lease and the raw mail's state let each be done once.
 */
export async function sweepMail(ctx: Ctx): Promise<Result<{ parse: number; send: number }>> {
  const may = permit(ctx, "mail.send");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const before = new Date(ctx.now.getTime() - OVERDUE_MS);
    const unread = await ctx.tx
      .select({ id: rawMails.id })
      .from(rawMails)
      .where(and(eq(rawMails.state, "received"), lt(rawMails.receivedAt, before)))
      .limit(200);
    const unsent = await ctx.tx
      .select({ id: outbox.id })
      .from(outbox)
      .where(
        and(
          inArray(outbox.state, ["pending", "sending"]),
          lt(outbox.nextAt, before),
          or(sql`${outbox.leaseUntil} is null`, lt(outbox.leaseUntil, ctx.now)),
        ),
      )
      .limit(200);
    for (const { id } of unread) await enqueue(ctx, "mail.parse", { rawMailId: id }, { key: `raw:${id}` });
    for (const { id } of unsent) await enqueue(ctx, "mail.send", { outboxId: id }, { key: `mail:${id}` });
    if (unread.length + unsent.length > 0)
      await audit(ctx, {
        act: "mail.sweep",
        subject: ["outbox", "overdue"],
        after: { parse: unread.length, send: unsent.length },
      });
    return ok({ parse: unread.length, send: unsent.length });
  });
}

/** A person tries a dead mail again. The same Message-ID, so a double is told as one. */
export async function retryMail(ctx: Ctx, outboxId: string): Promise<Result<undefined>> {
  const may = permit(ctx, "mail.retry");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const done = await ctx.tx
      .update(outbox)
      .set({ state: "pending", attempts: 0, nextAt: ctx.now, leaseUntil: null })
      .where(and(eq(outbox.id, outboxId), eq(outbox.state, "dead")))
      .returning({ id: outbox.id });
    if (done.length === 0) return refuse("rule", "This mail is not among those that failed.");
    await audit(ctx, { act: "mail.retry", subject: ["outbox", outboxId] });
    await enqueue(ctx, "mail.send", { outboxId }, { key: `mail:${outboxId}` });
    return ok();
  });
}

/** A mail that left came back for good: its row is dead and shown, and a person may try again. */
export async function markBounced(
  ctx: Ctx,
  input: { messageRowId: string; recipient: string; status: string },
): Promise<Result<undefined>> {
  const may = permit(ctx, "mail.receive");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const words = `It came back from ${input.recipient}${input.status ? ` (${input.status})` : ""}.`;
    await ctx.tx
      .update(outbox)
      .set({ state: "dead", lastError: words })
      .where(and(eq(outbox.messageRowId, input.messageRowId), eq(outbox.state, "sent")));
    await audit(ctx, { act: "mail.bounced", subject: ["message", input.messageRowId], after: { words } });
    return ok();
  });
}
