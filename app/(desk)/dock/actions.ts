"use server";
import { currentCtx } from "@/app/_edge/ctx";
import { permit } from "@/lib/auth/rules";
import type { Result } from "@/lib/base/result";
import { receiveLine, setAside } from "@/lib/dock/commands";
import {
  photosOf,
  receiptsOf,
  scan,
  type PhotoView,
  type ReceiptView,
  type ScanAnswer,
} from "@/lib/dock/queries";

/** What a scan means. Nothing is booked by it. */
export async function look(
  text: string,
  rmaId: string | null,
): Promise<ScanAnswer | { kind: "refused"; why: string }> {
  const ctx = await currentCtx();
  const may = permit(ctx, "dock.scan");
  if (!may.ok) return { kind: "refused", why: may.refusal.message };
  return scan(ctx, { text, rmaId });
}

/** Photos and receipts of an RMA's lines, for the page to show after each upload. */
export async function lineFacts(
  lineIds: string[],
): Promise<{ photos: Record<string, PhotoView[]>; receipts: Record<string, ReceiptView> }> {
  const ctx = await currentCtx();
  if (!permit(ctx, "dock.scan").ok) return { photos: {}, receipts: {} };
  const ids = lineIds.slice(0, 60);
  return {
    photos: Object.fromEntries(await photosOf(ctx, "receipt_line", ids)),
    receipts: Object.fromEntries(await receiptsOf(ctx, ids)),
  };
}

export async function takeIn(
  input: Parameters<typeof receiveLine>[1],
): Promise<Result<{ receiptId: string; again: boolean; rmaNumber: string }>> {
  return receiveLine(await currentCtx(), input);
}

export async function putAside(
  input: Parameters<typeof setAside>[1],
): Promise<Result<{ discrepancyId: string; again: boolean }>> {
  return setAside(await currentCtx(), input);
}
