import { z } from "zod";

// Lists here become PostgreSQL enums in db/schema/mail.ts: add at the end, with a migration.

export const RAW_STATES = ["received", "parsed", "unreadable", "duplicate"] as const;
export const DIRECTIONS = ["in", "out"] as const;
/** What kind of mail it is; only `person` is ever answered. */
export const MAIL_KINDS = ["person", "auto_reply", "bounce", "list", "calendar", "unreadable"] as const;
export type MailKind = (typeof MAIL_KINDS)[number];
export const HELD_STATES = ["held", "admitted", "discarded"] as const;
export const OUTBOX_STATES = ["pending", "sending", "sent", "dead"] as const;
export type OutboxState = (typeof OUTBOX_STATES)[number];

export const TEMPLATES = [
  "acknowledgement",
  "sign_in",
  "decision",
  "evidence_wanted",
  "rma_authorized",
  "rma_declined",
  "received",
  "bench_result",
  "shipped",
  "settled",
  "reply",
] as const;
export type TemplateName = (typeof TEMPLATES)[number];

const Line = z.string();
/** Rights by law that stand beside the terms, for the buyer and country of the sale. */
const Law = z.object({ title: Line, words: Line }).optional();
/** What each template needs: props in, markup out. */
export const TEMPLATE_PROPS = {
  acknowledgement: z.object({ personName: Line, ticketNumber: z.number(), subject: Line }),
  sign_in: z.object({ link: Line, code: Line, minutes: z.number() }),
  decision: z.object({
    personName: Line,
    ticketNumber: z.number(),
    serial: Line,
    headline: Line,
    why: z.array(Line),
    wouldChange: z.array(Line),
    next: Line,
    link: Line,
  }),
  evidence_wanted: z.object({
    personName: Line,
    ticketNumber: z.number(),
    serial: Line.nullable(),
    wanted: z.array(z.object({ what: Line, why: Line })),
    text: Line,
    link: Line.nullable(),
  }),
  rma_authorized: z.object({
    personName: Line,
    rmaNumber: Line,
    remedy: Line,
    lines: z.array(z.object({ serial: Line, what: Line })),
    sendBy: Line,
    address: z.array(Line),
    fees: z.array(Line),
    cautions: z.array(Line),
    law: Law,
    link: Line,
    /** Serials that come back by goodwill, outside the terms. Left out: none. */
    goodwill: z.array(Line).optional(),
  }),
  rma_declined: z.object({
    personName: Line,
    ticketNumber: z.number(),
    law: Law,
    serial: Line,
    why: z.array(Line),
    wouldChange: z.array(Line),
    offers: z.array(Line),
  }),
  received: z.object({ personName: Line, rmaNumber: Line, serial: Line, next: Line, link: Line }),
  bench_result: z.object({
    personName: Line,
    rmaNumber: Line,
    serial: Line,
    outcome: Line,
    finding: Line,
    next: Line,
    link: Line,
  }),
  shipped: z.object({
    personName: Line,
    rmaNumber: Line,
    serialOut: Line,
    serialReplaced: Line,
    cover: Line,
    carrier: Line,
    tracking: Line,
    link: Line,
  }),
  settled: z.object({ personName: Line, rmaNumber: Line, what: Line, link: Line }),
  reply: z.object({ personName: Line, ticketNumber: z.number(), text: Line, byName: Line }),
} as const satisfies Record<TemplateName, z.ZodType>;

export type TemplateProps = { [N in TemplateName]: z.output<(typeof TEMPLATE_PROPS)[N]> };

export type MailAttachment = { fileId: string; name: string } | { paper: string; id: string; name: string };
export type EnqueueMail = {
  [N in TemplateName]: {
    to: string;
    toName?: string;
    template: N;
    props: TemplateProps[N];
    ticketId?: string | null;
    accountId?: string | null;
    automatic: boolean;
    attachments?: MailAttachment[];
  };
}[TemplateName];

export type MessageView = {
  id: string;
  direction: "in" | "out";
  kind: MailKind;
  fromEmail: string;
  fromName: string;
  toEmails: string[];
  subject: string;
  sentAt: Date;
  text: string;
  hasHtml: boolean;
  folds: [number, number][];
  proof: string;
  outboxState: OutboxState | null;
  outboxError: string | null;
};

export type HeldView = {
  heldId: string;
  heldAt: Date;
  reason: string;
  hintTicketNumber: number | null;
  kind: MailKind;
  fromEmail: string;
  fromName: string;
  subject: string;
  text: string;
  sentAt: Date;
  filing: { step: string; reason: string }[];
};

export type DeadLetter = {
  outboxId: string;
  toEmail: string;
  template: TemplateName;
  attempts: number;
  error: string | null;
  createdAt: Date;
  subject: string;
  ticketNumber: number | null;
};

export const AdmitHeld = z.object({
  heldId: z.uuid(),
  /** The ticket's number, as people say it; empty opens a new one. */
  ticketNumber: z.coerce.number().int().positive().optional(),
  /** From now on mail of this sender joins the record by itself. */
  takesPart: z
    .union([z.boolean(), z.literal("on")])
    .transform((v) => v === true || v === "on")
    .default(false),
});
export const DiscardHeld = z.object({ heldId: z.uuid() });
