import { and, eq, sql } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { benchTests, replacements, sanitizationRecords, shipments, stepReadings } from "@/db/schema/dock";
import { installations, saleLines, units } from "@/db/schema/ledger";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { serialKey } from "@/lib/base/serial";
import { showDay } from "@/lib/base/show";
import { inheritedCover, refreshCover } from "@/lib/coverage/commands";
import { coverFor } from "@/lib/coverage/queries";
import { actorName, type Ctx, type TxCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { endSale, moveUnit, replaceSystem, swapPart } from "@/lib/ledger/commands";
import { modelsOf, unitBySerial } from "@/lib/ledger/queries";
import { enqueueMail } from "@/lib/mail/commands";
import { advanceRma, lockLine, setLineState, settleRma } from "@/lib/rma/commands";
import { rmaById } from "@/lib/rma/queries";
import { recordEntry } from "@/lib/tickets/commands";
import { fit } from "./fit";
import { benchLine, photosOf, type BenchView } from "./queries";
import { mayClose, mayFollow } from "./rules";
import { CloseBench, KeepReading, SendBack, ShipOut, StartBench, TEST_OUTCOME_WORDS } from "./schema";
import { sheetFor, verdictOf } from "./sheets";

const same = (a: string, b: string) => serialKey(a) === serialKey(b);

/** A wrong serial at the bench: the sentence stands above the field that was scanned into. */
const stopAt = (words: string) => refuse("rule", words, { fields: { scan: [words] } });

/** Scans a unit in at the bench and opens its test, by the newest checklist of its family. */
export async function startBench(
  ctx: Ctx,
  raw: z.input<typeof StartBench>,
): Promise<Result<{ testId: string }>> {
  const may = permit(ctx, "bench.test");
  if (!may.ok) return may;
  const input = parse(StartBench, raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    await lockLine(ctx, input.value.lineId);
    const line = await benchLine(ctx, input.value.lineId);
    if (!line) return refuse("not_found", "This unit is not at the bench.");
    if (line.test) return ok({ testId: line.test.id });
    if (line.lineState !== "received")
      return refuse("rule", "Only a unit that the dock has taken in can be tested.");
    if (!same(input.value.scan, line.serial))
      return stopAt(
        `Stop: ${input.value.scan} was scanned, and ${line.serial} is to be tested. Scan ${line.serial}.`,
      );
    const moved = await advanceRma(ctx, { rmaId: line.rmaId, act: "start_bench" });
    if (!moved.ok) return moved;
    const sheet = sheetFor(line.family);
    const testId = ctx.newId();
    const rma = (await rmaById(ctx, line.rmaId))!;
    await ctx.tx.insert(benchTests).values({
      id: testId,
      rmaLineId: line.lineId,
      accountId: rma.accountId,
      unitId: line.unitId,
      sheet: sheet.code,
      sheetIssue: sheet.issue,
      startedAt: ctx.now,
      startedByName: actorName(ctx.actor),
      scanIn: input.value.scan,
    });
    const entry = await recordEntry(ctx, {
      ticketId: line.ticketId,
      kind: "bench_started",
      line: `Test of ${line.serial} begun, sheet ${sheet.title}, issue ${sheet.issue}`,
      data: { rmaLineId: line.lineId, serial: line.serial },
    });
    if (!entry.ok) return entry;
    await audit(ctx, {
      act: "bench.start",
      subject: ["bench_test", testId],
      after: { serial: line.serial, sheet: sheet.code },
    });
    return ok({ testId });
  });
}

/** Keeps one reading. Its limits give the verdict; where there are none, the person does. */
export async function keepReading(
  ctx: Ctx,
  raw: z.input<typeof KeepReading>,
): Promise<Result<{ verdict: string }>> {
  const may = permit(ctx, "bench.test");
  if (!may.ok) return may;
  const input = parse(KeepReading, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const [test] = await ctx.tx.select().from(benchTests).where(eq(benchTests.id, v.testId)).for("update");
    if (!test) return refuse("not_found", "This test is not there.");
    if (test.closedAt) return refuse("rule", "This test is closed; its readings stay as they are.");
    const line = (await benchLine(ctx, test.rmaLineId))!;
    const step = sheetFor(line.family).steps.find((s) => s.step === v.step);
    if (!step) return refuse("invalid", "The sheet has no such step.");
    const bySerial = step.serial && v.value !== "" ? (same(v.value, line.serial) ? "pass" : "fail") : null;
    const verdict = bySerial ?? verdictOf(step, v.value) ?? v.verdict ?? null;
    if (verdict === null)
      return refuse("invalid", "Give the reading, or choose pass or fail.", {
        fields: { value: ["Give the reading, or choose pass or fail."] },
      });
    const values = { value: v.value, verdict, note: v.note, at: ctx.now, byName: actorName(ctx.actor) };
    await ctx.tx
      .insert(stepReadings)
      .values({ id: ctx.newId(), benchTestId: v.testId, step: v.step, ...values })
      .onConflictDoUpdate({ target: [stepReadings.benchTestId, stepReadings.step], set: values });
    await audit(ctx, {
      act: "bench.reading",
      subject: ["bench_test", v.testId],
      after: { step: v.step, value: v.value, verdict },
    });
    return ok({ verdict });
  });
}

