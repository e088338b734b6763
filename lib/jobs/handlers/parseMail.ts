import { must } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { storeBytes } from "@/lib/files/commands";
import { readMail } from "@/lib/mail/parser.io";
import { filesOfMail, rawMail } from "@/lib/mail/queries";
import { fileMail, keepMailFiles } from "@/lib/tickets/mail.commands";
import type { JobPayload } from "../schema";

/**
 * Reads a stored mail and files it. First the record and what follows, in one transaction; then its
 * files, which go over a network: should that fail, the job comes again and only the files are left
 * to do.
 */
export async function handle(ctx: Ctx, payload: JobPayload<"mail.parse">): Promise<void> {
  const raw = await rawMail(ctx, payload.rawMailId);
  if (!raw) return;
  const read = await readMail(raw.bytes);
  const { messageRowId, ticketId } = must(await fileMail(ctx, { rawMailId: raw.id, read }));
  const sent = read.ok ? read.mail.attachments : [];
  if (!messageRowId || !ticketId || sent.length === 0) return;
  const already = await filesOfMail(ctx, { ticketId, messageRowId });
  if (already.kept) return;

  const fileIds: string[] = [];
  const left: string[] = [];
  for (const file of sent) {
    const stored = await storeBytes(ctx, {
      bytes: file.content,
      name: file.name,
      type: file.type,
      purpose: "evidence",
      accountId: already.accountId,
    });
    if (stored.ok) fileIds.push(stored.value.fileId);
    else left.push(stored.refusal.message);
  }
  // Also when none was kept: the record says that files came, and why they are not there.
  if (fileIds.length === 0 && left.length === 0) return;
  const from = read.ok ? read.mail.from[0] : undefined;
  must(
    await keepMailFiles(ctx, {
      messageRowId,
      ticketId,
      fileIds,
      fromName: from?.name || from?.email || raw.envelopeFrom,
      left,
    }),
  );
}
