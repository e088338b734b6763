import { and, desc, eq, inArray, isNull, sql } from "drizzle-orm";
import { z } from "zod";
import { createHash } from "node:crypto";
import { transact } from "@/db/client";
import { terms, termsVersions } from "@/db/schema/coverage";
import {
  importBatches,
  installations,
  models,
  saleLines,
  sites,
  holidays,
  suppliers,
  units,
  lots,
} from "@/db/schema/ledger";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { serialKey, serialLoose } from "@/lib/base/serial";
import type { Ctx, TxCtx } from "@/lib/ctx";
import { enqueue } from "@/lib/jobs/commands";
import { CONDITIONS, EndSale, FAMILIES, MoveUnit, ReplaceSystem, SwapPart, UNIT_KINDS } from "./schema";
import { readShipments, type ReadShipments } from "./shipments";

const PREVIEW_PROBLEMS = 200;

/** Terms that were in force on a day, by code: the version a sale is made under. */
async function versionsInForce(ctx: TxCtx) {
  const rows = await ctx.tx
    .select({ code: terms.code, id: termsVersions.id, effectiveOn: termsVersions.effectiveOn })
    .from(termsVersions)
    .innerJoin(terms, eq(terms.id, termsVersions.termsId))
    .where(sql`${termsVersions.publishedAt} is not null`)
    .orderBy(desc(termsVersions.effectiveOn), desc(termsVersions.issue));
  return (code: string, day: string): string | null =>
    rows.find((r) => r.code === code && r.effectiveOn <= day)?.id ?? null;
}

/** Leaves out, and tells, the rows that no published terms cover. */
export async function withTerms(ctx: TxCtx, found: ReadShipments): Promise<ReadShipments> {
  const inForce = await versionsInForce(ctx);
  const unknown = found.rows.filter((r) => inForce(r.terms, r.shippedOn) === null);
  if (unknown.length === 0) return found;
  const bad = new Set(unknown.map((r) => serialKey(r.serial)));
  const problems = [
    ...found.problems,
    ...unknown.map((r) => ({
      row: r.row,
      column: "terms",
      message: `No published terms ${r.terms} are in force on ${r.shippedOn}. Publish them first, or correct the code.`,
    })),
  ].sort((a, b) => a.row - b.row);
  return {
    ...found,
    problems,
    rows: found.rows.filter((r) => !bad.has(serialKey(r.serial)) && !bad.has(serialKey(r.parentSerial))),
  };
}

/** Reads a file, keeps it, and says what applying it would do. Nothing is added yet. */
export async function previewImport(
  ctx: Ctx,
  input: { fileName: string; bytes: Uint8Array },
): Promise<Result<{ importId: string; again: boolean }>> {
  const may = permit(ctx, "ledger.import");
  if (!may.ok) return may;
  const found = readShipments(input.bytes);
  if (!found.ok) return found;
  const sha256 = createHash("sha256").update(input.bytes).digest("hex");
  return transact(ctx, async (ctx) => {
    const same = await ctx.tx
      .select({ id: importBatches.id })
      .from(importBatches)
      .where(and(eq(importBatches.sha256, sha256), eq(importBatches.state, "applied")))
      .limit(1);
    const checked = await withTerms(ctx, found.value);
    const id = ctx.newId();
    await ctx.tx.insert(importBatches).values({
      id,
      fileName: input.fileName.slice(0, 200),
      sha256,
      content: Buffer.from(input.bytes),
      state: "previewed",
      rowsTotal: checked.rowsTotal,
      rowsGood: checked.rows.length,
      problems: checked.problems.slice(0, PREVIEW_PROBLEMS),
      problemsTotal: checked.problems.length,
      createdBy: ctx.actor.kind === "staff" ? ctx.actor.userId : null,
      createdAt: ctx.now,
    });
    await audit(ctx, {
      act: "ledger.import.preview",
      subject: ["import", id],
      after: { fileName: input.fileName, rows: checked.rowsTotal },
    });
    return ok({ importId: id, again: same.length > 0 });
  });
}

