import { z } from "zod";
import { forbiddenIn } from "../coverage/law";
import { REMEDIES } from "../coverage/schema";

// Lists here become PostgreSQL enums in db/schema/rma.ts: add at the end, with a migration.

export const RMA_STATES = [
  "requested",
  "authorized",
  "in_transit",
  "received",
  "at_bench",
  "settled",
  "declined",
  "expired",
  "withdrawn",
] as const;
export type RmaState = (typeof RMA_STATES)[number];

export const RMA_STATE_WORDS: Record<RmaState, string> = {
  requested: "requested",
  authorized: "authorized",
  in_transit: "in transit",
  received: "received",
  at_bench: "at the bench",
  settled: "settled",
  declined: "declined",
  expired: "expired",
  withdrawn: "withdrawn",
};

export const LINE_STATES = ["open", "received", "tested", "settled", "cancelled"] as const;
export type LineState = (typeof LINE_STATES)[number];
export const OPEN_LINE_STATES: readonly LineState[] = ["open", "received", "tested"];

export const FEE_KINDS = ["no_fault_found", "restocking", "diagnostic", "not_returned", "freight"] as const;
export type FeeKind = (typeof FEE_KINDS)[number];

export const AuthorizeRma = z.object({
  ticketId: z.uuid(),
  lines: z
    .array(z.object({ ticketUnitId: z.uuid(), decisionId: z.uuid().nullish() }))
    .min(1, "Choose at least one unit to send back.")
    .max(50),
  remedy: z.enum(REMEDIES, { error: "Choose a remedy." }),
  battery: z.object({ present: z.boolean(), damaged: z.boolean() }).nullish(),
  shipTo: z.array(z.string().max(120)).max(6).default([]),
});
export const DeclineRma = z.object({
  ticketId: z.uuid(),
  ticketUnitId: z.uuid(),
  reason: z
    .string()
    .trim()
    .min(3, "Say why, in words the customer can read.")
    .max(4000)
    .superRefine((text, at) => {
      const found = forbiddenIn(text);
      if (found)
        at.addIssue({
          code: "custom",
          message: `“${found}” says more than our terms can. Write “under our warranty”; the law stands beside it.`,
        });
    }),
});
export const MarkSent = z.object({
  rmaId: z.uuid(),
  carrier: z.string().trim().min(2, "Name the carrier.").max(80),
  tracking: z.string().trim().max(80).default(""),
});
export const WithdrawRma = z.object({ rmaId: z.uuid(), reason: z.string().trim().max(1000).default("") });

export type RmaLineView = {
  id: string;
  ticketUnitId: string;
  unitId: string;
  serial: string;
  modelCode: string;
  modelName: string;
  family: string;
  slot: string | null;
  systemUnitId: string | null;
  systemSerial: string | null;
  remedy: string;
  faultWords: string;
  state: LineState;
  decisionId: string | null;
  weightKg: number | null;
  dataBearing: boolean;
  battery: "none" | "coin" | "ion" | "lead";
};

export type RmaView = {
  id: string;
  number: string;
  ticketId: string;
  ticketNumber: number;
  accountId: string;
  accountName: string;
  personName: string;
  personEmail: string;
  faultWords: string;
  state: RmaState;
  remedy: string;
  authorizedAt: Date | null;
  authorizedByName: string | null;
  expiresOn: string | null;
  dueBackOn: string | null;
  battery: { present: boolean; damaged: boolean } | null;
  site: { name: string; addressLines: string[]; zone: string };
  version: number;
  createdAt: Date;
  settledAt: Date | null;
  lines: RmaLineView[];
  fees: { lineId: string; kind: string; cents: number; currency: string; words: string }[];
};
