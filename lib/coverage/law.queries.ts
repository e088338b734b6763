import { desc, eq, lte } from "drizzle-orm";
import { read } from "@/db/client";
import { coverageDecisions, lawNotices } from "@/db/schema/coverage";
import type { Ctx } from "@/lib/ctx";
import { BUILT_IN, noticeFor, type LawNotice } from "./law";
import type { DecideInput, LawRegion } from "./schema";

const columns = {
  region: lawNotices.region,
  forConsumers: lawNotices.forConsumers,
  effectiveOn: lawNotices.effectiveOn,
  title: lawNotices.title,
  words: lawNotices.words,
  source: lawNotices.source,
};

/** The notice that stands beside the terms of a sale, by its buyer and country, on a day. */
export async function lawNotice(
  ctx: Ctx,
  at: { country: string; buyerKind: string; onDay: string },
): Promise<LawNotice> {
  const kept = await read(ctx, (tx) =>
    tx
      .select(columns)
      .from(lawNotices)
      .where(lte(lawNotices.effectiveOn, at.onDay))
      .orderBy(desc(lawNotices.effectiveOn))
      .limit(500),
  );
  return noticeFor(kept, at);
}

/** The notice beside a stored decision: by the buyer and country it was decided for, on its claim's day. */
export async function lawBeside(ctx: Ctx, decisionId: string): Promise<LawNotice | null> {
  const [row] = await read(ctx, (tx) =>
    tx
      .select({ inputs: coverageDecisions.inputs })
      .from(coverageDecisions)
      .where(eq(coverageDecisions.id, decisionId))
      .limit(1),
  );
  if (!row) return null;
  const { sale, claimOn } = row.inputs as DecideInput;
  return lawNotice(ctx, { country: sale.country, buyerKind: sale.buyerKind, onDay: claimOn });
}

export type NoticeRow = LawNotice & {
  /** Who kept it and when; none: built in. */
  by: { name: string; at: Date } | null;
  state: "shown" | "to come" | "past";
};
export type NoticeGroup = { region: LawRegion; forConsumers: boolean; rows: NoticeRow[] };

/** Every notice, kept and built in, by region and buyer, newest day first, with the one shown on a day. */
export async function noticeGroups(ctx: Ctx, onDay: string): Promise<NoticeGroup[]> {
  const kept = await read(ctx, (tx) =>
    tx
      .select({ ...columns, name: lawNotices.madeByName, at: lawNotices.createdAt })
      .from(lawNotices)
      .orderBy(desc(lawNotices.effectiveOn))
      .limit(500),
  );
  const all = [
    ...kept.map(({ name, at, ...n }) => ({ ...n, by: { name, at } })),
    ...BUILT_IN.map((n) => ({ ...n, by: null })),
  ];
  const keys = [...new Map(BUILT_IN.map((n) => [`${n.region} ${n.forConsumers}`, n])).values()];
  return keys.map(({ region, forConsumers }) => {
    const mine = all
      .filter((n) => n.region === region && n.forConsumers === forConsumers)
      .sort((a, b) =>
        a.effectiveOn < b.effectiveOn ? 1 : a.effectiveOn > b.effectiveOn ? -1 : a.by ? -1 : 1,
      );
    const shown = mine.find((n) => n.effectiveOn <= onDay);
    return {
      region,
      forConsumers,
      rows: mine.map((n) => ({
        ...n,
        state: n === shown ? "shown" : n.effectiveOn > onDay ? "to come" : "past",
      })),
    };
  });
}
