import { createTransport, type Transporter } from "nodemailer";
import { env } from "@/lib/env";
import { headerText } from "./rules";

/** What leaves: one recipient an envelope, the Message-ID fixed before, nothing fetched on the way. */
export type Outgoing = {
  to: string;
  toName: string;
  subject: string;
  html: string;
  text: string;
  messageId: string;
  inReplyTo: string | null;
  references: string[];
  replyTo: string | null;
  /** RFC 3834 s. 5; null for what a person wrote. */
  autoSubmitted: "auto-replied" | "auto-generated" | null;
  /** Empty: the null return path, so that nothing ever answers it. */
  returnPath: string;
  date: Date;
  attachments: { name: string; type: string; bytes: Buffer }[];
};

export type SendOutcome = { sent: true } | { sent: false; permanent: boolean; words: string };

let kept: Transporter | undefined;

function transport(): Transporter {
  const url = new URL(env().SMTP_URL);
  const loopback = ["127.0.0.1", "localhost", "[::1]"].includes(url.hostname);
  kept ??= createTransport({
    host: url.hostname.replace(/^\[|\]$/g, ""),
    port: Number(url.port) || (url.protocol === "smtps:" ? 465 : 587),
    secure: url.protocol === "smtps:",
    // A relay somewhere else is spoken to in TLS or not at all.
    requireTLS: !loopback && url.protocol !== "smtps:",
    ignoreTLS: loopback && url.protocol !== "smtps:",
    auth: url.username
      ? { user: decodeURIComponent(url.username), pass: decodeURIComponent(url.password) }
      : undefined,
    connectionTimeout: 20_000,
    greetingTimeout: 20_000,
    socketTimeout: 60_000,
    disableFileAccess: true,
    disableUrlAccess: true,
  });
  return kept;
}

const LINE_END = /[\r\n]/;

export async function sendMail(mail: Outgoing): Promise<SendOutcome> {
  const inHeaders = [
    mail.to,
    mail.messageId,
    mail.inReplyTo ?? "",
    mail.replyTo ?? "",
    mail.returnPath,
    ...mail.references,
  ];
  if (inHeaders.some((h) => LINE_END.test(h)))
    return { sent: false, permanent: true, words: "A header would have carried a line end." };
  const seller = headerText(env().MENDBAY_SELLER);
  try {
    await transport().sendMail({
      envelope: { from: mail.returnPath, to: mail.to },
      messageId: mail.messageId,
      date: mail.date,
      from: { name: seller, address: env().MENDBAY_MAIL_FROM },
      to: mail.toName ? { name: headerText(mail.toName), address: mail.to } : mail.to,
      replyTo: mail.replyTo ?? undefined,
      subject: headerText(mail.subject),
      inReplyTo: mail.inReplyTo ?? undefined,
      references: mail.references.length > 0 ? mail.references : undefined,
      headers: {
        ...(mail.autoSubmitted
          ? { "Auto-Submitted": mail.autoSubmitted, "X-Auto-Response-Suppress": "All" }
          : {}),
      },
      text: mail.text,
      html: mail.html,
      attachments: mail.attachments.map((a) => ({
        filename: headerText(a.name),
        contentType: a.type,
        content: a.bytes,
        contentDisposition: "attachment",
      })),
    });
    return { sent: true };
  } catch (thrown) {
    const failed = thrown as { responseCode?: number; code?: string; message?: string };
    const code = failed.responseCode ?? 0;
    return {
      sent: false,
      // 5xx will not change by trying; an address that cannot be written will not either.
      permanent: (code >= 500 && code < 600) || failed.code === "EENVELOPE",
      words: (failed.message ?? "failed").replace(/\s+/g, " ").slice(0, 300),
    };
  }
}
