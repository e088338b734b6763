import { and, inArray, isNull } from "drizzle-orm";
import type { z } from "zod";
import { transact } from "@/db/client";
import { installations } from "@/db/schema/ledger";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { ok, type Result } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { giveOn, movePart, noteNotice, pauseCover } from "@/lib/ledger/holding.commands";
import type { GiveOn, MovePart, NoteNotice, PauseCover } from "@/lib/ledger/schema";
import { refreshCover } from "./commands";

/** A fact of holding is noted in the ledger and the kept windows follow, in one transaction. */
function noted<I, V>(
  act: "ledger.give_on" | "ledger.swap" | "ledger.pause",
  run: (ctx: Ctx, raw: I) => Promise<Result<V>>,
  salesOf: (value: V) => string[],
) {
  return async (ctx: Ctx, raw: I): Promise<Result<V>> => {
    const may = permit(ctx, act);
    if (!may.ok) return may;
    return transact(ctx, async (ctx) => {
      const done = await run(ctx, raw);
      if (!done.ok) return done;
      const own = salesOf(done.value);
      // Parts that were sold under them and stand elsewhere follow too.
      const elsewhere = await ctx.tx
        .selectDistinct({ id: installations.saleLineId })
        .from(installations)
        .where(and(inArray(installations.coverSaleLineId, own), isNull(installations.toOn)));
      const sales = [...new Set([...own, ...elsewhere.flatMap((e) => (e.id ? [e.id] : []))])];
      const kept = await refreshCover(ctx, sales);
      if (!kept.ok) return kept;
      await audit(ctx, { act: "cover.follows", subject: ["sale_line", sales[0]!], after: { by: act } });
      return ok(done.value);
    });
  };
}

/** A unit given on to another company: see ledger/holding.commands.giveOn. */
export const noteGivenOn = noted<z.input<typeof GiveOn>, { saleLineId: string; transferId: string }>(
  "ledger.give_on",
  giveOn,
  (v) => [v.saleLineId],
);
/** The written notice of it. */
export const noteTransferNotice = noted<z.input<typeof NoteNotice>, { saleLineId: string }>(
  "ledger.give_on",
  noteNotice,
  (v) => [v.saleLineId],
);
/** A part moved to another system, of the same customer or of another. */
export const noteMovedPart = noted<
  z.input<typeof MovePart>,
  { installationId: string; saleLineIds: string[] }
>("ledger.swap", movePart, (v) => v.saleLineIds);
/** Cover that rests for some days. */
export const notePause = noted<z.input<typeof PauseCover>, { saleLineId: string; pauseId: string }>(
  "ledger.pause",
  pauseCover,
  (v) => [v.saleLineId],
);
