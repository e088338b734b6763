import { serialInPath } from "@/lib/base/serial";
import { api } from "@/app/_edge/route";
import { permit } from "@/lib/auth/rules";
import { ok, refuse } from "@/lib/base/result";
import { unitBySerial } from "@/lib/ledger/queries";
import type { UnitHit } from "@/lib/ledger/schema";

/** A unit by its serial, as printed or typed. */
export const GET = api<UnitHit, { serial: string }>(async (ctx, { params }) => {
  const may = permit(ctx, "ledger.read");
  if (!may.ok) return may;
  const hit = await unitBySerial(ctx, serialInPath(params.serial));
  return hit ? ok(hit) : refuse("not_found", "Not found.");
});
