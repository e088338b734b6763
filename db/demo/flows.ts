import { sql } from "drizzle-orm";
import { rawDb } from "@/db/client";
import { civilDayIn } from "@/lib/base/civil";
import { must } from "@/lib/base/result";
import type { Actor, Ctx } from "@/lib/ctx";
import {
  closeBench,
  keepReading,
  sendBack,
  settleByMoney,
  shipReplacement,
  startBench,
} from "@/lib/dock/bench.commands";
import { keepPhoto, receiveLine } from "@/lib/dock/commands";
import { photosNeeded } from "@/lib/dock/rules";
import type { Disposition, TestOutcome } from "@/lib/dock/schema";
import { sheetFor } from "@/lib/dock/sheets";
import { storeBytes } from "@/lib/files/commands";
import { keepAnswers, startReport } from "@/lib/evidence/commands";
import { addStock } from "@/lib/ledger/commands";
import { handle as parseMail } from "@/lib/jobs/handlers/parseMail";
import { storeRaw } from "@/lib/mail/commands";
import { authorizeRma, markSent } from "@/lib/rma/commands";
import { rmaById } from "@/lib/rma/queries";
import { askEvidence, attachEvidence, reply, takeDecision, tieUnit } from "@/lib/tickets/commands";
import { answerGoodwill, askGoodwill } from "@/lib/tickets/goodwill.commands";
import { sendReport } from "@/lib/tickets/report.commands";
import type { Remedy } from "@/lib/coverage/schema";
import { labelPicture, picture } from "./pictures";
import { partSerial } from "./shipments";
import { MODELS, SUPPLIER_OF, type ModelCode } from "./scenario";
import type { Seed } from "./seed";

export type Person = { email: string; name: string; actor: Actor };
export type Part = {
  unitId: string;
  serial: string;
  family: string;
  modelCode: ModelCode;
  slot: string;
  systemUnitId: string;
  systemSerial: string;
  lot: string | null;
  shippedOn: string;
  customer: string;
  email: string;
  condition: string;
};

/** The demo's clock and hands: each act is done by somebody, at a time of its own. */
export class Story {
  at: Date;
  constructor(
    readonly seed: Seed,
    at: Date,
    readonly people: Record<"noor" | "ruben" | "piotr" | "mei" | "anneke", Actor>,
    readonly customers: Map<string, Extract<Actor, { kind: "customer" }>>,
    readonly now: Date,
  ) {
    this.at = at;
  }
  /** Moves on by hours, to a working hour, never past the present. */
  later(hours: number): this {
    const next = new Date(this.at.getTime() + hours * 3_600_000);
    if (next.getUTCHours() < 8) next.setUTCHours(8 + this.seed.int(0, 2), this.seed.int(0, 59));
    if (next.getUTCHours() >= 17) next.setUTCHours(15, this.seed.int(0, 59));
    while (next.getUTCDay() === 0 || next.getUTCDay() === 6) next.setUTCDate(next.getUTCDate() + 1);
    const latest = this.now.getTime() - this.seed.int(2, 40) * 60_000;
    this.at = new Date(
      Math.min(
        Math.max(next.getTime(), this.at.getTime() + 60_000),
        Math.max(latest, this.at.getTime() + 1000),
      ),
    );
    return this;
  }
  ctx(actor: Actor): Ctx {
    return { actor, now: this.at, requestId: `demo-${this.seed.int(1, 1e9)}`, newId: () => this.seed.uuid() };
  }
  get agent(): Ctx {
    return this.ctx(this.seed.chance(0.7) ? this.people.noor : this.people.ruben);
  }
  get dock(): Ctx {
    return this.ctx(this.people.piotr);
  }
  get bench(): Ctx {
    return this.ctx(this.people.mei);
  }
  customer(email: string): Ctx {
    return this.ctx(this.customers.get(email)!);
  }
  get job(): Ctx {
    return this.ctx({ kind: "job", name: "demo" });
  }
}

