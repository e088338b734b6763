import type { Ctx } from "@/lib/ctx";

type Draw = (ctx: Ctx, id: string) => Promise<Buffer>;

/** Papers that go with a mail, drawn when it leaves: each by its module, loaded when it is needed. */
const PAPERS: Record<string, () => Promise<Draw>> = {};

export async function drawPaper(ctx: Ctx, paper: string, id: string): Promise<Buffer> {
  const load = PAPERS[paper];
  if (!load) throw new Error(`nobody draws the paper ${paper}`);
  return (await load())(ctx, id);
}
