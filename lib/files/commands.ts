import { and, eq, inArray } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { files } from "@/db/schema/files";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { enqueue } from "@/lib/jobs/commands";
import { MAX_FILE_BYTES, safeName } from "./rules";
import { FILE_PURPOSES } from "./schema";
import { putBytes } from "./store.io";

const Promised = z.object({
  purpose: z.enum(FILE_PURPOSES),
  accountId: z.uuid().nullable(),
  files: z
    .array(z.object({ name: z.string().max(1000), size: z.number().int().min(0), type: z.string().max(200) }))
    .min(1)
    .max(30),
});

/** Rows for files that are about to be uploaded: their ids go with them to the upload host and back. */
export async function promiseFiles(
  ctx: Ctx,
  raw: z.input<typeof Promised>,
): Promise<Result<{ fileIds: string[] }>> {
  const may = permit(ctx, "file.upload");
  if (!may.ok) return may;
  const input = parse(Promised, raw);
  if (!input.ok) return input;
  const v = input.value;
  const empty = v.files.find((f) => f.size === 0);
  if (empty) return refuse("invalid", `${safeName(empty.name)} is empty. Choose it again.`);
  const large = v.files.find((f) => f.size > MAX_FILE_BYTES);
  if (large) return refuse("too_large", `${safeName(large.name)} is over 25 MB. Choose a smaller one.`);
  return transact(ctx, async (ctx) => {
    const rows = v.files.map((f) => ({
      id: ctx.newId(),
      purpose: v.purpose,
      accountId: v.accountId,
      state: "pending" as const,
      name: safeName(f.name),
      declaredType: f.type || "application/octet-stream",
      declaredSize: f.size,
      uploadedBy: ctx.actor.kind === "staff" || ctx.actor.kind === "customer" ? ctx.actor.userId : null,
      createdAt: ctx.now,
    }));
    await ctx.tx.insert(files).values(rows);
    await audit(ctx, {
      act: "file.promise",
      subject: ["file", rows[0]!.id],
      after: { files: rows.length, purpose: v.purpose },
    });
    return ok({ fileIds: rows.map((r) => r.id) });
  });
}

/** The upload host says that a file is there. Said twice, it changes nothing the second time. */
export async function fileArrived(
  ctx: Ctx,
  input: { fileId: string; key: string; size: number },
): Promise<Result<{ state: string }>> {
  const may = permit(ctx, "file.check");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const moved = await ctx.tx
      .update(files)
      .set({ state: "quarantined", key: input.key })
      .where(and(eq(files.id, input.fileId), eq(files.state, "pending")))
      .returning({ id: files.id });
    if (moved.length === 0) return ok({ state: "known" });
    await audit(ctx, { act: "file.arrived", subject: ["file", input.fileId], after: { size: input.size } });
    await enqueue(ctx, "file.check", { fileId: input.fileId }, { key: `file:${input.fileId}` });
    return ok({ state: "quarantined" });
  });
}

/** Bytes that we hold ourselves (a mail's attachment, a photo of the demo) go to the upload host. */
export async function storeBytes(
  ctx: Ctx,
  input: {
    bytes: Uint8Array;
    name: string;
    type: string;
    purpose: (typeof FILE_PURPOSES)[number];
    accountId: string | null;
  },
): Promise<Result<{ fileId: string }>> {
  const may = permit(ctx, "file.upload");
  if (!may.ok) return may;
  if (input.bytes.length === 0) return refuse("invalid", `${safeName(input.name)} is empty.`);
  if (input.bytes.length > MAX_FILE_BYTES)
    return refuse("too_large", `${safeName(input.name)} is over 25 MB.`);
  const fileId = ctx.newId();
  const name = safeName(input.name);
  const key = await putBytes(input.bytes, name, input.type || "application/octet-stream", fileId);
  return transact(ctx, async (ctx) => {
    await ctx.tx.insert(files).values({
      id: fileId,
      key,
      purpose: input.purpose,
      accountId: input.accountId,
      state: "quarantined",
      name,
      declaredType: input.type || "application/octet-stream",
      declaredSize: input.bytes.length,
      uploadedBy: ctx.actor.kind === "staff" || ctx.actor.kind === "customer" ? ctx.actor.userId : null,
      createdAt: ctx.now,
    });
    await audit(ctx, {
      act: "file.store",
      subject: ["file", fileId],
      after: { name, size: input.bytes.length },
    });
    await enqueue(ctx, "file.check", { fileId }, { key: `file:${fileId}` });
    return ok({ fileId });
  });
}

export type CheckedFile =
  | {
      state: "clean";
      key: string;
      type: string;
      size: number;
      sha256: string;
      width: number | null;
      height: number | null;
    }
  | { state: "rejected"; reason: string };

/** What the check found. Only a quarantined file has a check to end. */
export async function keepChecked(
  ctx: Ctx,
  fileId: string,
  found: CheckedFile,
): Promise<Result<{ dropKeys: string[] }>> {
  const may = permit(ctx, "file.check");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [before] = await ctx.tx
      .select({ key: files.key, state: files.state })
      .from(files)
      .where(eq(files.id, fileId))
      .for("update");
    if (!before) return refuse("not_found", "This file is not there.");
    if (before.state !== "quarantined") return ok({ dropKeys: [] });
    if (found.state === "clean") {
      await ctx.tx
        .update(files)
        .set({ ...found, checkedAt: ctx.now })
        .where(eq(files.id, fileId));
    } else {
      await ctx.tx
        .update(files)
        .set({ state: "rejected", reason: found.reason, key: null, checkedAt: ctx.now })
        .where(eq(files.id, fileId));
    }
    await audit(ctx, { act: "file.check", subject: ["file", fileId], after: found });
    const old =
      before.key !== null && (found.state === "rejected" || found.key !== before.key) ? [before.key] : [];
    return ok({ dropKeys: old });
  });
}

/** Forgets files that a person took back before they became part of a record. */
export async function dropFiles(ctx: Ctx, fileIds: string[]): Promise<Result<undefined>> {
  const may = permit(ctx, "file.upload");
  if (!may.ok) return may;
  if (fileIds.length === 0) return ok();
  return transact(ctx, async (ctx) => {
    await ctx.tx
      .update(files)
      .set({ state: "rejected", reason: "Taken back." })
      .where(and(inArray(files.id, fileIds), inArray(files.state, ["pending", "quarantined"])));
    await audit(ctx, { act: "file.drop", subject: ["file", fileIds[0]!] });
    return ok();
  });
}
