import type { z } from "zod";
import { isUniqueViolation, transact } from "@/db/client";
import { lawNotices } from "@/db/schema/coverage";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { showDay } from "@/lib/base/show";
import { actorName, type Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { KeepLawNotice, REGION_WORDS } from "./law";

/** Keeps a notice of rights by law, shown from its day on. What was shown before stays on record as it was. */
export async function keepLawNotice(
  ctx: Ctx,
  raw: z.input<typeof KeepLawNotice>,
): Promise<Result<{ noticeId: string }>> {
  const may = permit(ctx, "law.write");
  if (!may.ok) return may;
  const input = parse(KeepLawNotice, raw);
  if (!input.ok) return input;
  const v = input.value;
  // What stood beside an old decision stays beside it: a notice begins today or later.
  if (v.effectiveOn < civilDayIn(ctx.now, env().MENDBAY_ZONE)) {
    const why = "A notice begins today or later: what was shown before stays as it was shown.";
    return refuse("invalid", why, { fields: { effectiveOn: [why] } });
  }
  try {
    return await transact(ctx, async (ctx) => {
      const noticeId = ctx.newId();
      await ctx.tx
        .insert(lawNotices)
        .values({ id: noticeId, ...v, madeByName: actorName(ctx.actor), createdAt: ctx.now });
      await audit(ctx, {
        act: "law.keep",
        subject: ["law_notice", noticeId],
        after: { region: v.region, forConsumers: v.forConsumers, effectiveOn: v.effectiveOn, title: v.title },
      });
      return ok({ noticeId });
    });
  } catch (thrown) {
    if (!isUniqueViolation(thrown, "law_notice_once") || ctx.tx) throw thrown;
    const why = `There is one for ${REGION_WORDS[v.region]} from ${showDay(v.effectiveOn)} already, and what was kept is never rewritten. Give a later day.`;
    return refuse("conflict", why, { fields: { effectiveOn: [why] } });
  }
}
