import { serialInPath } from "@/lib/base/serial";
import { api } from "@/app/_edge/route";
import { permit } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse } from "@/lib/base/result";
import { coverFor } from "@/lib/coverage/queries";
import type { CoverView } from "@/lib/coverage/schema";
import { env } from "@/lib/env";
import { unitBySerial } from "@/lib/ledger/queries";
import { UnitCoverAsk } from "@/lib/tickets/schema";

/** Cover of a unit on a civil day, clause by clause and part by part. */
export const GET = api<CoverView, { serial: string }>(async (ctx, { params, query }) => {
  const may = permit(ctx, "cover.read");
  if (!may.ok) return may;
  const ask = parse(UnitCoverAsk, query);
  if (!ask.ok) return ask;
  const hit = await unitBySerial(ctx, serialInPath(params.serial));
  const view = hit
    ? await coverFor(ctx, hit.unitId, ask.value.on ?? civilDayIn(ctx.now, env().MENDBAY_ZONE))
    : null;
  return view ? ok(view) : refuse("not_found", "Not found.");
});