const jpeg = (
  s: Story,
  bytes: Buffer,
  name: string,
  accountId: string | null,
  purpose: "evidence" | "dock_photo" | "bench_photo",
) => storeBytes(s.job, { bytes, name, type: "image/jpeg", purpose, accountId });

/** A report in the portal, with photos. Ends with the decision shown. */
export async function byPortal(
  s: Story,
  part: Part,
  faultClass: string,
  words: string,
  photos: number,
): Promise<{ ticketId: string; ticketUnitId: string }> {
  const ctx = () => s.customer(part.email);
  const { reportId } = must(
    await startReport(ctx(), {
      unitId: part.systemUnitId,
      partId: part.unitId,
      faultClass,
      words,
      since: "",
      battery: "inside",
      data: "sanitize",
    }),
  );
  must(await keepAnswers(ctx(), reportId, { words }));
  const done = must(await sendReport(ctx(), reportId));
  const found = await idsOf(done.number);
  if (photos > 0) {
    const fileIds: string[] = [];
    for (let i = 0; i < photos; i++) {
      const bytes =
        i === 0
          ? await labelPicture(s.seed, part.serial)
          : await picture(
              s.seed,
              faultClass === "bent_contacts" ? "socket" : part.family === "drive" ? "drive" : "box",
            );
      fileIds.push(
        must(await jpeg(s, bytes, i === 0 ? "label.jpg" : "photo.jpg", accountOf(s, part.email), "evidence"))
          .fileId,
      );
    }
    must(
      await attachEvidence(s.ctx({ kind: "job", name: "demo" }), {
        ticketId: found.ticketId,
        fileIds,
        ticketUnitId: found.ticketUnitId,
        source: "portal",
        fromName: s.customers.get(part.email)!.name,
      }),
    );
  }
  return found;
}

const accountOf = (s: Story, email: string) => s.customers.get(email)!.accountId;

async function idsOf(number: number): Promise<{ ticketId: string; ticketUnitId: string }> {
  const found = await rawDb().execute<{ ticketId: string; ticketUnitId: string }>(
    sql`select t.id as "ticketId", tu.id as "ticketUnitId" from ticket t join ticket_unit tu on tu.ticket_id = t.id and tu.state = 'tied' where t.number = ${number} limit 1`,
  );
  return found.rows[0]!;
}

/** A mail, byte for byte, through the raw store and the reader. */
export async function byMail(
  s: Story,
  from: { name: string; email: string },
  subject: string,
  text: string,
  photo: Buffer | null,
  to = "desk@ostwick.example",
): Promise<string | null> {
  const boundary = `b${s.seed.code(12)}`;
  const head = [
    `From: ${from.name} <${from.email}>`,
    `To: Warranty desk <${to}>`,
    `Subject: ${subject}`,
    `Date: ${s.at.toUTCString()}`,
    `Message-ID: <${s.seed.uuid()}@${from.email.split("@")[1]}>`,
    "MIME-Version: 1.0",
    `Content-Type: multipart/mixed; boundary="${boundary}"`,
    "",
    `--${boundary}`,
    'Content-Type: text/plain; charset="utf-8"',
    "Content-Transfer-Encoding: 8bit",
    "",
    text,
    "",
  ];
  const file = photo
    ? [
        `--${boundary}`,
        'Content-Type: image/jpeg; name="photo.jpg"',
        "Content-Transfer-Encoding: base64",
        'Content-Disposition: attachment; filename="photo.jpg"',
        "",
        photo.toString("base64").replace(/(.{76})/g, "$1\r\n"),
        "",
      ]
    : [];
  const bytes = Buffer.from([...head, ...file, `--${boundary}--`, ""].join("\r\n"));
  const kept = must(
    await storeRaw(s.job, {
      envelopeFrom: from.email,
      envelopeTo: [to],
      remoteAddress: "127.0.0.1",
      bytes,
    }),
  );
  await parseMail(s.job, { rawMailId: kept.rawMailId });
  const found = await rawDb().execute<{ id: string }>(
    sql`select ticket_id as id from message where raw_mail_id = ${kept.rawMailId} and ticket_id is not null`,
  );
  return found.rows[0]?.id ?? null;
}

