import { api } from "@/app/_edge/route";
import { permit } from "@/lib/auth/rules";
import { ok, refuse } from "@/lib/base/result";
import { deskView } from "@/lib/tickets/desk.queries";
import { DeskAsk } from "@/lib/tickets/schema";
import { parse } from "@/lib/base/parse";

/** Open tickets by whom they wait on. */
export const GET = api(async (ctx, { query }) => {
  if (ctx.actor.kind === "customer") return refuse("not_found", "Not found.");
  const may = permit(ctx, "ticket.read");
  if (!may.ok) return may;
  const ask = parse(DeskAsk, query);
  if (!ask.ok) return ask;
  return ok(await deskView(ctx, ask.value));
});
