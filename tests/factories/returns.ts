import { sql } from "drizzle-orm";
import { must } from "@/lib/base/result";
import type { FaultClass, Remedy } from "@/lib/coverage/schema";
import type { Actor } from "@/lib/ctx";
import { closeBench, keepReading, startBench } from "@/lib/dock/bench.commands";
import { keepPhoto, receiveLine } from "@/lib/dock/commands";
import type { PhotoSlot } from "@/lib/dock/schema";
import { sheetFor } from "@/lib/dock/sheets";
import { fileArrived, promiseFiles } from "@/lib/files/commands";
import { authorizeRma } from "@/lib/rma/commands";
import { rmaById } from "@/lib/rma/queries";
import { openTicket, recordEntry, takeDecision, tieUnit } from "@/lib/tickets/commands";
import { as, job, NOON, rows, unitId, type Seller } from "./seller";

/** A mail from a customer, as the mail module files it: a ticket with its first entry. */
export async function mailTicket(
  from: Extract<Actor, { kind: "customer" }>,
  more: { receivedAt?: Date; words?: string } = {},
) {
  const receivedAt = more.receivedAt ?? NOON;
  const opened = must(
    await openTicket(job(receivedAt), {
      accountId: from.accountId,
      contactId: from.contactId,
      personName: from.name,
      personEmail: from.email,
      channel: "mail",
      subject: "Drive down",
      faultWords: more.words ?? "It drops out of the array.",
      receivedAt,
    }),
  );
  must(
    await recordEntry(job(receivedAt), {
      ticketId: opened.ticketId,
      kind: "mail_in",
      line: "It drops out of the array.",
    }),
  );
  return opened;
}

/** Tied and decided by an agent. */
export async function decided(
  s: Seller,
  serial: string,
  more: { from?: Seller["sam"]; fault?: FaultClass; receivedAt?: Date; established?: string[] } = {},
) {
  const { ticketId, number } = await mailTicket(more.from ?? s.sam, more);
  const { ticketUnitId } = must(await tieUnit(as(s.agent), { ticketId, unitId: await unitId(serial) }));
  const taken = must(
    await takeDecision(as(s.agent), {
      ticketId,
      ticketUnitId,
      faultClass: more.fault ?? "failed_drive",
      established: more.established,
    }),
  );
  return { ticketId, number, ticketUnitId, ...taken };
}

export async function authorized(
  s: Seller,
  serial: string,
  remedy: Remedy = "advance_replacement",
  more = {},
) {
  const d = await decided(s, serial, more);
  const rma = must(
    await authorizeRma(as(s.agent), {
      ticketId: d.ticketId,
      lines: [{ ticketUnitId: d.ticketUnitId }],
      remedy,
    }),
  );
  const view = (await rmaById(job(), rma.rmaId))!;
  return { ...d, ...rma, lineId: view.lines[0]!.id, serial };
}

/** A photo that has arrived at the upload host and waits for its check. */
export async function photo(
  s: Seller,
  subject: "receipt_line" | "bench_test",
  subjectId: string,
  slot: PhotoSlot,
) {
  const [fileId] = must(
    await promiseFiles(as(s.dock), {
      purpose: subject === "receipt_line" ? "dock_photo" : "bench_photo",
      accountId: null,
      files: [{ name: `${slot}.jpg`, size: 1200, type: "image/jpeg" }],
    }),
  ).fileIds;
  must(await fileArrived(job(), { fileId: fileId!, key: `key-${fileId}`, size: 1200 }));
  must(await keepPhoto(as(s.dock), { fileId: fileId!, subject, subjectId, slot }));
  return fileId!;
}

export async function received(s: Seller, serial: string, remedy?: Remedy, from?: Seller["sam"]) {
  const rma = await authorized(s, serial, remedy, { from });
  for (const slot of ["label", "arrived"] as const) await photo(s, "receipt_line", rma.lineId, slot);
  must(
    await receiveLine(as(s.dock), {
      lineId: rma.lineId,
      scanned: serial,
      place: "A-12",
      clientId: crypto.randomUUID(),
    }),
  );
  return rma;
}

/** Every step of the sheet read, at the bench; the test still open. */
export async function tested(s: Seller, serial: string, remedy?: Remedy, from?: Seller["sam"]) {
  const rma = await received(s, serial, remedy, from);
  const { testId } = must(await startBench(as(s.bench), { lineId: rma.lineId, scan: serial }));
  for (const step of sheetFor("drive").steps)
    must(
      await keepReading(as(s.bench), {
        testId,
        step: step.step,
        value: step.serial ? serial : step.measure ? "9000" : "",
        verdict: "fail",
      }),
    );
  return { ...rma, testId };
}

export async function confirmed(s: Seller, serial: string, remedy?: Remedy) {
  const at = await tested(s, serial, remedy);
  must(
    await closeBench(as(s.bench), {
      testId: at.testId,
      scan: serial,
      outcome: "fault_confirmed",
      disposition: "return_to_supplier",
      finding: "Blocks cannot be read.",
    }),
  );
  return at;
}

export const stateOf = async (rmaId: string) =>
  (await rows<{ state: string }>(sql`select state::text from rma where id = ${rmaId}`))[0]!.state;