export async function tieAndDecide(
  s: Story,
  ticketId: string,
  part: Part,
  faultClass: string,
): Promise<string> {
  const { ticketUnitId } = must(await tieUnit(s.agent, { ticketId, unitId: part.unitId }));
  s.later(0.2);
  must(await takeDecision(s.agent, { ticketId, ticketUnitId, faultClass: faultClass as never }));
  return ticketUnitId;
}

export const answer = async (s: Story, ticketId: string, text: string) =>
  must(await reply(s.agent, { ticketId, text }));
export const ask = async (s: Story, ticketId: string, wanted: string[], text: string) =>
  must(await askEvidence(s.agent, { ticketId, wanted, text }));

/** Authorizes by the desk; the remedy is one the newest decision gives. Null where it gives none. */
export async function authorize(
  s: Story,
  ticketId: string,
  ticketUnitId: string,
  wish?: Remedy,
): Promise<string | null> {
  const found = await rawDb().execute<{ remedies: string[] }>(
    sql`select remedies::text[] as remedies from coverage_decision where ticket_id = ${ticketId} and outcome in ('covered', 'covered_doa') order by made_at desc limit 1`,
  );
  const remedies = (found.rows[0]?.remedies ?? []) as Remedy[];
  if (remedies.length === 0) return null;
  const done = must(
    await authorizeRma(s.agent, {
      ticketId,
      lines: [{ ticketUnitId }],
      remedy: wish && remedies.includes(wish) ? wish : s.seed.pick(remedies),
    }),
  );
  return done.rmaId;
}

/** An agent asks for an exception, with the reason; hours later a manager answers, or has not yet. */
export async function goodwill(
  s: Story,
  of: { ticketId: string; ticketUnitId: string },
  ask: { reason: string; remedy: Remedy },
  answer: { words: string; limit?: string } | null,
): Promise<void> {
  const { goodwillId } = must(await askGoodwill(s.agent, { ...of, ...ask }));
  if (!answer) return;
  s.later(3);
  const found = await rawDb().execute<{ id: string }>(
    sql`select decision_id as id from goodwill where id = ${goodwillId}`,
  );
  const by = { goodwillId, decisionId: found.rows[0]!.id, words: answer.words };
  const manager = s.ctx(s.people.anneke);
  must(
    await answerGoodwill(
      manager,
      answer.limit
        ? { ...by, answer: "granted", remedy: ask.remedy, limit: answer.limit }
        : { ...by, answer: "declined" },
    ),
  );
  if (!answer.limit) return;
  s.later(1);
  must(
    await authorizeRma(s.agent, {
      ticketId: of.ticketId,
      lines: [{ ticketUnitId: of.ticketUnitId }],
      remedy: ask.remedy,
    }),
  );
}

export const sent = async (s: Story, rmaId: string, email: string) =>
  must(
    await markSent(s.customer(email), {
      rmaId,
      carrier: s.seed.pick(["Parcel Line", "Harbour Freight Post"]),
      tracking: `PL${s.seed.int(10_000_000, 99_999_999)}`,
    }),
  );

export async function received(s: Story, rmaId: string): Promise<string> {
  const rma = (await rmaById(s.job, rmaId))!;
  const line = rma.lines[0]!;
  for (const slot of photosNeeded(line.family, "good")) {
    const bytes =
      slot === "label"
        ? await labelPicture(s.seed, line.serial)
        : await picture(s.seed, slot === "socket" ? "socket" : "box");
    const { fileId } = must(await jpeg(s, bytes, `${slot}.jpg`, null, "dock_photo"));
    must(await keepPhoto(s.dock, { fileId, subject: "receipt_line", subjectId: line.id, slot }));
  }
  must(
    await receiveLine(s.dock, {
      lineId: line.id,
      scanned: line.serial,
      place: `${s.seed.pick(["A", "B", "C"])}-${s.seed.int(10, 29)}`,
      condition: "good",
      clientId: s.seed.uuid(),
    }),
  );
  return line.id;
}

