import { and, eq, inArray, sql } from "drizzle-orm";
import { transact } from "@/db/client";
import { terms, termsVersions } from "@/db/schema/coverage";
import {
  accounts,
  contacts,
  importBatches,
  installations,
  lots,
  models,
  saleLines,
  suppliers,
  units,
} from "@/db/schema/ledger";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { ok, refuse, type Result } from "@/lib/base/result";
import { serialKey, serialLoose } from "@/lib/base/serial";
import type { Ctx, TxCtx } from "@/lib/ctx";
import { withTerms } from "./commands";
import { groupShipments, readShipments, type ShipmentRow } from "./shipments";

/** Rows added in one transaction, whole systems at a time. */
const CHUNK_ROWS = 1500;
/** Rows in one statement: PostgreSQL takes 65 535 parameters. */
const SLICE = 3000;

export type ImportStep = { done: boolean; saleLineIds: string[] };

/** Reads the kept file of an import into groups, once per run of the job. */
export async function loadImport(ctx: Ctx, importId: string): Promise<Result<ShipmentRow[][]>> {
  const may = permit(ctx, "ledger.import");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [batch] = await ctx.tx
      .select({ content: importBatches.content })
      .from(importBatches)
      .where(eq(importBatches.id, importId));
    if (!batch) return refuse("not_found", "This import is not there.");
    const found = readShipments(batch.content);
    if (!found.ok) return found;
    await audit(ctx, { act: "ledger.import.load", subject: ["import", importId] });
    // What the preview left out stays out: its unit would stand in the ledger without a sale.
    return ok(groupShipments((await withTerms(ctx, found.value)).rows));
  });
}

/**
 * Adds the next chunk of groups and moves the counter with it, so that a broken run goes on
 * where it was. Sale lines are keyed by order and serial: what is there already is left as it is.
 */
export async function applyImportChunk(
  ctx: Ctx,
  importId: string,
  groups: ShipmentRow[][],
): Promise<Result<ImportStep>> {
  const may = permit(ctx, "ledger.import");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const [batch] = await ctx.tx
      .select({
        state: importBatches.state,
        rowsDone: importBatches.rowsDone,
        added: importBatches.added,
        problems: importBatches.problems,
        problemsTotal: importBatches.problemsTotal,
      })
      .from(importBatches)
      .where(eq(importBatches.id, importId))
      .for("update");
    if (!batch) return refuse("not_found", "This import is not there.");
    if (batch.state !== "applying") return ok({ done: true, saleLineIds: [] });
    // Skip the groups that earlier chunks have done.
    let skipped = 0;
    let from = 0;
    while (from < groups.length && skipped < batch.rowsDone) skipped += groups[from++]!.length;
    let to = from;
    for (let n = 0; to < groups.length && n < CHUNK_ROWS; to++) n += groups[to]!.length;
    const chunk = groups.slice(from, to);
    const added = await addGroups(ctx, chunk, importId);
    const rowsDone = batch.rowsDone + chunk.reduce((n, g) => n + g.length, 0);
    const done = from + chunk.length >= groups.length;
    const total = { ...batch.added };
    for (const [k, n] of Object.entries(added.counts)) total[k] = (total[k] ?? 0) + n;
    await ctx.tx
      .update(importBatches)
      .set({
        rowsDone,
        added: total,
        problems: [...batch.problems, ...added.problems].slice(0, 400),
        problemsTotal: batch.problemsTotal + added.problems.length,
        state: done ? "applied" : "applying",
        finishedAt: done ? ctx.now : null,
      })
      .where(eq(importBatches.id, importId));
    await audit(ctx, {
      act: "ledger.import.apply",
      subject: ["import", importId],
      after: { rowsDone, ...added.counts },
    });
    return ok({ done, saleLineIds: added.saleLineIds });
  });
}

async function idsBy<T extends string>(rows: { key: T; id: string }[]): Promise<Map<T, string>> {
  return new Map(rows.map((r) => [r.key, r.id]));
}

