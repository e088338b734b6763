import { z } from "zod";

// Lists here become PostgreSQL enums in db/schema/ledger.ts: add at the end, with a migration.

/** Unknown is treated as consumer for fees and wording. */
export const BUYER_KINDS = ["business", "consumer", "unknown"] as const;
export type BuyerKind = (typeof BUYER_KINDS)[number];

export const UNIT_KINDS = ["system", "part"] as const;
export type UnitKind = (typeof UNIT_KINDS)[number];

export const CONDITIONS = ["new", "refurbished"] as const;
export type Condition = (typeof CONDITIONS)[number];

export const FAMILIES = [
  "system",
  "board",
  "processor",
  "memory",
  "drive",
  "power_supply",
  "fan",
  "controller",
  "network",
  "riser",
  "chassis",
  "battery",
  "cable",
] as const;
export type Family = (typeof FAMILIES)[number];

export const FAMILY_WORDS: Record<Family, string> = {
  system: "System",
  board: "Board",
  processor: "Processor",
  memory: "Memory",
  drive: "Drive",
  power_supply: "Power supply",
  fan: "Fan",
  controller: "Storage controller",
  network: "Network adapter",
  riser: "Riser, backplane",
  chassis: "Chassis and rails",
  battery: "Battery",
  cable: "Cable",
};

/** Where a unit is. Equal to what its scans and shipments say. */
export const WHEREABOUTS = [
  "customer",
  "transit",
  "dock",
  "bench",
  "stock",
  "set_aside",
  "supplier",
  "scrapped",
] as const;
export type Whereabouts = (typeof WHEREABOUTS)[number];

export const INSTALLATION_SOURCES = ["as_built", "swap", "moved"] as const;

export const IMPORT_STATES = ["previewed", "applying", "applied", "failed", "cancelled"] as const;
export type ImportState = (typeof IMPORT_STATES)[number];

export const CivilDay = z
  .string()
  .regex(/^\d{4}-\d{2}-\d{2}$/, "Give a day as year-month-day, such as 2026-03-04.")
  .refine((day) => z.iso.date().safeParse(day).success, "There is no such day in the calendar.");
export type CivilDay = z.output<typeof CivilDay>;

export type UnitHit = {
  unitId: string;
  serial: string;
  kind: UnitKind;
  family: Family;
  modelCode: string;
  modelName: string;
  condition: Condition;
  whereabouts: Whereabouts;
  place: string | null;
  accountId: string | null;
  accountName: string | null;
  orderNumber: string | null;
  systemUnitId: string | null;
  systemSerial: string | null;
  slot: string | null;
};

export type Site = {
  id: string;
  code: string;
  name: string;
  zone: string;
  addressLines: string[];
  workdays: number[];
  opensAt: string;
  closesAt: string;
  holidays: string[];
};

export const SwapPart = z.object({
  parentUnitId: z.uuid(),
  slot: z.string().min(1),
  outUnitId: z.uuid(),
  inUnitId: z.uuid(),
  onDay: CivilDay,
  reason: z.string().min(1),
});
export const MoveUnit = z.object({
  unitId: z.uuid(),
  whereabouts: z.enum(WHEREABOUTS),
  place: z.string().max(40).nullish(),
});
export const EndSale = z.object({ unitId: z.uuid(), onDay: CivilDay, reason: z.string().min(1) });
export const GiveOn = z
  .object({
    unitId: z.uuid(),
    accountCode: z.string().trim().min(1, "Name the account it was given to, by its code."),
    onDay: CivilDay,
    noticedOn: CivilDay.nullish(),
  })
  .refine((v) => !v.noticedOn || v.noticedOn >= v.onDay, {
    path: ["noticedOn"],
    message: "The notice cannot come before the day it was given on.",
  });
export const NoteNotice = z.object({ unitId: z.uuid(), noticedOn: CivilDay });
export const MovePart = z
  .object({
    partUnitId: z.uuid(),
    toUnitId: z.uuid(),
    slot: z.string().trim().min(1, "Name the slot it stands in now.").max(60),
    onDay: CivilDay,
    noticedOn: CivilDay.nullish(),
  })
  .refine((v) => !v.noticedOn || v.noticedOn >= v.onDay, {
    path: ["noticedOn"],
    message: "The notice cannot come before the day it was moved.",
  });
export const PauseCover = z
  .object({
    unitId: z.uuid(),
    from: CivilDay,
    to: CivilDay,
    reason: z.string().trim().min(3, "Say why its cover rests.").max(200),
  })
  .refine((v) => v.to >= v.from, { path: ["to"], message: "The last day cannot come before the first." });
export const ReplaceSystem = z.object({ oldUnitId: z.uuid(), newUnitId: z.uuid(), onDay: CivilDay });

export type ImportView = {
  id: string;
  fileName: string;
  state: ImportState;
  rowsTotal: number;
  rowsGood: number;
  rowsDone: number;
  added: Record<string, number>;
  problems: { row: number; column: string | null; message: string }[];
  problemsTotal: number;
  error: string | null;
  createdAt: Date;
  finishedAt: Date | null;
};