export async function tested(
  s: Story,
  rmaId: string,
  what: { outcome: TestOutcome; disposition: Disposition; finding: string; part: Part },
): Promise<void> {
  const rma = (await rmaById(s.job, rmaId))!;
  const line = rma.lines[0]!;
  const { testId } = must(await startBench(s.bench, { lineId: line.id, scan: line.serial }));
  const sheet = sheetFor(line.family);
  for (const step of sheet.steps) {
    const bad = what.outcome === "fault_confirmed" && step.step === Math.min(4, sheet.steps.length);
    const m = step.measure;
    const value = step.serial
      ? line.serial
      : !m
        ? ""
        : m.max !== undefined && bad
          ? String(m.max + s.seed.int(2, 60))
          : m.min !== undefined && bad
            ? String(Math.max(0, m.min * 0.4))
            : m.min !== undefined
              ? String(m.min)
              : m.max !== undefined
                ? "0"
                : String(s.seed.int(4000, 21_000));
    must(await keepReading(s.bench, { testId, step: step.step, value, verdict: bad ? "fail" : "pass" }));
  }
  s.later(s.seed.int(1, 5));
  const fields = {
    testId,
    scan: line.serial,
    finding: what.finding,
    outcome: what.outcome,
    disposition: what.disposition,
    secondPerson: what.outcome === "damage_not_covered" ? "Piotr Lund" : "",
  };
  if (what.outcome === "damage_not_covered") {
    const { fileId } = must(
      await jpeg(s, await picture(s.seed, "socket"), "finding.jpg", null, "bench_photo"),
    );
    must(await keepPhoto(s.bench, { fileId, subject: "bench_test", subjectId: testId, slot: "finding" }));
  }
  must(
    await closeBench(s.bench, {
      ...fields,
      sanitization:
        what.disposition === "restock" && line.dataBearing
          ? {
              method: "clear",
              technique: "block erase",
              tool: "erase tool 2.1",
              verification: "full, nothing left",
            }
          : null,
    }),
  );
}

/** A like part into stock, then out of it. Whole units too. */
export async function goesOut(s: Story, rmaId: string, part: Part): Promise<void> {
  const rma = (await rmaById(s.job, rmaId))!;
  const line = rma.lines[0]!;
  if (rma.remedy === "credit" || rma.remedy === "refund") {
    must(await settleByMoney(s.bench, { lineId: line.id }));
    return;
  }
  const code = part.modelCode;
  const serial =
    MODELS[code].kind === "system" ? `${code.replace("-", "")}-${s.seed.code(5)}` : partSerial(s.seed, code);
  must(
    await addStock(s.ctx({ kind: "job", name: "demo" }), {
      serial,
      model: MODELS[code],
      condition: "new",
      place: `S-${s.seed.int(10, 60)}`,
      lot: SUPPLIER_OF[code] ? `${code.slice(0, 2)}-S${s.seed.int(1, 4)}` : null,
      supplier: SUPPLIER_OF[code]?.toUpperCase() ?? null,
    }),
  );
  must(
    await shipReplacement(s.bench, {
      lineId: line.id,
      serial,
      carrier: "Parcel Line",
      tracking: `PL${s.seed.int(10_000_000, 99_999_999)}`,
      acceptWarnings: true,
    }),
  );
}

export const goesBack = async (s: Story, rmaId: string) => {
  const rma = (await rmaById(s.job, rmaId))!;
  must(await sendBack(s.bench, { lineId: rma.lines[0]!.id, carrier: "Parcel Line", tracking: "" }));
};

export const dayOf = (at: Date) => civilDayIn(at, "Europe/London");
