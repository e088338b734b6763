import { asc, eq, sql } from "drizzle-orm";
import { read } from "@/db/client";
import { entries, tickets, ticketUnits } from "@/db/schema/tickets";
import { accounts, models, units } from "@/db/schema/ledger";
import { messages, outbox } from "@/db/schema/mail";
import { serialKey } from "@/lib/base/serial";
import type { Ctx } from "@/lib/ctx";
import { findUnits, lookAlikes, unitsByScan } from "@/lib/ledger/queries";
import type { UnitHit } from "@/lib/ledger/schema";
import type { MessageView } from "@/lib/mail/schema";
import { moveSeen } from "./goodwill";
import type { EntryView, TieState, WaitingOn } from "./schema";

export type DeskRow = {
  id: string;
  number: number;
  waitingOn: WaitingOn;
  waitingFor: string;
  dueAt: Date | null;
  clockStartedAt: Date | null;
  chaseOn: string | null;
  unitId: string | null;
  serial: string | null;
  isPart: boolean;
  proposed: boolean;
  faultWords: string;
  customer: string;
  outcome: "covered" | "covered_doa" | "not_covered" | "needs_person" | null;
  lastCoveredOn: string | null;
  clauseNumber: string | null;
  firstOn: string | null;
  windowLastOn: string | null;
  rmaNumber: string | null;
  evidenceWanted: number;
  evidenceCame: number;
  lastEntryAt: Date;
  lastEntryLine: string;
};

export type DeskFilter = { q?: string; on?: WaitingOn | "all"; closed?: boolean };
export const DESK_LIMIT = 400;

/** Open tickets by whom they wait on and by due clock. Bounded: the rest is found by the scan line. */
export async function desk(ctx: Ctx, filter: DeskFilter = {}): Promise<{ rows: DeskRow[]; more: boolean }> {
  const q = (filter.q ?? "").trim().toLowerCase();
  const like = `%${q.replace(/[%_\\]/g, "\\$&")}%`;
  const result = await read(ctx, (tx) =>
    tx.execute(sql`
      select t.id, t.number, t.waiting_on as "waitingOn", t.waiting_for as "waitingFor", t.due_at as "dueAt",
        t.clock_started_at as "clockStartedAt", t.chase_on as "chaseOn", t.fault_words as "faultWords",
        coalesce(a.name, t.person_email) as customer, t.evidence_wanted as "evidenceWanted", t.evidence_came as "evidenceCame",
        t.last_entry_at as "lastEntryAt", t.last_entry_line as "lastEntryLine",
        u.unit_id as "unitId", u.serial, coalesce(u.kind = 'part', false) as "isPart", coalesce(u.state = 'proposed', false) as proposed,
        d.outcome, d.last_covered_on as "lastCoveredOn", d.answer ->> 'clauseNumber' as "clauseNumber",
        w.first_on as "firstOn", w.last_on as "windowLastOn", r.number as "rmaNumber"
      from ticket t
      left join account a on a.id = t.account_id
      left join lateral (
        select tu.unit_id, un.serial, m.kind, tu.state from ticket_unit tu
          join unit un on un.id = tu.unit_id join model m on m.id = un.model_id
        where tu.ticket_id = t.id and tu.state <> 'dismissed' order by tu.state = 'tied' desc, tu.created_at limit 1) u on true
      left join lateral (
        select outcome, last_covered_on, answer from coverage_decision where ticket_id = t.id order by made_at desc limit 1) d on true
      left join lateral (
        select first_on, last_on from cover_window cw where cw.unit_id = u.unit_id and cw.kind = 'cover' order by last_on desc limit 1) w on true
      left join lateral (select number from rma where ticket_id = t.id order by created_at desc limit 1) r on true
      where ${filter.closed ? sql`t.closed_at is not null` : sql`t.closed_at is null`}
        ${filter.on && filter.on !== "all" ? sql`and t.waiting_on = ${filter.on}` : sql``}
        ${q === "" ? sql`` : sql`and (lower(t.fault_words) like ${like} or lower(coalesce(a.name, t.person_email)) like ${like} or lower(coalesce(u.serial, '')) like ${like} or lower(coalesce(r.number, '')) like ${like})`}
      order by t.waiting_on, t.due_at nulls last, t.chase_on nulls last, t.id
      limit ${DESK_LIMIT + 1}`),
  );
  const rows = (
    result.rows as (Omit<DeskRow, "dueAt" | "clockStartedAt" | "lastEntryAt"> & Record<string, unknown>)[]
  ).map((r) => ({
    ...r,
    dueAt: r.dueAt ? new Date(r.dueAt as unknown as string) : null,
    clockStartedAt: r.clockStartedAt ? new Date(r.clockStartedAt as unknown as string) : null,
    lastEntryAt: new Date(r.lastEntryAt as unknown as string),
  })) as DeskRow[];
  return { rows: rows.slice(0, DESK_LIMIT), more: rows.length > DESK_LIMIT };
}

