import type { Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { renderTraveler } from "./pdf.io";
import { rmaById } from "./queries";

/** The traveler of an RMA as PDF; null when it is not there or not theirs. */
export async function travelerPdf(ctx: Ctx, rmaId: string): Promise<{ number: string; pdf: Buffer } | null> {
  const rma = await rmaById(ctx, rmaId);
  if (!rma || rma.lines.length === 0) return null;
  return { number: rma.number, pdf: await renderTraveler(rma, env().MENDBAY_SELLER, ctx.now) };
}