async function addGroups(ctx: TxCtx, groups: ShipmentRow[][], importId: string) {
  const rows = groups.flat();
  const counts: Record<string, number> = { accounts: 0, systems: 0, parts: 0, sales: 0 };
  const problems: { row: number; column: string | null; message: string }[] = [];
  const saleLineIds: string[] = [];
  if (rows.length === 0) return { counts, problems, saleLineIds };
  const { tx } = ctx;

  const uniq = <T>(list: T[], key: (t: T) => string) => [...new Map(list.map((t) => [key(t), t])).values()];

  const accountRows = uniq(rows, (r) => r.accountCode);
  const newAccounts = await tx
    .insert(accounts)
    .values(
      accountRows.map((r) => ({
        id: ctx.newId(),
        code: r.accountCode,
        name: r.accountName,
        buyerKind: r.buyerKind,
        country: r.country,
        createdAt: ctx.now,
      })),
    )
    .onConflictDoNothing()
    .returning({ id: accounts.id });
  counts.accounts = newAccounts.length;
  const accountIds = await idsBy(
    await tx
      .select({ key: accounts.code, id: accounts.id })
      .from(accounts)
      .where(
        inArray(
          accounts.code,
          accountRows.map((r) => r.accountCode),
        ),
      ),
  );
  const contactRows = uniq(
    rows.filter((r) => r.contactEmail !== ""),
    (r) => r.contactEmail,
  );
  if (contactRows.length > 0)
    await tx
      .insert(contacts)
      .values(
        contactRows.map((r) => ({
          id: ctx.newId(),
          accountId: accountIds.get(r.accountCode)!,
          name: r.contactName || r.contactEmail,
          email: r.contactEmail,
          createdAt: ctx.now,
        })),
      )
      .onConflictDoNothing();

  const modelRows = uniq(rows, (r) => r.model);
  await tx
    .insert(models)
    .values(
      modelRows.map((r) => ({
        id: ctx.newId(),
        code: r.model,
        name: r.modelName,
        kind: r.kind,
        family: r.family,
        maker: r.maker,
        dataBearing: r.family === "drive" || r.kind === "system",
      })),
    )
    .onConflictDoNothing();
  const modelIds = await idsBy(
    await tx
      .select({ key: models.code, id: models.id })
      .from(models)
      .where(
        inArray(
          models.code,
          modelRows.map((r) => r.model),
        ),
      ),
  );

  const supplied = rows.filter((r) => r.supplier !== "");
  const lotIds = new Map<string, string>();
  if (supplied.length > 0) {
    const names = [...new Set(supplied.map((r) => r.supplier))];
    await tx
      .insert(suppliers)
      .values(names.map((name) => ({ id: ctx.newId(), code: name.toUpperCase(), name })))
      .onConflictDoNothing();
    const supplierIds = await idsBy(
      await tx
        .select({ key: suppliers.code, id: suppliers.id })
        .from(suppliers)
        .where(
          inArray(
            suppliers.code,
            names.map((n) => n.toUpperCase()),
          ),
        ),
    );
    const lotRows = uniq(
      supplied.filter((r) => r.lot !== ""),
      (r) => `${r.supplier.toUpperCase()}|${r.lot}`,
    );
    if (lotRows.length > 0) {
      await tx
        .insert(lots)
        .values(
          lotRows.map((r) => ({
            id: ctx.newId(),
            code: r.lot,
            supplierId: supplierIds.get(r.supplier.toUpperCase())!,
            modelId: modelIds.get(r.model)!,
          })),
        )
        .onConflictDoNothing();
      const found = await tx
        .select({ code: lots.code, supplier: suppliers.code, id: lots.id })
        .from(lots)
        .innerJoin(suppliers, eq(suppliers.id, lots.supplierId))
        .where(
          inArray(
            lots.code,
            lotRows.map((r) => r.lot),
          ),
        );
      for (const l of found) lotIds.set(`${l.supplier}|${l.code}`, l.id);
    }
  }

  const keys = rows.map((r) => serialKey(r.serial));
  const newUnits: { id: string; key: string }[] = [];
  for (let at = 0; at < rows.length; at += SLICE) {
    newUnits.push(
      ...(await tx
        .insert(units)
        .values(
          rows.slice(at, at + SLICE).map((r) => ({
            id: ctx.newId(),
            serial: r.serial,
            serialKey: serialKey(r.serial),
            serialLoose: serialLoose(r.serial),
            modelId: modelIds.get(r.model)!,
            lotId: lotIds.get(`${r.supplier.toUpperCase()}|${r.lot}`) ?? null,
            condition: r.condition,
            whereabouts: "customer" as const,
            createdAt: ctx.now,
          })),
        )
        .onConflictDoNothing()
        .returning({ id: units.id, key: units.serialKey })),
    );
  }
  const fresh = new Set(newUnits.map((u) => u.key));
  counts.systems = rows.filter((r) => r.kind === "system" && fresh.has(serialKey(r.serial))).length;
  counts.parts = rows.filter((r) => r.kind === "part" && fresh.has(serialKey(r.serial))).length;
  const known = await tx
    .select({ key: units.serialKey, id: units.id, whereabouts: units.whereabouts })
    .from(units)
    .where(inArray(units.serialKey, keys));
  const unitIds = new Map(known.map((u) => [u.key, u.id]));

  const lineKeyOf = (r: ShipmentRow) => `${r.order}|${serialKey(r.serial)}`;
  const sold = rows.filter((r) => r.parentSerial === "");
  const present = new Set(
    (
      await tx
        .select({ key: saleLines.lineKey })
        .from(saleLines)
        .where(inArray(saleLines.lineKey, sold.map(lineKeyOf)))
    ).map((s) => s.key),
  );
  const openSales = new Map(
    (
      await tx
        .select({ unitId: saleLines.unitId, order: saleLines.orderNumber })
        .from(saleLines)
        .where(
          and(
            inArray(
              saleLines.unitId,
              sold.map((r) => unitIds.get(serialKey(r.serial))!),
            ),
            sql`${saleLines.endedOn} is null`,
          ),
        )
    ).map((s) => [s.unitId, s.order]),
  );
  const versions = await tx
    .select({ code: terms.code, id: termsVersions.id, effectiveOn: termsVersions.effectiveOn })
    .from(termsVersions)
    .innerJoin(terms, eq(terms.id, termsVersions.termsId))
    .where(sql`${termsVersions.publishedAt} is not null`)
    .orderBy(sql`${termsVersions.effectiveOn} desc, ${termsVersions.issue} desc`);
  const bySerial = new Map<string, string>();
  const values: (typeof saleLines.$inferInsert)[] = [];
  for (const r of sold) {
    const key = serialKey(r.serial);
    const unitId = unitIds.get(key)!;
    if (present.has(lineKeyOf(r))) continue;
    const open = openSales.get(unitId);
    if (open !== undefined) {
      problems.push({
        row: r.row,
        column: "serial",
        message: `${r.serial} is still sold under order ${open}. End that sale first: a unit is sold again only after it came back.`,
      });
      continue;
    }
    const version = versions.find((v) => v.code === r.terms && v.effectiveOn <= r.shippedOn);
    if (!version) {
      problems.push({
        row: r.row,
        column: "terms",
        message: `No published terms ${r.terms} are in force on ${r.shippedOn}.`,
      });
      continue;
    }
    const id = ctx.newId();
    bySerial.set(key, id);
    saleLineIds.push(id);
    values.push({
      id,
      unitId,
      accountId: accountIds.get(r.accountCode)!,
      orderNumber: r.order,
      lineKey: lineKeyOf(r),
      shippedOn: r.shippedOn,
      deliveredOn: r.deliveredOn || null,
      invoicedOn: r.invoicedOn || null,
      installedOn: r.installedOn || null,
      termsVersionId: version.id,
      condition: r.condition,
      buyerKind: r.buyerKind,
      country: r.country,
      siteNote: r.siteNote || null,
      importId,
      createdAt: ctx.now,
    });
  }
  if (values.length > 0) {
    await tx.insert(saleLines).values(values);
    await tx
      .update(units)
      .set({ whereabouts: "customer", place: null })
      .where(
        inArray(
          units.id,
          values.map((v) => v.unitId),
        ),
      );
  }
  counts.sales = values.length;

  // Parts stand under the sale of their root; a root that was there already brings nothing new.
  const rootSale = new Map<string, string>();
  for (const group of groups) {
    const root = group[0]!;
    const sale = bySerial.get(serialKey(root.serial));
    if (sale) for (const r of group) rootSale.set(serialKey(r.serial), sale);
  }
  const placed = rows.filter((r) => r.parentSerial !== "" && rootSale.has(serialKey(r.serial)));
  for (let at = 0; at < placed.length; at += SLICE) {
    const slice = placed.slice(at, at + SLICE);
    const put = await tx
      .insert(installations)
      .values(
        slice.map((r) => ({
          id: ctx.newId(),
          parentUnitId: unitIds.get(serialKey(r.parentSerial))!,
          unitId: unitIds.get(serialKey(r.serial))!,
          slot: r.slot,
          saleLineId: rootSale.get(serialKey(r.serial))!,
          source: "as_built" as const,
          fromOn: r.shippedOn,
          createdAt: ctx.now,
        })),
      )
      .onConflictDoNothing()
      .returning({ unitId: installations.unitId });
    const stands = new Set(put.map((p) => p.unitId));
    if (stands.size > 0)
      await tx
        .update(units)
        .set({ whereabouts: "customer", place: null })
        .where(inArray(units.id, [...stands]));
    for (const r of slice) {
      if (stands.has(unitIds.get(serialKey(r.serial))!)) continue;
      problems.push({
        row: r.row,
        column: "serial",
        message: `${r.serial} still stands in another unit, or its slot is taken. Record that swap first, then add it.`,
      });
    }
  }
  return { counts, problems, saleLineIds };
}