export type TicketUnitView = {
  id: string;
  unitId: string;
  serial: string;
  modelCode: string;
  modelName: string;
  family: string;
  systemUnitId: string | null;
  systemSerial: string | null;
  slot: string | null;
  state: TieState;
  faultClass: string | null;
  faultWords: string;
  answers: Record<string, string>;
};

export type TicketView = {
  id: string;
  number: number;
  accountId: string | null;
  accountName: string | null;
  personName: string;
  personEmail: string;
  channel: "mail" | "portal" | "staff";
  subject: string;
  faultWords: string;
  receivedAt: Date;
  claimOn: string;
  waitingOn: WaitingOn;
  waitingFor: string;
  clockStartedAt: Date | null;
  dueAt: Date | null;
  chaseOn: string | null;
  closedAt: Date | null;
  version: number;
  units: TicketUnitView[];
  entries: EntryView[];
  messages: Record<string, MessageView>;
};

export const ENTRY_LIMIT = 500;

/** One ticket with its record, whole. By number, as people say it. Null: not there, or not theirs. */
export async function ticketByNumber(ctx: Ctx, number: number): Promise<TicketView | null> {
  if (!Number.isSafeInteger(number) || number < 1 || number > 2_000_000_000) return null;
  return read(ctx, async (tx) => {
    const [t] = await tx
      .select({ ticket: tickets, accountName: accounts.name })
      .from(tickets)
      .leftJoin(accounts, eq(accounts.id, tickets.accountId))
      .where(eq(tickets.number, number))
      .limit(1);
    if (!t) return null;
    const id = t.ticket.id;
    const unitRows = await tx
      .select({
        id: ticketUnits.id,
        unitId: ticketUnits.unitId,
        serial: units.serial,
        modelCode: models.code,
        modelName: models.name,
        family: models.family,
        systemUnitId: ticketUnits.systemUnitId,
        systemSerial: sql<
          string | null
        >`(select s.serial from unit s where s.id = ${ticketUnits.systemUnitId})`,
        slot: ticketUnits.slot,
        state: ticketUnits.state,
        faultClass: ticketUnits.faultClass,
        faultWords: ticketUnits.faultWords,
        answers: ticketUnits.answers,
      })
      .from(ticketUnits)
      .innerJoin(units, eq(units.id, ticketUnits.unitId))
      .innerJoin(models, eq(models.id, units.modelId))
      .where(eq(ticketUnits.ticketId, id))
      .orderBy(sql`${ticketUnits.state} = 'tied' desc`, asc(ticketUnits.createdAt));
    const entryRows = await tx
      .select()
      .from(entries)
      .where(eq(entries.ticketId, id))
      .orderBy(asc(entries.seq))
      .limit(ENTRY_LIMIT);
    const messageColumns = {
      id: messages.id,
      direction: messages.direction,
      kind: messages.kind,
      fromEmail: messages.fromEmail,
      fromName: messages.fromName,
      toEmails: messages.toEmails,
      subject: messages.subject,
      sentAt: messages.sentAt,
      text: messages.text,
      html: sql<boolean>`${messages.html} is not null`,
      folds: messages.folds,
      proof: messages.proof,
    };
    // Customers put mails into the outbox and read none of it: their role has no right to.
    const messageRows =
      ctx.actor.kind === "customer"
        ? (
            await tx.select(messageColumns).from(messages).where(eq(messages.ticketId, id)).limit(ENTRY_LIMIT)
          ).map((m) => ({ ...m, outboxState: null, outboxError: null }))
        : await tx
            .select({ ...messageColumns, outboxState: outbox.state, outboxError: outbox.lastError })
            .from(messages)
            .leftJoin(outbox, eq(outbox.messageRowId, messages.id))
            .where(eq(messages.ticketId, id))
            .limit(ENTRY_LIMIT);
    const { ticket } = t;
    const theirs = ctx.actor.kind === "customer";
    return {
      id,
      number: ticket.number,
      accountId: ticket.accountId,
      accountName: t.accountName,
      personName: ticket.personName,
      personEmail: ticket.personEmail,
      channel: ticket.channel,
      subject: ticket.subject,
      faultWords: ticket.faultWords,
      receivedAt: ticket.receivedAt,
      claimOn: ticket.claimOn,
      waitingOn: ticket.waitingOn,
      waitingFor: theirs ? moveSeen(ticket.waitingFor) : ticket.waitingFor,
      clockStartedAt: ticket.clockStartedAt,
      dueAt: ticket.dueAt,
      chaseOn: ticket.chaseOn,
      closedAt: ticket.closedAt,
      version: ticket.version,
      units: unitRows,
      entries: entryRows.map((e) => ({
        id: e.id,
        ref: `${e.letter}${e.number}`,
        letter: e.letter,
        kind: e.kind,
        at: e.at,
        actorKind: e.actorKind,
        actorName: e.actorName,
        customerSees: e.customerSees,
        line: e.line,
        data: e.data,
      })),
      messages: Object.fromEntries(messageRows.map(({ html, ...m }) => [m.id, { ...m, hasHtml: html }])),
    };
  });
}