/** Hands a previewed file to the worker. A second press changes nothing. */
export async function startImport(ctx: Ctx, importId: string): Promise<Result<{ importId: string }>> {
  const may = permit(ctx, "ledger.import");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [batch] = await ctx.tx
      .select({ state: importBatches.state, rowsGood: importBatches.rowsGood })
      .from(importBatches)
      .where(eq(importBatches.id, importId))
      .for("update");
    if (!batch) return refuse("not_found", "This import is not there. Start again with the file.");
    if (batch.state === "applying" || batch.state === "applied") return ok({ importId });
    if (batch.state === "cancelled") return refuse("rule", "This import was stopped. Send the file again.");
    if (batch.rowsGood === 0)
      return refuse("rule", "No row of this file can be added. Correct it and send it again.");
    await ctx.tx
      .update(importBatches)
      .set({ state: "applying", error: null })
      .where(eq(importBatches.id, importId));
    await audit(ctx, { act: "ledger.import.start", subject: ["import", importId] });
    await enqueue(ctx, "ledger.apply_import", { importId }, { key: `import:${importId}` });
    return ok({ importId });
  });
}

/** Stops an import between two steps. What was added stays, and is told. */
export async function cancelImport(ctx: Ctx, importId: string): Promise<Result<undefined>> {
  const may = permit(ctx, "ledger.import");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const done = await ctx.tx
      .update(importBatches)
      .set({ state: "cancelled", finishedAt: ctx.now })
      .where(and(eq(importBatches.id, importId), inArray(importBatches.state, ["previewed", "applying"])))
      .returning({ id: importBatches.id });
    if (done.length === 0) return refuse("rule", "This import has ended already; there is nothing to stop.");
    await audit(ctx, { act: "ledger.import.cancel", subject: ["import", importId] });
    return ok();
  });
}

/** A part leaves its slot and another takes it: both days on record, the tree stays whole. */
export async function swapPart(
  ctx: Ctx,
  raw: z.input<typeof SwapPart>,
): Promise<Result<{ installationId: string }>> {
  const may = permit(ctx, "ledger.swap");
  if (!may.ok) return may;
  const input = parse(SwapPart, raw);
  if (!input.ok) return input;
  const { parentUnitId, slot, outUnitId, inUnitId, onDay, reason } = input.value;
  return transact(ctx, async (ctx) => {
    const [old] = await ctx.tx
      .select()
      .from(installations)
      .where(
        and(
          eq(installations.parentUnitId, parentUnitId),
          eq(installations.slot, slot),
          isNull(installations.toOn),
        ),
      )
      .for("update");
    if (!old || old.unitId !== outUnitId)
      return refuse("conflict", `The part in ${slot} is another one by now. Look at the tree again.`);
    await ctx.tx
      .update(installations)
      .set({ toOn: onDay < old.fromOn ? old.fromOn : onDay, removedReason: reason })
      .where(eq(installations.id, old.id));
    const installationId = ctx.newId();
    await ctx.tx.insert(installations).values({
      id: installationId,
      parentUnitId,
      unitId: inUnitId,
      slot,
      saleLineId: old.saleLineId,
      source: "swap",
      fromOn: onDay < old.fromOn ? old.fromOn : onDay,
      replacesId: old.id,
      swaps: [...old.swaps, onDay < old.fromOn ? old.fromOn : onDay],
      coverSaleLineId: old.coverSaleLineId,
      givenOn: old.givenOn,
      noticedOn: old.noticedOn,
      createdAt: ctx.now,
    });
    await audit(ctx, {
      act: "ledger.swap",
      subject: ["unit", parentUnitId],
      before: { slot, unitId: outUnitId },
      after: { slot, unitId: inUnitId },
    });
    return ok({ installationId });
  });
}

/** Where a unit is from now on. */
export async function moveUnit(ctx: Ctx, raw: z.input<typeof MoveUnit>): Promise<Result<undefined>> {
  const may = permit(ctx, "ledger.move");
  if (!may.ok) return may;
  const input = parse(MoveUnit, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    const [before] = await ctx.tx
      .select({ whereabouts: units.whereabouts, place: units.place })
      .from(units)
      .where(eq(units.id, input.value.unitId))
      .for("update");
    if (!before) return refuse("not_found", "This unit is not in the ledger.");
    const after = { whereabouts: input.value.whereabouts, place: input.value.place ?? null };
    await ctx.tx.update(units).set(after).where(eq(units.id, input.value.unitId));
    await audit(ctx, { act: "ledger.move", subject: ["unit", input.value.unitId], before, after });
    return ok();
  });
}

