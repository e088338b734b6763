import { createHash } from "node:crypto";
import { fileTypeFromBuffer } from "file-type";
import sharp from "sharp";
import type { Ctx } from "@/lib/ctx";
import { keepChecked, type CheckedFile } from "@/lib/files/commands";
import { fileBytes } from "@/lib/files/queries";
import { judgeFile, MAX_PIXELS } from "@/lib/files/rules";
import { dropBytes, putBytes } from "@/lib/files/store.io";
import { must } from "@/lib/base/result";
import type { JobPayload } from "../schema";

const sha256 = (b: Uint8Array) => createHash("sha256").update(b).digest("hex");

function textOf(bytes: Buffer): string | null {
  try {
    if (bytes[0] === 0xff && bytes[1] === 0xfe)
      return new TextDecoder("utf-16le", { fatal: true }).decode(bytes);
    const text = new TextDecoder("utf-8", { fatal: true }).decode(bytes);
    return text.includes("\u0000") ? null : text;
  } catch {
    // Logs of old tools: one byte a character. Control bytes would be no text at all.
    const head = bytes.subarray(0, 65_536);
    return head.some((b) => b < 9 || (b > 13 && b < 32 && b !== 27)) ? null : bytes.toString("latin1");
  }
}

/**
 * Reads a quarantined file, alone, and decides by its bytes. Images are always drawn anew, so that
 * nothing but the picture is left: no place, no device, no script behind the last byte.
 */
export async function handle(ctx: Ctx, payload: JobPayload<"file.check">): Promise<void> {
  const found = await fileBytes(ctx, payload.fileId);
  if (!found || found.file.state !== "quarantined") return;
  const { bytes, file } = found;
  const text = textOf(bytes);
  const verdict = judgeFile({
    declaredSize: file.declaredSize,
    size: bytes.length,
    sniffed: await fileTypeFromBuffer(bytes),
    isText: text !== null,
    head: (text ?? "").slice(0, 400),
  });
  let result: CheckedFile;
  if (!verdict.ok) {
    result = { state: "rejected", reason: verdict.refusal.message };
  } else if (verdict.value.family === "image") {
    result = await redraw(bytes, file.name, payload.fileId);
  } else {
    result = {
      state: "clean",
      key: file.key!,
      type: verdict.value.type,
      size: bytes.length,
      sha256: sha256(bytes),
      width: null,
      height: null,
    };
  }
  const { dropKeys } = must(await keepChecked(ctx, payload.fileId, result));
  await dropBytes(dropKeys);
}

async function redraw(bytes: Buffer, name: string, fileId: string): Promise<CheckedFile> {
  try {
    const drawn = await sharp(bytes, { limitInputPixels: MAX_PIXELS, failOn: "error" })
      .autoOrient()
      .jpeg({ quality: 86 })
      .toBuffer({ resolveWithObject: true });
    const key = await putBytes(
      drawn.data,
      `${name.replace(/\.[^.]*$/, "")}.jpg`,
      "image/jpeg",
      `${fileId}-clean`,
    );
    return {
      state: "clean",
      key,
      type: "image/jpeg",
      size: drawn.data.length,
      sha256: sha256(drawn.data),
      width: drawn.info.width,
      height: drawn.info.height,
    };
  } catch (thrown) {
    const words = thrown instanceof Error ? thrown.message : "";
    if (words.startsWith("upload host")) throw thrown;
    return {
      state: "rejected",
      reason: /pixel limit/i.test(words)
        ? "The picture has more than 40 million pixels. Send a smaller one."
        : "The picture is broken. Take or export it again.",
    };
  }
}