export type CaseRow = {
  id: string;
  number: number;
  faultWords: string;
  serial: string | null;
  waitingOn: WaitingOn;
  waitingFor: string;
  closedAt: Date | null;
  lastEntryAt: Date;
  rmaNumber: string | null;
};

/** A customer's own tickets, newest first, keyset paged by number. */
export async function cases(
  ctx: Ctx,
  ask: { before: number | null; limit: number; unitId?: string },
): Promise<{ rows: CaseRow[]; next: number | null }> {
  const result = await read(ctx, (tx) =>
    tx.execute(sql`
      select t.id, t.number, t.fault_words as "faultWords", t.waiting_on as "waitingOn", t.waiting_for as "waitingFor", t.closed_at as "closedAt",
        t.last_entry_at as "lastEntryAt",
        (select un.serial from ticket_unit tu join unit un on un.id = tu.unit_id where tu.ticket_id = t.id and tu.state = 'tied' order by tu.created_at limit 1) as serial,
        (select r.number from rma r where r.ticket_id = t.id order by r.created_at desc limit 1) as "rmaNumber"
      from ticket t
      where ${ask.before === null ? sql`true` : sql`t.number < ${ask.before}`}
        ${ask.unitId ? sql`and exists (select from ticket_unit tu where tu.ticket_id = t.id and tu.state = 'tied' and (tu.unit_id = ${ask.unitId} or tu.system_unit_id = ${ask.unitId}))` : sql``}
      order by t.number desc limit ${ask.limit + 1}`),
  );
  const rows = (result.rows as Record<string, unknown>[]).map((r) => ({
    ...r,
    closedAt: r.closedAt ? new Date(r.closedAt as string) : null,
    lastEntryAt: new Date(r.lastEntryAt as string),
  })) as CaseRow[];
  const page = rows.slice(0, ask.limit);
  return { rows: page, next: rows.length > ask.limit ? (page.at(-1)?.number ?? null) : null };
}

export type FindHit =
  | { kind: "unit"; label: string; detail: string; href: string }
  | { kind: "ticket"; label: string; detail: string; href: string };