/** A sale ends: credited, refunded or taken over by another unit. Its parts' places end with it. */
export async function endSale(
  ctx: Ctx,
  raw: z.input<typeof EndSale>,
): Promise<Result<{ saleLineIds: string[] }>> {
  const may = permit(ctx, "ledger.swap");
  if (!may.ok) return may;
  const input = parse(EndSale, raw);
  if (!input.ok) return input;
  const { unitId, onDay, reason } = input.value;
  return transact(ctx, async (ctx) => {
    const ended = await ctx.tx
      .update(saleLines)
      .set({ endedOn: onDay, endedReason: reason })
      .where(and(eq(saleLines.unitId, unitId), isNull(saleLines.endedOn)))
      .returning({ id: saleLines.id });
    // A part that was sold in its system has no sale of its own: its place ends.
    const left =
      ended.length > 0
        ? []
        : await ctx.tx
            .update(installations)
            .set({ toOn: sql`greatest(${onDay}::date, ${installations.fromOn})`, removedReason: reason })
            .where(and(eq(installations.unitId, unitId), isNull(installations.toOn)))
            .returning({ saleLineId: installations.saleLineId });
    if (ended.length === 0 && left.length === 0)
      return refuse("rule", "This unit has no open sale and no place: there is nothing to end.");
    for (const line of ended) {
      await ctx.tx
        .update(installations)
        .set({ toOn: sql`greatest(${onDay}::date, ${installations.fromOn})`, removedReason: reason })
        .where(and(eq(installations.saleLineId, line.id), isNull(installations.toOn)));
    }
    await audit(ctx, { act: "ledger.end_sale", subject: ["unit", unitId], after: { onDay, reason } });
    return ok({
      saleLineIds: [...ended.map((e) => e.id), ...left.flatMap((l) => (l.saleLineId ? [l.saleLineId] : []))],
    });
  });
}

/** A whole unit is replaced: the new serial takes over the sale with its first days, terms and account. */
export async function replaceSystem(
  ctx: Ctx,
  raw: z.input<typeof ReplaceSystem>,
): Promise<Result<{ saleLineId: string }>> {
  const may = permit(ctx, "ledger.swap");
  if (!may.ok) return may;
  const input = parse(ReplaceSystem, raw);
  if (!input.ok) return input;
  const { oldUnitId, newUnitId, onDay } = input.value;
  return transact(ctx, async (ctx) => {
    const [sale] = await ctx.tx
      .select()
      .from(saleLines)
      .where(and(eq(saleLines.unitId, oldUnitId), isNull(saleLines.endedOn)))
      .for("update");
    if (!sale) return refuse("rule", "The unit to replace has no open sale.");
    const [fresh] = await ctx.tx
      .select({ serialKey: units.serialKey })
      .from(units)
      .where(eq(units.id, newUnitId));
    if (!fresh) return refuse("not_found", "The new unit is not in the ledger.");
    const ended = await endSale(ctx, { unitId: oldUnitId, onDay, reason: "replaced" });
    if (!ended.ok) return ended;
    const saleLineId = ctx.newId();
    await ctx.tx.insert(saleLines).values({
      ...sale,
      id: saleLineId,
      unitId: newUnitId,
      lineKey: `${sale.orderNumber}|${fresh.serialKey}|${onDay}`,
      swaps: [...sale.swaps, onDay],
      endedOn: null,
      endedReason: null,
      createdAt: ctx.now,
    });
    // Its pauses and who it was given on to are facts of the sale, and go along.
    await ctx.tx.execute(sql`insert into cover_pause (id, sale_line_id, from_on, to_on, reason)
      select gen_random_uuid(), ${saleLineId}, from_on, to_on, reason from cover_pause where sale_line_id = ${sale.id}`);
    await ctx.tx.execute(sql`insert into sale_transfer
        (id, sale_line_id, from_account_id, to_account_id, on_day, noticed_on, created_at)
      select gen_random_uuid(), ${saleLineId}, from_account_id, to_account_id, on_day, noticed_on, created_at
        from sale_transfer where sale_line_id = ${sale.id}`);
    // What stands in the new unit stands under the sale it took over.
    await ctx.tx
      .update(installations)
      .set({ saleLineId })
      .where(and(eq(installations.parentUnitId, newUnitId), isNull(installations.toOn)));
    await audit(ctx, {
      act: "ledger.replace_system",
      subject: ["unit", oldUnitId],
      after: { newUnitId, onDay },
    });
    return ok({ saleLineId });
  });
}

