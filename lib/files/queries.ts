import { eq, inArray } from "drizzle-orm";
import { read } from "@/db/client";
import { files } from "@/db/schema/files";
import { may } from "@/lib/auth/rules";
import type { Ctx } from "@/lib/ctx";
import { getBytes, openStream } from "./store.io";

export type FileView = {
  id: string;
  key: string | null;
  name: string;
  state: "pending" | "quarantined" | "clean" | "rejected";
  type: string | null;
  size: number | null;
  reason: string | null;
  declaredSize: number;
  declaredType: string;
};

const columns = {
  id: files.id,
  key: files.key,
  name: files.name,
  state: files.state,
  type: files.type,
  size: files.size,
  reason: files.reason,
  declaredSize: files.declaredSize,
  declaredType: files.declaredType,
};

export async function file(ctx: Ctx, id: string): Promise<FileView | null> {
  if (!may(ctx, "file.read")) return null;
  const rows = await read(ctx, (tx) => tx.select(columns).from(files).where(eq(files.id, id)).limit(1));
  return rows[0] ?? null;
}

/** States of files by id, so that a page can tell how far their checks are. */
export async function fileStates(ctx: Ctx, ids: string[]): Promise<FileView[]> {
  if (!may(ctx, "file.read") || ids.length === 0) return [];
  return read(ctx, (tx) =>
    tx
      .select(columns)
      .from(files)
      .where(inArray(files.id, ids.slice(0, 100))),
  );
}

/** A clean file with its bytes as a stream; null for what is not there, not theirs or not checked. */
export async function openFile(
  ctx: Ctx,
  id: string,
): Promise<{ file: FileView; body: ReadableStream<Uint8Array> } | null> {
  const found = await file(ctx, id);
  if (!found?.key || found.state !== "clean") return null;
  return { file: found, body: await openStream(found.key) };
}

/** All bytes, for the check job and for attachments of ours. */
export async function fileBytes(ctx: Ctx, id: string): Promise<{ file: FileView; bytes: Buffer } | null> {
  const found = await file(ctx, id);
  if (!found?.key) return null;
  return { file: found, bytes: await getBytes(found.key) };
}