const AFTER = {
  restock: "stock",
  repair: "bench",
  return_to_supplier: "supplier",
  scrap: "scrapped",
  send_back: "bench",
} as const;

/** Closes a test: outcome, disposition, finding; scanned out so that two alike are not swapped. */
export async function closeBench(
  ctx: Ctx,
  raw: z.input<typeof CloseBench>,
): Promise<Result<{ ref: string }>> {
  const may = permit(ctx, "bench.test");
  const asManager = permit(ctx, "bench.restock_second_nff").ok;
  if (!may.ok && !asManager) return may;
  const input = parse(CloseBench, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const [test] = await ctx.tx.select().from(benchTests).where(eq(benchTests.id, v.testId)).for("update");
    if (!test) return refuse("not_found", "This test is not there.");
    if (test.closedAt) return refuse("conflict", "This test was closed already.");
    const line = (await benchLine(ctx, test.rmaLineId))!;
    if (!same(v.scan, line.serial))
      return stopAt(
        `Stop: ${v.scan} was scanned out, and ${line.serial} was scanned in. Scan ${line.serial}.`,
      );
    const shown = async (subject: "bench_test" | "receipt_line", id: string) =>
      ((await photosOf(ctx, subject, [id])).get(id) ?? []).filter((p) => p.state !== "rejected");
    const photos = await shown("bench_test", v.testId);
    const dockPhotos = await shown("receipt_line", line.lineId);
    const verdict = mayClose({
      outcome: v.outcome,
      disposition: v.disposition,
      dataBearing: line.dataBearing,
      sanitized: v.sanitization != null,
      photos: photos.length + dockPhotos.filter((p) => p.slot === "damage" || p.slot === "socket").length,
      byName: actorName(ctx.actor),
      secondPerson: v.secondPerson,
      earlierNoFaultFound: line.earlier.filter((e) => e.outcome === "no_fault_found").length,
      byManager: asManager,
      advance: line.remedy === "advance_replacement" && line.replacement !== null,
    });
    if (!verdict.ok) return verdict;
    if (v.sanitization)
      await ctx.tx.insert(sanitizationRecords).values({
        id: ctx.newId(),
        unitId: line.unitId,
        benchTestId: v.testId,
        ...v.sanitization,
        doneAt: ctx.now,
        doneByName: actorName(ctx.actor),
      });
    await ctx.tx
      .update(benchTests)
      .set({
        outcome: v.outcome,
        disposition: v.disposition,
        finding: v.finding,
        secondPersonName: v.secondPerson || null,
        scanOut: v.scan,
        closedAt: ctx.now,
        closedByName: actorName(ctx.actor),
        version: sql`${benchTests.version} + 1`,
      })
      .where(eq(benchTests.id, v.testId));
    const state = await setLineState(ctx, { lineId: line.lineId, state: "tested" });
    if (!state.ok) return state;
    const moved = await moveUnit(ctx, {
      unitId: line.unitId,
      whereabouts: AFTER[v.disposition],
      place: v.disposition === "scrap" || v.disposition === "return_to_supplier" ? null : line.place,
    });
    if (!moved.ok) return moved;
    const entry = await recordEntry(ctx, {
      ticketId: line.ticketId,
      kind: "bench_closed",
      line: `${TEST_OUTCOME_WORDS[v.outcome]}: ${v.finding}`,
      data: {
        rmaLineId: line.lineId,
        serial: line.serial,
        outcome: v.outcome,
        finding: v.finding,
        disposition: v.disposition,
        photos: photos.map((p) => p.fileId),
      },
    });
    if (!entry.ok) return entry;
    const rma = (await rmaById(ctx, line.rmaId))!;
    const next = {
      fault_confirmed: "We make it good as chosen.",
      no_fault_found: "It comes back to you, or its like does.",
      damage_not_covered: "A person of the desk writes to you first.",
    }[v.outcome];
    const told = await enqueueMail(ctx, {
      to: rma.personEmail,
      toName: rma.personName,
      template: "bench_result",
      props: {
        personName: rma.personName,
        rmaNumber: rma.number,
        serial: line.serial,
        outcome: TEST_OUTCOME_WORDS[v.outcome],
        finding: v.finding,
        next,
        link: `${env().MENDBAY_URL}/rma/${rma.number}`,
      },
      ticketId: line.ticketId,
      accountId: rma.accountId,
      automatic: true,
    });
    if (!told.ok) return told;
    if (line.replacement) {
      // Its replacement went out in advance: with the old part judged, all is done.
      const done = await setLineState(ctx, { lineId: line.lineId, state: "settled" });
      if (!done.ok) return done;
      const settled = await settleWhenDone(
        ctx,
        line.rmaId,
        `${line.replacement.serialOut} went out for ${line.serial}, which is back.`,
      );
      if (!settled.ok) return settled;
    }
    await audit(ctx, {
      act: "bench.close",
      subject: ["bench_test", v.testId],
      after: { outcome: v.outcome, disposition: v.disposition },
    });
    return ok({ ref: entry.value.ref });
  });
}

