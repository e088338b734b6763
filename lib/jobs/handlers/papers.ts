import type { Ctx } from "@/lib/ctx";
import { travelerPdf } from "@/lib/rma/papers.queries";

/** Papers that go with a mail, drawn when it leaves. @throws Error when there is no such paper. */
export async function drawPaper(ctx: Ctx, paper: string, id: string): Promise<Buffer> {
  const drawn = paper === "traveler" ? await travelerPdf(ctx, id) : null;
  if (!drawn) throw new Error(`there is no paper ${paper} ${id}`);
  return drawn.pdf;
}
