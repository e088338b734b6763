import { asc, eq } from "drizzle-orm";
import { read } from "@/db/client";
import { evidence, reports } from "@/db/schema/evidence";
import { files } from "@/db/schema/files";
import type { Ctx } from "@/lib/ctx";
import type { EvidenceKind, EvidenceSource } from "./schema";

export type EvidenceView = {
  id: string;
  fileId: string;
  kind: EvidenceKind;
  source: EvidenceSource;
  name: string;
  size: number;
  state: "pending" | "quarantined" | "clean" | "rejected";
  reason: string | null;
  type: string | null;
  fromName: string;
  createdAt: Date;
};

const columns = {
  id: evidence.id,
  fileId: evidence.fileId,
  kind: evidence.kind,
  source: evidence.source,
  name: files.name,
  size: files.declaredSize,
  state: files.state,
  reason: files.reason,
  type: files.type,
  fromName: evidence.fromName,
  createdAt: evidence.createdAt,
};

export async function evidenceOf(ctx: Ctx, ticketId: string): Promise<EvidenceView[]> {
  return read(ctx, (tx) =>
    tx
      .select(columns)
      .from(evidence)
      .innerJoin(files, eq(files.id, evidence.fileId))
      .where(eq(evidence.ticketId, ticketId))
      .orderBy(asc(evidence.createdAt))
      .limit(400),
  );
}

export async function evidenceOfReport(ctx: Ctx, reportId: string): Promise<EvidenceView[]> {
  return read(ctx, (tx) =>
    tx
      .select(columns)
      .from(evidence)
      .innerJoin(files, eq(files.id, evidence.fileId))
      .where(eq(evidence.reportId, reportId))
      .orderBy(asc(evidence.createdAt))
      .limit(60),
  );
}

export type ReportView = {
  id: string;
  answers: Record<string, string>;
  ticketId: string | null;
  sentAt: Date | null;
};

export async function report(ctx: Ctx, id: string): Promise<ReportView | null> {
  const rows = await read(ctx, (tx) =>
    tx
      .select({
        id: reports.id,
        answers: reports.answers,
        ticketId: reports.ticketId,
        sentAt: reports.sentAt,
      })
      .from(reports)
      .where(eq(reports.id, id))
      .limit(1),
  );
  return rows[0] ?? null;
}
