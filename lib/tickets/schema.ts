import { z } from "zod";
import { FAULT_CLASSES } from "../coverage/schema";

// Lists here become PostgreSQL enums in db/schema/tickets.ts: add at the end, with a migration.

export const CHANNELS = ["mail", "portal", "staff"] as const;
export type Channel = (typeof CHANNELS)[number];

/** Whose move it is. Derived from the record by rules.ts, never set by hand. */
export const WAITING_ON = ["us", "customer", "carrier", "dock", "bench", "supplier", "nobody"] as const;
export type WaitingOn = (typeof WAITING_ON)[number];

/** The letter of an entry's reference: M1, E1, C1. Numbers count per letter and never change. */
export const ENTRY_LETTERS = ["M", "E", "C", "R", "D", "B", "S", "N"] as const;
export type EntryLetter = (typeof ENTRY_LETTERS)[number];

/** What happened. Each kind has one letter (rules.ts) and says whose move follows. */
export const ENTRY_KINDS = [
  "mail_in", // M: the customer wrote, by mail or in the portal
  "mail_out", // M: a person of the desk wrote
  "mail_auto", // M: an automatic mail of ours: acknowledgement, notice
  "mail_noted", // M: auto-reply, bounce or carrier notice filed without a change
  "fault_reported", // E: portal report with the customer's answers
  "evidence_added", // E
  "evidence_wanted", // E
  "unit_tied", // N
  "note", // N: for us only
  "decision", // C
  "rma_requested", // R
  "rma_authorized", // R
  "rma_declined", // R
  "rma_expired", // R
  "rma_withdrawn", // R
  "rma_settled", // R
  "parcel_sent", // S: the customer's parcel is on its way to us
  "dock_received", // D
  "dock_stopped", // D: a wrong or unknown serial was set aside
  "bench_started", // B
  "bench_closed", // B
  "replacement_shipped", // S
  "closed", // N
  "goodwill_asked", // C: an agent asks a manager; for us only
  "goodwill_granted", // C
  "goodwill_declined", // C: for us only, until a letter tells the customer
] as const;
export type EntryKind = (typeof ENTRY_KINDS)[number];

export const TIE_STATES = ["proposed", "tied", "dismissed"] as const;
export type TieState = (typeof TIE_STATES)[number];

export const OpenTicket = z.object({
  accountId: z.uuid().nullish(),
  contactId: z.uuid().nullish(),
  personName: z.string().trim().max(200).default(""),
  // With letters beyond ASCII too (RFC 6531).
  personEmail: z.email({ pattern: z.regexes.unicodeEmail }),
  channel: z.enum(CHANNELS),
  subject: z.string().trim().max(500).default(""),
  faultWords: z.string().trim().max(4000).default(""),
  receivedAt: z.date(),
});

export const RecordEntry = z.object({
  ticketId: z.uuid(),
  kind: z.enum(ENTRY_KINDS),
  line: z.string().trim().min(1).max(500),
  data: z.record(z.string(), z.unknown()).default({}),
  customerSees: z.boolean().optional(),
});

export const AddTicketUnit = z.object({
  ticketId: z.uuid(),
  unitId: z.uuid(),
  state: z.enum(TIE_STATES),
  faultClass: z.enum(FAULT_CLASSES).nullish(),
  faultWords: z.string().max(4000).default(""),
  answers: z.record(z.string(), z.string()).default({}),
  /** Day of the receipt that first named it, when that is not the ticket's first. */
  claimOn: z.iso.date().nullish(),
});

export const TieUnit = z.object({
  ticketId: z.uuid(),
  unitId: z.uuid(),
  /** Reference of the entry that first named this unit, such as M3: its day is the claim's. */
  namedIn: z
    .string()
    .trim()
    .toUpperCase()
    .regex(/^[A-Z]\d{1,5}$/, "Give the reference of an entry, such as M3.")
    .nullish(),
});
const whole = (what: string) =>
  z.coerce
    .number({ error: `Give the ${what} as a number.` })
    .min(0, `There are no negative ${what}.`)
    .max(10_000_000, `More ${what} than any drive lives; look at the log again.`);

export const TakeDecision = z.object({
  ticketId: z.uuid(),
  ticketUnitId: z.uuid(),
  faultClass: z.enum(FAULT_CLASSES, { error: "Choose what kind of fault it is." }),
  established: z.array(z.string()).default([]),
  ruledOut: z.array(z.string()).default([]),
  /** What a person read in the log: hours and terabytes written, and the serial it names. */
  powerOnHours: whole("hours").optional(),
  terabytesWritten: whole("terabytes").optional(),
  logSerial: z.string().trim().max(80).optional(),
});
export const Reply = z.object({
  ticketId: z.uuid(),
  text: z
    .string()
    .trim()
    .min(2, "Write the answer first.")
    .max(20_000, "Keep the answer under 20 000 characters."),
});
export const AskEvidence = z.object({
  ticketId: z.uuid(),
  wanted: z.array(z.string().min(1)).min(1, "Choose at least one thing to ask for."),
  text: z.string().trim().max(20_000).default(""),
});
export const AddNote = z.object({
  ticketId: z.uuid(),
  text: z.string().trim().min(1, "Write the note first.").max(10_000),
});
export const AttachEvidence = z.object({
  ticketId: z.uuid(),
  fileIds: z.array(z.uuid()).min(1).max(60),
  ticketUnitId: z.uuid().nullish(),
  source: z.enum(["mail", "portal", "staff", "dock", "bench"]),
  fromName: z.string().max(200),
});

export type EntryView = {
  id: string;
  ref: string;
  letter: EntryLetter;
  kind: EntryKind;
  at: Date;
  actorKind: string;
  actorName: string;
  customerSees: boolean;
  line: string;
  data: Record<string, unknown>;
};

export type DeskRowView = {
  id: string;
  number: number;
  serial: string | null;
  isPart: boolean;
  proposed: boolean;
  fault: string;
  customer: string;
  clock: {
    state: "running" | "over" | "rest";
    share: number;
    words: string;
    late: boolean;
    by: string | null;
  };
  waitingFor: string;
  cover: { state: "covered" | "doa" | "part" | "ended" | "person" | "none"; words: string };
  rmaNumber: string | null;
  evidenceWanted: number;
  evidenceCame: number;
  lastLine: string;
  lastAgo: string;
  window: { firstOn: string; lastOn: string; clause: string; words: string } | null;
};
export type DeskGroupView = { on: WaitingOn; rows: DeskRowView[]; note: string };
export type DeskView = {
  sentence: string;
  second: string;
  groups: DeskGroupView[];
  more: boolean;
  today: string;
  asOf: string;
  zone: string;
};

/** What a list of tickets may be asked by. */
export const DeskAsk = z.object({
  q: z.string().max(120).optional().describe("words of the fault, customer, serial or RMA"),
  on: z
    .enum([...WAITING_ON, "all"])
    .optional()
    .describe("whom the tickets wait on"),
});
export const UnitCoverAsk = z.object({
  on: z.iso.date().optional().describe("civil day; today in the seller's zone when left out"),
});