export type Found = { text: string; exact: string | null; hits: FindHit[]; alike: UnitHit[] };

const unitHref = (u: UnitHit) => `/ledger/${encodeURIComponent(u.serial)}`;

/**
 * The scan line. One exact hit opens; several are listed; none says what was looked for.
 * Look-alikes are suggested, never opened by themselves.
 */
export async function find(ctx: Ctx, raw: string): Promise<Found> {
  const text = raw
    .replace(/[\u0000-\u001f]/g, " ")
    .trim()
    .slice(0, 200);
  const none: Found = { text, exact: null, hits: [], alike: [] };
  if (text === "") return none;
  const tickets_ = await read(ctx, async (tx) => {
    const key = serialKey(text);
    const result = await tx.execute(sql`
      select distinct t.number, t.fault_words as "faultWords", coalesce(a.name, t.person_email) as customer, t.closed_at is not null as closed, t.last_entry_at
      from ticket t
      left join account a on a.id = t.account_id
      left join rma r on r.ticket_id = t.id
      left join ticket_unit tu on tu.ticket_id = t.id and tu.state <> 'dismissed'
      left join unit un on un.id = tu.unit_id
      left join unit su on su.id = tu.system_unit_id
      where t.number = ${/^#?\d{3,9}$/.test(text) ? Number(text.replace("#", "")) : -1}
        or replace(upper(r.number), '-', '') = ${key}
        or (${key} <> '' and (un.serial_key = ${key} or su.serial_key = ${key}))
        or t.person_email = ${text.toLowerCase()}
      order by t.last_entry_at desc limit 25`);
    return result.rows as { number: number; faultWords: string; customer: string; closed: boolean }[];
  });
  // A label's prefix may be part of another serial: where the ledger knows both readings, both are shown.
  const scanned = await unitsByScan(ctx, text);
  const unit = scanned.length === 1 ? scanned[0] : null;
  const ticketHits: FindHit[] = tickets_.map((t) => ({
    kind: "ticket",
    label: `Ticket ${t.number}`,
    detail: `${t.faultWords}, ${t.customer}${t.closed ? ", closed" : ""}`,
    href: `/desk/${t.number}`,
  }));
  const byNumber = /^#?\d{3,9}$/.test(text) || /^rma/i.test(text);
  if (byNumber && ticketHits.length === 1) return { ...none, exact: ticketHits[0]!.href, hits: ticketHits };
  const open = tickets_.filter((t) => !t.closed);
  // A serial with one open ticket is that ticket; without a ticket it is the unit.
  if (unit && open.length === 1) return { ...none, exact: `/desk/${open[0]!.number}`, hits: ticketHits };
  if (unit && ticketHits.length === 0) return { ...none, exact: unitHref(unit), hits: [] };
  const unitHits: FindHit[] = (scanned.length > 0 ? scanned : await findUnits(ctx, text, 25)).map((u) => ({
    kind: "unit",
    label: u.serial,
    detail: `${u.modelName}${u.accountName ? `, ${u.accountName}` : ""}`,
    href: unitHref(u),
  }));
  const hits = [...ticketHits, ...unitHits];
  if (hits.length === 1) return { ...none, exact: hits[0]!.href, hits };
  return { ...none, hits, alike: hits.length === 0 ? await lookAlikes(ctx, text) : [] };
}

/** The record's facts in order, for recomputing what is derived. */
/** The number people say, of a ticket by its id. Null when it is not there for the one who asks. */
export async function ticketNumberOf(ctx: Ctx, ticketId: string): Promise<number | null> {
  const [row] = await read(ctx, (tx) =>
    tx.select({ number: tickets.number }).from(tickets).where(eq(tickets.id, ticketId)).limit(1),
  );
  return row?.number ?? null;
}

export async function entryFacts(ctx: Ctx, ticketId: string) {
  return read(ctx, (tx) =>
    tx
      .select({ kind: entries.kind, at: entries.at, data: entries.data })
      .from(entries)
      .where(eq(entries.ticketId, ticketId))
      .orderBy(asc(entries.seq)),
  );
}