async function ship(
  ctx: TxCtx,
  line: BenchView,
  accountId: string,
  carrier: string,
  tracking: string,
): Promise<string> {
  const id = ctx.newId();
  await ctx.tx.insert(shipments).values({
    id,
    rmaId: line.rmaId,
    accountId,
    direction: "out",
    carrier,
    tracking,
    shippedAt: ctx.now,
    shippedByName: actorName(ctx.actor),
  });
  return id;
}

async function settleWhenDone(ctx: TxCtx, rmaId: string, what: string): Promise<Result<undefined>> {
  const rma = (await rmaById(ctx, rmaId))!;
  if (rma.lines.some((l) => ["open", "received", "tested"].includes(l.state))) return ok();
  return settleRma(ctx, { rmaId, what });
}

/**
 * Scans the replacement out: it must be in stock and the same or better. It enters the as-built
 * tree (or takes over the sale of a whole unit) with its inherited cover, and goes on its way.
 */
export async function shipReplacement(
  ctx: Ctx,
  raw: z.input<typeof ShipOut>,
): Promise<Result<{ lastCoveredOn: string | null; settled: boolean; words: string }>> {
  const may = permit(ctx, "dock.ship");
  if (!may.ok) return may;
  const input = parse(ShipOut, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    await lockLine(ctx, v.lineId);
    const line = await benchLine(ctx, v.lineId);
    if (!line) return refuse("not_found", "This line is not there.");
    if (line.replacement) return refuse("conflict", `${line.replacement.serialOut} went out for it already.`);
    // In advance: promised before anything has come back.
    const ahead =
      line.remedy === "advance_replacement" && (line.lineState === "open" || line.lineState === "received");
    if (!ahead) {
      if (line.lineState !== "tested" || !line.test?.outcome || !line.test.disposition)
        return refuse("rule", "Close its test first: what goes out depends on what was found.");
      const follows = mayFollow("replacement", {
        remedy: line.remedy,
        outcome: line.test.outcome,
        disposition: line.test.disposition,
      });
      if (!follows.ok) return follows;
    }
    const named = await unitBySerial(ctx, v.serial);
    if (named)
      await ctx.tx.select({ id: units.id }).from(units).where(eq(units.id, named.unitId)).for("update");
    const out = named ? await unitBySerial(ctx, v.serial) : null;
    if (!out)
      return refuse("not_found", `${v.serial} is not in the ledger. Scan the label again.`, {
        fields: { serial: ["Scan the label again."] },
      });
    if (out.whereabouts !== "stock")
      return refuse("rule", `${out.serial} is not in stock.`, {
        fields: { serial: ["Take one from stock."] },
      });
    const facts = await modelsOf(ctx, [out.unitId, line.unitId]);
    const [wanted, offered] = [facts.get(line.unitId)!, facts.get(out.unitId)!];
    const match = fit(
      { modelCode: wanted.code, family: wanted.family, facts: wanted.facts },
      { modelCode: offered.code, family: offered.family, facts: offered.facts },
    );
    if (!match.fits)
      return refuse("rule", `${out.serial} does not fit. ${match.reasons.join(" ")}`, {
        fields: { serial: match.reasons },
      });
    if (match.warnings.length > 0 && !v.acceptWarnings)
      return refuse("rule", `Think first: ${match.warnings.join(" ")}`, {
        fields: { acceptWarnings: match.warnings },
      });
    const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
    const cover = await inheritedCover(ctx, { replacedUnitId: line.unitId, onDay: today });
    let installationId: string | null = null;
    const saleIds: string[] = [];
    const [place] = await ctx.tx
      .select({
        id: installations.id,
        parentUnitId: installations.parentUnitId,
        slot: installations.slot,
        saleLineId: installations.saleLineId,
      })
      .from(installations)
      .where(and(eq(installations.unitId, line.unitId), sql`${installations.toOn} is null`));
    if (place) {
      const swapped = await swapPart(ctx, {
        parentUnitId: place.parentUnitId,
        slot: place.slot,
        outUnitId: line.unitId,
        inUnitId: out.unitId,
        onDay: today,
        reason: `replaced under ${line.rmaNumber}`,
      });
      if (!swapped.ok) return swapped;
      installationId = swapped.value.installationId;
      if (place.saleLineId) saleIds.push(place.saleLineId);
    } else {
      const [old] = await ctx.tx
        .select({ id: saleLines.id })
        .from(saleLines)
        .where(and(eq(saleLines.unitId, line.unitId), sql`${saleLines.endedOn} is null`));
      if (old) {
        const took = await replaceSystem(ctx, {
          oldUnitId: line.unitId,
          newUnitId: out.unitId,
          onDay: today,
        });
        if (!took.ok) return took;
        saleIds.push(took.value.saleLineId);
      }
    }
    const moved = await moveUnit(ctx, { unitId: out.unitId, whereabouts: "customer", place: null });
    if (!moved.ok) return moved;
    const refreshed = await refreshCover(ctx, saleIds);
    if (!refreshed.ok) return refreshed;
    // What is told is what the engine gives from now on, not what was reckoned before.
    const now = (await coverFor(ctx, out.unitId, today))?.rows.find(
      (r) => r.unitId === out.unitId && r.kind === "cover",
    );
    const lastCoveredOn = now?.lastOn ?? null;
    const rma = (await rmaById(ctx, line.rmaId))!;
    const shipmentId = await ship(ctx, line, rma.accountId, v.carrier, v.tracking);
    await ctx.tx.insert(replacements).values({
      id: ctx.newId(),
      rmaLineId: line.lineId,
      accountId: rma.accountId,
      unitOutId: out.unitId,
      unitReplacedId: line.unitId,
      installationId,
      shipmentId,
      lastCoveredOn,
      reasons: cover ? [cover.words] : [],
      warnings: match.warnings,
      scannedOutAt: ctx.now,
      scannedOutByName: actorName(ctx.actor),
    });
    if (!ahead) {
      const state = await setLineState(ctx, { lineId: line.lineId, state: "settled" });
      if (!state.ok) return state;
    }
    const words =
      cover && cover.lastCoveredOn === lastCoveredOn
        ? cover.words
        : lastCoveredOn
          ? `covered to ${showDay(lastCoveredOn)}`
          : "cover as before";
    const entry = await recordEntry(ctx, {
      ticketId: line.ticketId,
      kind: "replacement_shipped",
      line: `${out.serial} shipped for ${line.serial}, ${words}`,
      data: {
        serialOut: out.serial,
        serialReplaced: line.serial,
        lastCoveredOn,
        ahead,
        carrier: v.carrier,
        tracking: v.tracking,
        rmaId: line.rmaId,
      },
    });
    if (!entry.ok) return entry;
    const told = await enqueueMail(ctx, {
      to: rma.personEmail,
      toName: rma.personName,
      template: "shipped",
      props: {
        personName: rma.personName,
        rmaNumber: rma.number,
        serialOut: out.serial,
        serialReplaced: line.serial,
        cover: words,
        carrier: v.carrier,
        tracking: v.tracking,
        link: `${env().MENDBAY_URL}/rma/${rma.number}`,
      },
      ticketId: line.ticketId,
      accountId: rma.accountId,
      automatic: true,
    });
    if (!told.ok) return told;
    const settled = await settleWhenDone(ctx, line.rmaId, `${out.serial} went out for ${line.serial}.`);
    if (!settled.ok) return settled;
    await audit(ctx, {
      act: "dock.ship",
      subject: ["rma_line", line.lineId],
      after: { serialOut: out.serial, lastCoveredOn, ahead },
    });
    const after = (await rmaById(ctx, line.rmaId))!;
    return ok({ lastCoveredOn, settled: after.state === "settled", words });
  });
}

