import { must } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { fileBytes } from "@/lib/files/queries";
import { leaseMail, markFailed, markSent, type Lease } from "@/lib/mail/commands";
import { renderMail } from "@/lib/mail/render.io";
import { sendMail } from "@/lib/mail/smtp.io";
import type { JobPayload } from "../schema";
import { drawPaper } from "./papers";

/**
 * Sends one mail of the outbox. Between the server's 250 and our mark lies a gap that SMTP does not
 * close: a crash there sends the same Message-ID again, which its reader's program tells as one.
 */
export async function handle(ctx: Ctx, payload: JobPayload<"mail.send">): Promise<void> {
  const lease = must(await leaseMail(ctx, payload.outboxId));
  if (!lease) return;
  const fail = async (error: string, permanent: boolean) =>
    void must(await markFailed(ctx, { outboxId: lease.id, error, permanent, jitter: Math.random() }));

  let body: Awaited<ReturnType<typeof renderMail>>;
  let attachments: Awaited<ReturnType<typeof bytesOf>>;
  try {
    body = await renderMail(lease.template, lease.props, env().MENDBAY_SELLER);
    attachments = await bytesOf(ctx, lease);
  } catch (thrown) {
    return fail(thrown instanceof Error ? thrown.message : String(thrown), false);
  }
  const acknowledges = lease.template === "acknowledgement";
  const outcome = await sendMail({
    to: lease.toEmail,
    toName: lease.toName,
    subject: lease.subject,
    ...body,
    messageId: lease.messageId,
    inReplyTo: lease.inReplyTo,
    references: lease.references,
    replyTo: lease.replyTo,
    autoSubmitted: !lease.automatic ? null : acknowledges ? "auto-replied" : "auto-generated",
    // RFC 3834 s. 3.3: an automatic answer has the null return path. Anything else comes back to its ticket.
    returnPath: acknowledges ? "" : (lease.replyTo ?? env().MENDBAY_MAIL_FROM),
    date: ctx.now,
    attachments,
  });
  if (outcome.sent) must(await markSent(ctx, lease.id, body.text));
  else await fail(outcome.words, outcome.permanent);
}

async function bytesOf(ctx: Ctx, lease: Lease) {
  const all: { name: string; type: string; bytes: Buffer }[] = [];
  for (const wanted of lease.attachments) {
    if ("paper" in wanted) {
      all.push({
        name: wanted.name,
        type: "application/pdf",
        bytes: await drawPaper(ctx, wanted.paper, wanted.id),
      });
      continue;
    }
    const found = await fileBytes(ctx, wanted.fileId);
    if (!found || found.file.state !== "clean") throw new Error(`${wanted.name} is not ready to be sent`);
    all.push({ name: wanted.name, type: found.file.type ?? "application/octet-stream", bytes: found.bytes });
  }
  return all;
}
