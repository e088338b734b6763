import { and, eq } from "drizzle-orm";
import type { z } from "zod";
import { transact } from "@/db/client";
import { discrepancies, parcels, photos, receiptLines } from "@/db/schema/dock";
import { files } from "@/db/schema/files";
import { rmaLines, rmas } from "@/db/schema/rma";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { cleanScan } from "@/lib/base/serial";
import { actorName, type Ctx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { moveUnit } from "@/lib/ledger/commands";
import { unitBySerial } from "@/lib/ledger/queries";
import { enqueueMail } from "@/lib/mail/commands";
import { advanceRma, lockLine, setLineState } from "@/lib/rma/commands";
import { rmaById } from "@/lib/rma/queries";
import { recordEntry } from "@/lib/tickets/commands";
import { photosOf } from "./queries";
import { matchScan, photosNeeded } from "./rules";
import { KeepPhoto, PHOTO_SLOT_WORDS, ReceiveLine, SetAside } from "./schema";

/** A photo taken at the dock or the bench, tied to what it shows. */
export async function keepPhoto(
  ctx: Ctx,
  raw: z.input<typeof KeepPhoto>,
): Promise<Result<{ photoId: string }>> {
  const may = permit(ctx, "dock.photo");
  if (!may.ok) return may;
  const input = parse(KeepPhoto, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    const [file] = await ctx.tx.select({ id: files.id }).from(files).where(eq(files.id, input.value.fileId));
    if (!file) return refuse("not_found", "This photo did not arrive. Take it again.");
    const id = ctx.newId();
    await ctx.tx
      .insert(photos)
      .values({ id, ...input.value, takenAt: ctx.now, takenByName: actorName(ctx.actor) })
      .onConflictDoNothing();
    await audit(ctx, {
      act: "dock.photo",
      subject: [input.value.subject, input.value.subjectId],
      after: { slot: input.value.slot, fileId: input.value.fileId },
    });
    return ok({ photoId: id });
  });
}

/**
 * Takes one line in: right serial, photos there, place known. At most one receipt a line: the same
 * station sending twice gets its first receipt back, another station is told who was first.
 */
