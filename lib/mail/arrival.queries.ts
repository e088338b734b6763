import { createHash } from "node:crypto";
import { z } from "zod";
import type { Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { fileWhere, mayAcknowledge, type Filing } from "./filing";
import { foldQuotes } from "./fold";
import { idsIn, referenceHeaders } from "./ids";
import { contentKey, numberInSubject, ownText, recordLine, replyToOf, suspicionsOf } from "./inbound";
import { deliveryReports, hops, kindOf } from "./kinds";
import type { ParsedMail, ReadMail } from "./parsed";
import {
  acksSince,
  alreadyStored,
  sentByUs,
  sentTexts,
  ticketForFiling,
  ticketNamed,
  ticketOfAddress,
  ticketsOfIds,
  type RawMail,
} from "./queries";
import type { MailKind } from "./schema";

const HOUR = 3_600_000;

/** Everything that is to be known before an arrival is written: what it is, where it goes, and why. */
export type Arrival = {
  again: boolean;
  message: {
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
  };
  filing: Filing;
  /** One line for the record. */
  line: string;
  /** The sender's own words, without what they repeat. */
  words: string;
  acknowledge: boolean;
  /** A mail of ours that came back for good. */
  bounced: { messageRowId: string; recipient: string; status: string } | null;
};

/**
 * Looks up what the filing decision needs and takes it. `known`: a contact of the ledger wrote it.
 * Writes nothing, so that the one who files decides in which transaction.
 */
export async function readArrival(ctx: Ctx, raw: RawMail, read: ReadMail, known: boolean): Promise<Arrival> {
  const mail = read.ok ? read.mail : read.head;
  const headers = mail?.headers ?? [];
  const ids = referenceHeaders(headers);
  const from = mail?.from ?? [];
  const fromEmail = from[0]?.email ?? raw.envelopeFrom.toLowerCase();
  const domain = env().MENDBAY_MAIL_DOMAIN.toLowerCase();
  const ours = (address: string) =>
    address === env().MENDBAY_MAIL_FROM.toLowerCase() ||
    (address.startsWith("r+") && address.endsWith(`@${domain}`));

  const answer = kindOf({
    headers,
    envelopeFrom: raw.envelopeFrom,
    fromEmail,
    contentType: mail?.contentType ?? "",
    reportType: mail?.reportType ?? "",
    calendar: mail?.calendar ?? false,
    unreadable: !read.ok || (mail?.encrypted ?? false),
  });
  const contentHash = createHash("sha256")
    .update(mail ? contentKey(mail) : raw.sha256)
    .digest("hex");
  // A mail without an id, or with one of ours, gets one of its own, made from its bytes.
  const impostor = ids.messageId ? await sentByUs(ctx, [ids.messageId]) : null;
  const messageId = ids.messageId && !impostor ? ids.messageId : `<raw-${raw.sha256.slice(0, 40)}@${domain}>`;

  const suspicions = suspicionsOf({
    from,
    doubled: ids.doubled,
    hops: hops(headers),
    ourAddress: ours(fromEmail),
    ourMessageId: impostor !== null,
  });
  if (!read.ok) suspicions.unshift(`it could not be read: ${read.why}`);
  if (from[0] && !z.email({ pattern: z.regexes.unicodeEmail }).safeParse(fromEmail).success)
    suspicions.push("its sender's address is none that could be answered");

  const token = await ticketOfAddress(ctx, [...raw.envelopeTo, ...(mail?.to ?? [])]);
  const named = numberInSubject(mail?.subject ?? "");
  const reports = answer.kind === "bounce" ? deliveryReports(mail?.report ?? "") : [];
  const back = answer.kind === "bounce" ? await cameBack(ctx, mail, reports) : null;
  const filing = fileWhere({
    fromEmail,
    now: raw.receivedAt,
    kind: answer.kind,
    // The one place where SPF, DKIM and DMARC results will come in.
    proof: "not_checked",
    byToken: token.ticket,
    badToken: token.bad,
    byId: await ticketsOfIds(
      ctx,
      [...ids.inReplyTo, ...[...ids.references].reverse()],
      ids.messageId,
      fromEmail,
    ),
    hint: named === null ? null : await ticketNamed(ctx, named),
    cameBack: back?.ticketId ? await ticketForFiling(ctx, back.ticketId) : null,
    suspicions,
    known,
  });

  const text = mail?.text ?? "";
  const folds = foldQuotes(text, filing.ticketId ? await sentTexts(ctx, filing.ticketId) : []);
  const ack = mayAcknowledge({
    filing: filing.to,
    mayAnswer: answer.mayAnswer,
    why: answer.why,
    proof: "not_checked",
    toOurselves: ours(fromEmail),
    acksLastHour: await acksSince(ctx, fromEmail, new Date(ctx.now.getTime() - HOUR)),
  });
  const replyTo = replyToOf(headers);
  const steps = [
    { step: "kind", reason: answer.why },
    ...filing.steps.filter((s) => s.step !== "kind"),
    ...(replyTo && replyTo !== fromEmail
      ? [{ step: "reply-to", reason: `it wants answers at ${replyTo}; ours go to the sender` }]
      : []),
    { step: "acknowledgement", reason: ack.reason },
    ...(mail?.notes ?? []).map((reason) => ({ step: "reading", reason })),
  ];
  const failed = reports.find((r) => r.failed);
  return {
    again: await alreadyStored(ctx, messageId, contentHash),
    message: {
      messageId,
      inReplyTo: ids.inReplyTo[0] ?? null,
      references: ids.references.slice(-100),
      kind: answer.kind,
      fromEmail,
      fromName: from[0]?.name ?? "",
      toEmails: mail?.to ?? raw.envelopeTo,
      subject: mail?.subject ?? "",
      // A date from the future would make it the newest of its ticket for ever.
      sentAt: mail?.sentAt && mail.sentAt < raw.receivedAt ? mail.sentAt : raw.receivedAt,
      text,
      html: mail?.html ?? null,
      folds,
      proof: "not_checked",
      filing: steps,
      contentHash,
    },
    filing,
    line: lineOf(answer.kind, mail, folds, reports),
    words: ownText(text, folds),
    acknowledge: ack.yes,
    bounced:
      back && failed
        ? { messageRowId: back.messageRowId, recipient: failed.recipient, status: failed.status }
        : null,
  };
}

/** Only a mail that we really sent to that address can come back. */
async function cameBack(ctx: Ctx, mail: ParsedMail | null, reports: { recipient: string }[]) {
  const returned = mail?.returned.replace(/\n[ \t]+/g, " ") ?? "";
  const ids = [...returned.matchAll(/^message-id:(.*)$/gim)].slice(0, 1).flatMap((m) => idsIn(m[1] ?? ""));
  const sent = await sentByUs(ctx, ids);
  if (!sent) return null;
  const to = sent.toEmails.map((e) => e.toLowerCase());
  return reports.some((r) => to.includes(r.recipient.toLowerCase())) ? sent : null;
}

function lineOf(
  kind: MailKind,
  mail: ParsedMail | null,
  folds: [number, number][],
  reports: { recipient: string; action: string; status: string }[],
): string {
  const subject = mail?.subject || "no subject";
  if (kind === "bounce" && reports[0])
    return `${reports[0].action === "failed" ? "Came back" : `Delivery ${reports[0].action}`}: ${reports[0].recipient} ${reports[0].status}`.trim();
  if (kind === "auto_reply") return `Automatic answer: ${subject}`.slice(0, 120);
  return recordLine(mail?.text ?? "", folds, subject);
}
