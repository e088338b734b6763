import { and, asc, desc, eq, inArray, isNull, or, sql } from "drizzle-orm";
import { read } from "@/db/client";
import {
  benchTests,
  discrepancies,
  photos,
  receiptLines,
  replacements,
  sanitizationRecords,
  shipments,
  stepReadings,
} from "@/db/schema/dock";
import { files } from "@/db/schema/files";
import { accounts, models, units } from "@/db/schema/ledger";
import { rmaLines, rmas } from "@/db/schema/rma";
import { tickets, ticketUnits } from "@/db/schema/tickets";
import type { Ctx } from "@/lib/ctx";
import { unitBySerial } from "@/lib/ledger/queries";
import type { UnitHit } from "@/lib/ledger/schema";
import { openLineOf, rmaByNumber, rmaById } from "@/lib/rma/queries";
import type { RmaView } from "@/lib/rma/schema";
import { cleanScan } from "@/lib/base/serial";
import { isPlace, matchScan, type ScanVerdict } from "./rules";
import type { Disposition, PhotoSlot, ReceivedCondition, StepVerdict, TestOutcome } from "./schema";

export type PhotoView = {
  id: string;
  fileId: string;
  slot: PhotoSlot;
  takenAt: Date;
  takenByName: string;
  state: string;
};

export type ScanAnswer =
  | { kind: "rma"; rma: RmaView }
  | { kind: "right"; rma: RmaView; lineId: string }
  | { kind: "again"; rma: RmaView; lineId: string }
  | {
      kind: "wrong";
      rma: RmaView;
      scanned: string;
      verdict: Extract<ScanVerdict, { kind: "wrong" }>;
      known: UnitHit | null;
      knownRma: string | null;
    }
  | { kind: "place"; place: string }
  | { kind: "unexpected"; scanned: string; known: UnitHit | null }
  | { kind: "unreadable"; scanned: string; why: string };

/**
 * What a scan at the dock means: an RMA, a bay, the right serial, a wrong one, or nothing we know.
 * Reads only; nothing is booked by a scan.
 */
export async function scan(ctx: Ctx, input: { text: string; rmaId: string | null }): Promise<ScanAnswer> {
  const text = cleanScan(input.text);
  if (text === "")
    return {
      kind: "unreadable",
      scanned: "",
      why: "Nothing was read. Hold the scanner a hand away and scan again.",
    };
  if (/^RMA/i.test(text)) {
    const rma = await rmaByNumber(ctx, text);
    if (rma) return { kind: "rma", rma };
    return {
      kind: "unreadable",
      scanned: text,
      why: "This is no RMA number of ours, or it was misread. Scan it again.",
    };
  }
  if (isPlace(text)) return { kind: "place", place: text.toUpperCase() };
  const rma = input.rmaId ? await rmaById(ctx, input.rmaId) : null;
  const known = await unitBySerial(ctx, text);
  if (rma) {
    const verdict = matchScan(
      text,
      rma.lines.map((l) => ({ lineId: l.id, serial: l.serial, state: l.state })),
    );
    if (verdict.kind !== "wrong") return { kind: verdict.kind, rma, lineId: verdict.lineId };
    // The system whose part comes back may be scanned first: it names the RMA, it is not taken in.
    const other = known ? await openLineOf(ctx, known.unitId) : null;
    return { kind: "wrong", rma, scanned: text, verdict, known, knownRma: other?.rmaNumber ?? null };
  }
  const open = known ? await openLineOf(ctx, known.unitId) : null;
  if (open) {
    const found = (await rmaById(ctx, open.rmaId))!;
    const line = found.lines.find((l) => l.id === open.lineId)!;
    return { kind: line.state === "open" ? "right" : "again", rma: found, lineId: line.id };
  }
  return { kind: "unexpected", scanned: text, known };
}

export async function photosOf(
  ctx: Ctx,
  subject: "receipt_line" | "bench_test" | "shipment" | "discrepancy",
  subjectIds: string[],
): Promise<Map<string, PhotoView[]>> {
  if (subjectIds.length === 0) return new Map();
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        subjectId: photos.subjectId,
        id: photos.id,
        fileId: photos.fileId,
        slot: photos.slot,
        takenAt: photos.takenAt,
        takenByName: photos.takenByName,
        state: files.state,
      })
      .from(photos)
      .innerJoin(files, eq(files.id, photos.fileId))
      .where(and(eq(photos.subject, subject), inArray(photos.subjectId, subjectIds)))
      .orderBy(asc(photos.takenAt))
      .limit(200),
  );
  const out = new Map<string, PhotoView[]>();
  for (const { subjectId, ...p } of rows)
    out.set(subjectId, [...(out.get(subjectId) ?? []), { ...p, slot: p.slot as PhotoSlot }]);
  return out;
}

