import { mkdtempSync, rmSync } from "node:fs";
import type { Server } from "node:http";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { createTransport } from "nodemailer";
import { sql } from "drizzle-orm";
import { rawDb } from "@/db/client";
import { accounts, contacts, models, saleLines, sites, units } from "@/db/schema/ledger";
import { terms, termsVersions } from "@/db/schema/coverage";
import { serialKey, serialLoose } from "@/lib/base/serial";
import { runDueJobs } from "@/lib/jobs/worker.io";
import { startReceiver, type Receiver } from "@/lib/mail/receiver.io";
import { stopReader } from "@/lib/mail/parser.io";
import { startMailHost, type MailHost } from "@/lib/standins/mailhost";
import { takePort } from "@/lib/standins/ports";
import { createUploadHost, uploadToken } from "@/lib/standins/uploadhost";

export type SentMail = {
  id: string;
  to: string;
  from: string;
  replyTo: string;
  subject: string;
  messageId: string;
  references: string[];
  text: string;
  html: string;
  headers: { name: string; value: string }[];
  attachments: { name: string; type: string; size: number }[];
};

/** The whole way of a mail on loopback: our receiver, the mail host we send to, the upload host. */
export type MailWorld = Awaited<ReturnType<typeof mailWorld>>;

export async function mailWorld() {
  const dir = mkdtempSync(join(tmpdir(), "mendbay-mailworld-"));
  const [uploadPort, sinkPort] = [await takePort(), await takePort()];
  const apiKey = "sk_test_only_0123456789";
  const base = `http://localhost:${uploadPort}`;
  Object.assign(process.env, {
    SMTP_URL: `smtp://127.0.0.1:${sinkPort}`,
    RECEIVER_MAX_BYTES: "1048576",
    UPLOADTHING_TOKEN: uploadToken({ apiKey, appId: "mendbaytest" }),
    UPLOADTHING_INGEST_URL: base,
    UPLOADTHING_API_URL: base,
    UPLOADTHING_UFS_HOST: `localhost:${uploadPort}`,
    UPLOADTHING_UFS_APP_ID_LOCATION: "path",
    UPLOADTHING_IS_DEV: "false",
  });
  const uploads: Server = createUploadHost({ dir: join(dir, "uploads"), apiKey, appId: "mendbaytest", base });
  await new Promise<void>((done) => uploads.listen(uploadPort, "127.0.0.1", done));
  const receiver: Receiver = await startReceiver({ host: "127.0.0.1", port: 0 });
  const host: MailHost = await startMailHost({
    dir: join(dir, "mail"),
    smtpPort: sinkPort,
    httpPort: 0,
    receiver: { host: "127.0.0.1", port: receiver.port },
    desk: "desk@ostwick.example",
  });
  const post = createTransport({ host: "127.0.0.1", port: receiver.port, ignoreTLS: true, pool: true });

  return {
    receiver,
    host,
    /** Sends raw bytes as any mail server would, and lets the jobs run unless told not to. */
    async arrive(raw: Buffer, at: { from?: string; to?: string; later?: boolean } = {}) {
      const envelope = { from: at.from ?? "ines@pinnock.example", to: at.to ?? "desk@ostwick.example" };
      const sent = await post.sendMail({ envelope, raw });
      if (!at.later) await runDueJobs();
      return sent.response;
    },
    jobs: runDueJobs,
    async sent(to: string): Promise<SentMail[]> {
      const answer = await fetch(
        `http://127.0.0.1:${host.httpPort}/api/messages?to=${encodeURIComponent(to)}`,
      );
      return (await answer.json()) as SentMail[];
    },
    async stop() {
      post.close();
      stopReader();
      await receiver.stop();
      await host.stop();
      uploads.closeAllConnections();
      await new Promise<void>((done) => uploads.close(() => done()));
      rmSync(dir, { recursive: true, force: true });
    },
  };
}

/** A site, two accounts with a contact each, and a system of the first one. */
export async function seedLedger() {
  const db = rawDb();
  const createdAt = new Date("2026-01-02T09:00:00Z");
  const id = () => crypto.randomUUID();
  const [pinnock, lowmere, model, unit, termsId, version] = [id(), id(), id(), id(), id(), id()];
  await db.insert(sites).values({
    id: id(),
    code: "OST",
    name: "Ostwick",
    zone: "Europe/London",
    addressLines: ["1 Bay Road"],
    country: "GB",
    workdays: [1, 2, 3, 4, 5],
    opensAt: "08:00",
    closesAt: "17:00",
    isDefault: true,
  });
  const account = { buyerKind: "business" as const, country: "GB", createdAt };
  await db.insert(accounts).values([
    { ...account, id: pinnock, code: "PINNOCK", name: "Pinnock Analytics" },
    { ...account, id: lowmere, code: "LOWMERE", name: "Lowmere Hosting" },
  ]);
  await db.insert(contacts).values([
    { id: id(), accountId: pinnock, name: "Ines Pinnock", email: "ines@pinnock.example", createdAt },
    { id: id(), accountId: lowmere, name: "Tom Lowmere", email: "tom@lowmere.example", createdAt },
  ]);
  await db.insert(terms).values({ id: termsId, code: "OSW-B", name: "Business terms" });
  await db
    .insert(termsVersions)
    .values({ id: version, termsId, issue: 1, effectiveOn: "2020-01-01", createdAt, publishedAt: createdAt });
  await db.insert(models).values({
    id: model,
    code: "OW-4420",
    name: "Four-socket rack server",
    kind: "system",
    family: "system",
  });
  const serial = "OW4420-21-0398";
  await db.insert(units).values({
    id: unit,
    serial,
    serialKey: serialKey(serial),
    serialLoose: serialLoose(serial),
    modelId: model,
    condition: "new",
    whereabouts: "customer",
    createdAt,
  });
  await db.insert(saleLines).values({
    id: id(),
    unitId: unit,
    accountId: pinnock,
    orderNumber: "ORD-1001",
    lineKey: "ORD-1001/1",
    condition: "new",
    buyerKind: "business",
    country: "GB",
    shippedOn: "2026-01-05",
    termsVersionId: version,
    createdAt,
  });
  return { pinnock, lowmere, unit, serial };
}

export const rows = async <T = Record<string, unknown>>(query: ReturnType<typeof sql>) =>
  (await rawDb().execute(query)).rows as T[];