export async function receiveLine(
  ctx: Ctx,
  raw: z.input<typeof ReceiveLine>,
): Promise<Result<{ receiptId: string; again: boolean; rmaNumber: string }>> {
  const may = permit(ctx, "dock.receive");
  if (!may.ok) return may;
  const input = parse(ReceiveLine, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    await lockLine(ctx, v.lineId);
    const [line] = await ctx.tx.select().from(rmaLines).where(eq(rmaLines.id, v.lineId));
    if (!line) return refuse("not_found", "This line is not on any RMA.");
    const rma = (await rmaById(ctx, line.rmaId))!;
    const [done] = await ctx.tx.select().from(receiptLines).where(eq(receiptLines.rmaLineId, v.lineId));
    if (done) {
      if (done.clientId === v.clientId)
        return ok<{ receiptId: string; again: boolean; rmaNumber: string }>({
          receiptId: done.id,
          again: true,
          rmaNumber: rma.number,
        });
      return refuse(
        "conflict",
        `${done.scanned} was taken in already by ${done.receivedByName}, at ${done.place}.`,
      );
    }
    const view = rma.lines.find((l) => l.id === v.lineId)!;
    const verdict = matchScan(v.scanned, [{ lineId: v.lineId, serial: view.serial, state: line.state }]);
    if (verdict.kind === "wrong")
      return refuse("rule", `Stop. ${verdict.headline} Nothing was booked.`, {
        details: { expected: view.serial, scanned: v.scanned },
      });
    if (line.state !== "open")
      return refuse("conflict", `${view.serial} is not expected any more: its line is ${line.state}.`);
    // A photo that the check threw out shows nothing.
    const have = ((await photosOf(ctx, "receipt_line", [v.lineId])).get(v.lineId) ?? []).filter(
      (p) => p.state !== "rejected",
    );
    const missing = photosNeeded(view.family, v.condition).filter((s) => !have.some((p) => p.slot === s));
    if (missing.length > 0)
      return refuse(
        "rule",
        `Photo missing before it moves: ${missing.map((m) => PHOTO_SLOT_WORDS[m].toLowerCase()).join(", ")}.`,
      );
    const moved = await advanceRma(ctx, { rmaId: rma.id, act: "receive" });
    if (!moved.ok) return moved;
    const [parcel] = await ctx.tx
      .update(parcels)
      .set({ state: "arrived", arrivedAt: ctx.now })
      .where(and(eq(parcels.rmaId, rma.id), eq(parcels.state, "expected")))
      .returning({ id: parcels.id });
    const id = ctx.newId();
    await ctx.tx.insert(receiptLines).values({
      id,
      rmaLineId: v.lineId,
      accountId: line.accountId,
      parcelId: parcel?.id ?? null,
      unitId: line.unitId,
      scanned: cleanScan(v.scanned),
      condition: v.condition,
      place: v.place,
      note: v.note,
      receivedAt: ctx.now,
      receivedByName: actorName(ctx.actor),
      clientId: v.clientId,
    });
    const state = await setLineState(ctx, { lineId: v.lineId, state: "received" });
    if (!state.ok) return state;
    const place = await moveUnit(ctx, { unitId: line.unitId, whereabouts: "bench", place: v.place });
    if (!place.ok) return place;
    const entry = await recordEntry(ctx, {
      ticketId: rma.ticketId,
      kind: "dock_received",
      line: `Right serial ${view.serial}, ${have.length} ${have.length === 1 ? "photo" : "photos"}, to ${v.place}`,
      data: {
        rmaId: rma.id,
        number: rma.number,
        serial: view.serial,
        place: v.place,
        condition: v.condition,
        photos: have.map((p) => p.fileId),
      },
    });
    if (!entry.ok) return entry;
    const told = await enqueueMail(ctx, {
      to: rma.personEmail,
      toName: rma.personName,
      template: "received",
      props: {
        personName: rma.personName,
        rmaNumber: rma.number,
        serial: view.serial,
        next: "It goes to the bench now. You hear what we find, whatever we find.",
        link: `${env().MENDBAY_URL}/rma/${rma.number}`,
      },
      ticketId: rma.ticketId,
      accountId: rma.accountId,
      automatic: true,
    });
    if (!told.ok) return told;
    await audit(ctx, {
      act: "dock.receive",
      subject: ["rma_line", v.lineId],
      after: { place: v.place, condition: v.condition, serial: view.serial },
    });
    return ok({ receiptId: id, again: false, rmaNumber: rma.number });
  });
}

/** Sets a wrong or unknown unit aside and tells the desk. Nothing is taken in. */
export async function setAside(
  ctx: Ctx,
  raw: z.input<typeof SetAside>,
): Promise<Result<{ discrepancyId: string; again: boolean }>> {
  const may = permit(ctx, "dock.receive");
  if (!may.ok) return may;
  const input = parse(SetAside, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const known = await unitBySerial(ctx, v.scanned);
    const id = ctx.newId();
    const kept = await ctx.tx
      .insert(discrepancies)
      .values({
        id,
        kind: v.kind,
        rmaId: v.rmaId ?? null,
        scanned: cleanScan(v.scanned),
        expected: v.expected ?? null,
        unitId: known?.unitId ?? null,
        place: v.place,
        note: v.note,
        foundAt: ctx.now,
        foundByName: actorName(ctx.actor),
        clientId: v.clientId,
      })
      .onConflictDoNothing()
      .returning({ id: discrepancies.id });
    if (kept.length === 0)
      return ok<{ discrepancyId: string; again: boolean }>({ discrepancyId: "", again: true });
    if (v.rmaId) {
      const [rma] = await ctx.tx
        .select({ ticketId: rmas.ticketId, number: rmas.number })
        .from(rmas)
        .where(eq(rmas.id, v.rmaId));
      if (rma) {
        const entry = await recordEntry(ctx, {
          ticketId: rma.ticketId,
          kind: "dock_stopped",
          line: `Stopped: ${cleanScan(v.scanned)} came instead of ${v.expected ?? "what was announced"}, set aside in ${v.place}`,
          data: {
            scanned: cleanScan(v.scanned),
            expected: v.expected ?? null,
            place: v.place,
            rmaId: v.rmaId,
            number: rma.number,
          },
        });
        if (!entry.ok) return entry;
      }
    }
    await audit(ctx, {
      act: "dock.set_aside",
      subject: ["discrepancy", id],
      after: { kind: v.kind, scanned: v.scanned, place: v.place },
    });
    return ok({ discrepancyId: id, again: false });
  });
}