export type ReceiptView = {
  lineId: string;
  scanned: string;
  condition: ReceivedCondition;
  place: string;
  note: string;
  receivedAt: Date;
  receivedByName: string;
};
export async function receiptsOf(ctx: Ctx, lineIds: string[]): Promise<Map<string, ReceiptView>> {
  if (lineIds.length === 0) return new Map();
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        lineId: receiptLines.rmaLineId,
        scanned: receiptLines.scanned,
        condition: receiptLines.condition,
        place: receiptLines.place,
        note: receiptLines.note,
        receivedAt: receiptLines.receivedAt,
        receivedByName: receiptLines.receivedByName,
      })
      .from(receiptLines)
      .where(inArray(receiptLines.rmaLineId, lineIds)),
  );
  return new Map(rows.map((r) => [r.lineId, r]));
}

export type SetAsideView = {
  id: string;
  kind: string;
  scanned: string;
  expected: string | null;
  rmaNumber: string | null;
  place: string;
  note: string;
  foundAt: Date;
  foundByName: string;
};
export async function setAsideList(ctx: Ctx, limit = 30): Promise<SetAsideView[]> {
  return read(ctx, (tx) =>
    tx
      .select({
        id: discrepancies.id,
        kind: discrepancies.kind,
        scanned: discrepancies.scanned,
        expected: discrepancies.expected,
        rmaNumber: rmas.number,
        place: discrepancies.place,
        note: discrepancies.note,
        foundAt: discrepancies.foundAt,
        foundByName: discrepancies.foundByName,
      })
      .from(discrepancies)
      .leftJoin(rmas, eq(rmas.id, discrepancies.rmaId))
      .where(isNull(discrepancies.clearedAt))
      .orderBy(desc(discrepancies.foundAt))
      .limit(limit),
  );
}

export type BenchRow = {
  lineId: string;
  unitId: string;
  serial: string;
  modelName: string;
  family: string;
  rmaNumber: string;
  ticketNumber: number;
  accountName: string;
  faultWords: string;
  place: string | null;
  dueAt: Date | null;
  clockStartedAt: Date | null;
  testId: string | null;
  closedAt: Date | null;
  outcome: TestOutcome | null;
  lineState: string;
};

const benchColumns = {
  lineId: rmaLines.id,
  unitId: rmaLines.unitId,
  serial: units.serial,
  modelName: models.name,
  family: models.family,
  rmaNumber: rmas.number,
  ticketNumber: tickets.number,
  accountName: accounts.name,
  faultWords: rmaLines.faultWords,
  place: units.place,
  dueAt: tickets.dueAt,
  clockStartedAt: tickets.clockStartedAt,
  testId: benchTests.id,
  closedAt: benchTests.closedAt,
  outcome: benchTests.outcome,
  lineState: rmaLines.state,
};

/** What waits at the bench, or has been tested and must go out, soonest due first. */
export async function benchQueue(ctx: Ctx, limit = 100): Promise<BenchRow[]> {
  return read(ctx, (tx) =>
    tx
      .select(benchColumns)
      .from(rmaLines)
      .innerJoin(rmas, eq(rmas.id, rmaLines.rmaId))
      .innerJoin(tickets, eq(tickets.id, rmas.ticketId))
      .innerJoin(accounts, eq(accounts.id, rmas.accountId))
      .innerJoin(units, eq(units.id, rmaLines.unitId))
      .innerJoin(models, eq(models.id, units.modelId))
      .leftJoin(benchTests, eq(benchTests.rmaLineId, rmaLines.id))
      .where(
        or(
          inArray(rmaLines.state, ["received", "tested"]),
          // Promised in advance, and nothing has gone out for it yet.
          and(
            eq(rmaLines.state, "open"),
            eq(rmaLines.remedy, "advance_replacement"),
            sql`not exists (select from replacement rp where rp.rma_line_id = ${rmaLines.id})`,
          ),
        ),
      )
      .orderBy(sql`${rmaLines.state} = 'tested'`, sql`${tickets.dueAt} asc nulls last`, asc(rmaLines.id))
      .limit(limit),
  );
}

