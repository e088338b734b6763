import { api } from "@/app/_edge/route";
import { permit } from "@/lib/auth/rules";
import { ok, refuse } from "@/lib/base/result";
import { newestPreview } from "@/lib/coverage/terms.queries";
import { lean } from "../preview-part";

const UUID = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/;

/** How far the newest preview of a draft is, for its page to ask. */
export const GET = api<ReturnType<typeof lean>, { versionId: string }>(async (ctx, { params }) => {
  const may = permit(ctx, "terms.read");
  if (!may.ok || ctx.actor.kind !== "staff") return refuse("not_found", "Not found.");
  const found = UUID.test(params.versionId) ? await newestPreview(ctx, params.versionId) : null;
  return found ? ok(lean(found)) : refuse("not_found", "Not found.");
});