/** The same unit goes back to the customer: no fault found, or damage that is not covered. */
export async function sendBack(
  ctx: Ctx,
  raw: z.input<typeof SendBack>,
): Promise<Result<{ settled: boolean }>> {
  const may = permit(ctx, "dock.ship");
  if (!may.ok) return may;
  const input = parse(SendBack, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    await lockLine(ctx, v.lineId);
    const line = await benchLine(ctx, v.lineId);
    if (!line?.test?.closedAt || !line.test.outcome || !line.test.disposition)
      return refuse("rule", "Close its test first.");
    const follows = mayFollow("back", {
      remedy: line.remedy,
      outcome: line.test.outcome,
      disposition: line.test.disposition,
    });
    if (!follows.ok) return follows;
    if (line.lineState !== "tested") return refuse("conflict", "This line is done already.");
    const rma = (await rmaById(ctx, line.rmaId))!;
    await ship(ctx, line, rma.accountId, v.carrier, v.tracking);
    const moved = await moveUnit(ctx, { unitId: line.unitId, whereabouts: "customer", place: null });
    if (!moved.ok) return moved;
    const state = await setLineState(ctx, { lineId: line.lineId, state: "settled" });
    if (!state.ok) return state;
    const entry = await recordEntry(ctx, {
      ticketId: line.ticketId,
      kind: "replacement_shipped",
      line: `${line.serial} sent back`,
      data: {
        serialOut: line.serial,
        serialReplaced: line.serial,
        lastCoveredOn: null,
        carrier: v.carrier,
        tracking: v.tracking,
        rmaId: line.rmaId,
      },
    });
    if (!entry.ok) return entry;
    const settled = await settleWhenDone(ctx, line.rmaId, `${line.serial} is on its way back to you.`);
    if (!settled.ok) return settled;
    await audit(ctx, {
      act: "dock.send_back",
      subject: ["rma_line", line.lineId],
      after: { carrier: v.carrier },
    });
    const after = (await rmaById(ctx, line.rmaId))!;
    return ok({ settled: after.state === "settled" });
  });
}