export type BenchView = BenchRow & {
  rmaId: string;
  ticketId: string;
  remedy: string;
  slot: string | null;
  systemUnitId: string | null;
  modelId: string;
  modelCode: string;
  facts: Record<string, string | number>;
  dataBearing: boolean;
  battery: string;
  weightKg: number | null;
  test: {
    id: string;
    sheet: string;
    sheetIssue: number;
    startedAt: Date;
    startedByName: string;
    scanIn: string;
    outcome: TestOutcome | null;
    disposition: Disposition | null;
    finding: string;
    closedAt: Date | null;
    closedByName: string | null;
    secondPersonName: string | null;
  } | null;
  readings: { step: number; value: string; verdict: StepVerdict; note: string; at: Date; byName: string }[];
  earlier: { outcome: TestOutcome | null; finding: string; closedAt: Date | null; rmaNumber: string }[];
  sanitized: boolean;
  replacement: { serialOut: string; lastCoveredOn: string | null; scannedOutAt: Date } | null;
};

/** One line at the bench, with its test, readings, and what earlier tests of the same serial found. */
export async function benchLine(ctx: Ctx, lineId: string): Promise<BenchView | null> {
  return read(ctx, async (tx) => {
    const [row] = await tx
      .select({
        ...benchColumns,
        rmaId: rmas.id,
        ticketId: tickets.id,
        remedy: rmaLines.remedy,
        slot: ticketUnits.slot,
        systemUnitId: ticketUnits.systemUnitId,
        modelId: models.id,
        modelCode: models.code,
        facts: models.facts,
        dataBearing: models.dataBearing,
        battery: models.battery,
        weightKg: models.weightKg,
        test: benchTests,
      })
      .from(rmaLines)
      .innerJoin(rmas, eq(rmas.id, rmaLines.rmaId))
      .innerJoin(tickets, eq(tickets.id, rmas.ticketId))
      .innerJoin(ticketUnits, eq(ticketUnits.id, rmaLines.ticketUnitId))
      .innerJoin(accounts, eq(accounts.id, rmas.accountId))
      .innerJoin(units, eq(units.id, rmaLines.unitId))
      .innerJoin(models, eq(models.id, units.modelId))
      .leftJoin(benchTests, eq(benchTests.rmaLineId, rmaLines.id))
      .where(eq(rmaLines.id, lineId))
      .limit(1);
    if (!row) return null;
    const readings = row.test
      ? await tx
          .select({
            step: stepReadings.step,
            value: stepReadings.value,
            verdict: stepReadings.verdict,
            note: stepReadings.note,
            at: stepReadings.at,
            byName: stepReadings.byName,
          })
          .from(stepReadings)
          .where(eq(stepReadings.benchTestId, row.test.id))
          .orderBy(asc(stepReadings.step))
      : [];
    const earlier = await tx
      .select({
        outcome: benchTests.outcome,
        finding: benchTests.finding,
        closedAt: benchTests.closedAt,
        rmaNumber: rmas.number,
      })
      .from(benchTests)
      .innerJoin(rmaLines, eq(rmaLines.id, benchTests.rmaLineId))
      .innerJoin(rmas, eq(rmas.id, rmaLines.rmaId))
      .where(
        and(
          eq(benchTests.unitId, row.unitId),
          sql`${benchTests.rmaLineId} <> ${lineId}`,
          sql`${benchTests.closedAt} is not null`,
        ),
      )
      .orderBy(desc(benchTests.closedAt))
      .limit(10);
    const [cleared] = row.test
      ? await tx
          .select({ id: sanitizationRecords.id })
          .from(sanitizationRecords)
          .where(eq(sanitizationRecords.benchTestId, row.test.id))
          .limit(1)
      : [];
    const [out] = await tx
      .select({
        serialOut: units.serial,
        lastCoveredOn: replacements.lastCoveredOn,
        scannedOutAt: replacements.scannedOutAt,
      })
      .from(replacements)
      .innerJoin(units, eq(units.id, replacements.unitOutId))
      .where(eq(replacements.rmaLineId, lineId))
      .limit(1);
    return { ...row, readings, earlier, sanitized: cleared !== undefined, replacement: out ?? null };
  });
}

export async function shipmentsOf(ctx: Ctx, rmaId: string) {
  return read(ctx, (tx) =>
    tx
      .select({
        id: shipments.id,
        direction: shipments.direction,
        carrier: shipments.carrier,
        tracking: shipments.tracking,
        shippedAt: shipments.shippedAt,
      })
      .from(shipments)
      .where(eq(shipments.rmaId, rmaId))
      .orderBy(asc(shipments.shippedAt)),
  );
}