const AddStock = z.object({
  serial: z.string().min(4).max(60),
  model: z.object({
    code: z.string().min(1),
    name: z.string().min(1),
    kind: z.enum(UNIT_KINDS),
    family: z.enum(FAMILIES),
    maker: z.string().default(""),
    facts: z.record(z.string(), z.union([z.string(), z.number()])).default({}),
    weightKg: z.number().positive().nullish(),
    dataBearing: z.boolean().default(false),
    battery: z.enum(["none", "coin", "ion", "lead"]).default("none"),
  }),
  condition: z.enum(CONDITIONS),
  place: z.string().min(1),
  lot: z.string().nullish(),
  supplier: z.string().nullish(),
});

/** A unit of ours, not sold: stock in a bay. Its model is made when new. */
export async function addStock(ctx: Ctx, raw: z.input<typeof AddStock>): Promise<Result<{ unitId: string }>> {
  const may = permit(ctx, "ledger.import");
  if (!may.ok) return may;
  const input = parse(AddStock, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    await ctx.tx
      .insert(models)
      .values({ id: ctx.newId(), ...v.model, weightKg: v.model.weightKg ?? null })
      .onConflictDoUpdate({
        target: models.code,
        set: {
          facts: v.model.facts,
          weightKg: v.model.weightKg ?? null,
          dataBearing: v.model.dataBearing,
          battery: v.model.battery,
          maker: v.model.maker,
          name: v.model.name,
        },
      });
    const [model] = await ctx.tx.select({ id: models.id }).from(models).where(eq(models.code, v.model.code));
    let lotId: string | null = null;
    if (v.lot && v.supplier) {
      await ctx.tx
        .insert(suppliers)
        .values({ id: ctx.newId(), code: v.supplier, name: v.supplier })
        .onConflictDoNothing();
      const [supplier] = await ctx.tx
        .select({ id: suppliers.id })
        .from(suppliers)
        .where(eq(suppliers.code, v.supplier));
      await ctx.tx
        .insert(lots)
        .values({ id: ctx.newId(), code: v.lot, supplierId: supplier!.id, modelId: model!.id })
        .onConflictDoNothing();
      const [lot] = await ctx.tx
        .select({ id: lots.id })
        .from(lots)
        .where(and(eq(lots.code, v.lot), eq(lots.supplierId, supplier!.id)));
      lotId = lot!.id;
    }
    const unitId = ctx.newId();
    const added = await ctx.tx
      .insert(units)
      .values({
        id: unitId,
        serial: v.serial,
        serialKey: serialKey(v.serial),
        serialLoose: serialLoose(v.serial),
        modelId: model!.id,
        lotId,
        condition: v.condition,
        whereabouts: "stock",
        place: v.place,
        createdAt: ctx.now,
      })
      .onConflictDoNothing()
      .returning({ id: units.id });
    if (added.length === 0) return refuse("conflict", `${v.serial} is in the ledger already.`);
    await audit(ctx, {
      act: "ledger.add_stock",
      subject: ["unit", unitId],
      after: { serial: v.serial, model: v.model.code, place: v.place },
    });
    return ok({ unitId });
  });
}

const KeepSite = z.object({
  code: z.string().min(1),
  name: z.string().min(1),
  zone: z.string().min(1),
  addressLines: z.array(z.string()).min(1),
  country: z.string().length(2),
  workdays: z.array(z.number().int().min(1).max(7)).min(1),
  opensAt: z.string().regex(/^\d\d:\d\d$/),
  closesAt: z.string().regex(/^\d\d:\d\d$/),
  holidays: z.array(z.object({ day: z.iso.date(), name: z.string() })),
});

/** Sets up our own site, its working hours and its holidays. */
export async function keepSite(ctx: Ctx, raw: z.input<typeof KeepSite>): Promise<Result<{ siteId: string }>> {
  const may = permit(ctx, "people.write");
  if (!may.ok) return may;
  const input = parse(KeepSite, raw);
  if (!input.ok) return input;
  const { holidays: days, ...site } = input.value;
  return transact(ctx, async (ctx) => {
    await ctx.tx
      .insert(sites)
      .values({ id: ctx.newId(), ...site, isDefault: true })
      .onConflictDoUpdate({ target: sites.code, set: site });
    const [row] = await ctx.tx.select({ id: sites.id }).from(sites).where(eq(sites.code, site.code));
    await ctx.tx.delete(holidays).where(eq(holidays.siteId, row!.id));
    if (days.length > 0)
      await ctx.tx.insert(holidays).values(days.map((d) => ({ id: ctx.newId(), siteId: row!.id, ...d })));
    await audit(ctx, { act: "ledger.keep_site", subject: ["site", row!.id], after: site });
    return ok({ siteId: row!.id });
  });
}