/** Credit or refund: the sale ends, nothing goes out. */
export async function settleByMoney(
  ctx: Ctx,
  raw: { lineId: string },
): Promise<Result<{ settled: boolean }>> {
  const may = permit(ctx, "rma.settle");
  if (!may.ok) return may;
  const input = parse(z.object({ lineId: z.uuid() }), raw);
  if (!input.ok) return input;
  return transact(ctx, async (ctx) => {
    await lockLine(ctx, input.value.lineId);
    const line = await benchLine(ctx, input.value.lineId);
    if (!line?.test?.closedAt || !line.test.outcome || !line.test.disposition)
      return refuse("rule", "Close its test first.");
    const follows = mayFollow("money", {
      remedy: line.remedy,
      outcome: line.test.outcome,
      disposition: line.test.disposition,
    });
    if (!follows.ok) return follows;
    if (line.lineState !== "tested") return refuse("conflict", "This line is done already.");
    const ended = await endSale(ctx, {
      unitId: line.unitId,
      onDay: civilDayIn(ctx.now, env().MENDBAY_ZONE),
      reason: line.remedy,
    });
    if (!ended.ok) return ended;
    const refreshed = await refreshCover(ctx, ended.value.saleLineIds);
    if (!refreshed.ok) return refreshed;
    const state = await setLineState(ctx, { lineId: line.lineId, state: "settled" });
    if (!state.ok) return state;
    const settled = await settleWhenDone(
      ctx,
      line.rmaId,
      `Your ${line.remedy} for ${line.serial} is on its way.`,
    );
    if (!settled.ok) return settled;
    await audit(ctx, {
      act: "dock.settle_money",
      subject: ["rma_line", raw.lineId],
      after: { remedy: line.remedy },
    });
    const after = (await rmaById(ctx, line.rmaId))!;
    return ok({ settled: after.state === "settled" });
  });
}
