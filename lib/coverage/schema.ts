// Lists here become PostgreSQL enums in db/schema/coverage.ts: add at the end, with a migration.

export const CLAUSE_KINDS = ["doa", "cover", "replaced_part", "exclusion", "fee", "transfer"] as const;
export type ClauseKind = (typeof CLAUSE_KINDS)[number];

export const START_BASES = ["shipped", "delivered", "invoiced", "installed"] as const;
export type StartBasis = (typeof START_BASES)[number];

export const DAY_RULES = ["event_day_excluded", "start_day_included"] as const;
export type DayRule = (typeof DAY_RULES)[number];

export const REMEDIES = [
  "advance_replacement",
  "replacement_on_receipt",
  "repair",
  "credit",
  "refund",
] as const;
export type Remedy = (typeof REMEDIES)[number];

export const REMEDY_WORDS: Record<Remedy, string> = {
  advance_replacement: "advance replacement",
  replacement_on_receipt: "replacement on receipt",
  repair: "repair",
  credit: "credit",
  refund: "refund",
};

export const OUTCOMES = ["covered", "covered_doa", "not_covered", "needs_person"] as const;
export type Outcome = (typeof OUTCOMES)[number];

export const WINDOW_KINDS = ["doa", "cover"] as const;
export type WindowKind = (typeof WINDOW_KINDS)[number];

export const FAULT_CLASSES = [
  "no_power",
  "not_detected",
  "errors_logged",
  "failed_drive",
  "noise_or_heat",
  "network_port",
  "bent_contacts",
  "physical_damage",
  "liquid",
  "restarts",
  "other",
] as const;
export type FaultClass = (typeof FAULT_CLASSES)[number];

export const FAULT_WORDS: Record<FaultClass, string> = {
  no_power: "It does not power on",
  not_detected: "A part is not seen",
  errors_logged: "Errors are logged",
  failed_drive: "A drive has failed or drops out",
  noise_or_heat: "It is loud or runs hot",
  network_port: "A network port is dead",
  bent_contacts: "Socket contacts are bent",
  physical_damage: "It is physically damaged",
  liquid: "Liquid has been in it",
  restarts: "It restarts by itself",
  other: "Something else",
};

/** Evidence wanted per fault: what it is and why it helps. Common practice, no source. */
export const EVIDENCE_FOR: Record<FaultClass, { what: string; why: string }[]> = {
  no_power: [
    { what: "photo of the lamps and the label", why: "It shows which supply and which unit." },
    { what: "event log", why: "It tells a lost feed from a failed supply." },
  ],
  not_detected: [
    { what: "photo of the label", why: "It ties the part to what we shipped." },
    { what: "event log", why: "It shows when the part was last seen." },
  ],
  errors_logged: [{ what: "event log", why: "It names the slot and how often." }],
  failed_drive: [{ what: "log of the drive", why: "It holds the drive's serial, hours and errors." }],
  noise_or_heat: [{ what: "sound or video", why: "It tells a fan from a drive." }],
  network_port: [{ what: "event log", why: "It shows the link going down." }],
  bent_contacts: [{ what: "photo of the socket", why: "Single contacts must be seen, cap off." }],
  physical_damage: [{ what: "photo of the damage", why: "We compare it with ours from before shipping." }],
  liquid: [{ what: "photo of the traces", why: "A person looks at it before any decision." }],
  restarts: [{ what: "event log", why: "It shows what came just before." }],
  other: [{ what: "photo or log", why: "Anything that shows what you see." }],
};

/** One clause as the engine reads it. Days are whole, money is cents. */
export type ClauseFact = {
  id: string;
  number: string;
  kind: ClauseKind;
  title: string;
  families: string[];
  condition: string | null;
  period: string | null;
  startBasis: StartBasis | null;
  deliveryGraceDays: number;
  dayRule: DayRule;
  remedies: Remedy[];
  dueBackDays: number | null;
  enduranceHours: number | null;
  exclusion: string | null;
  evidence: string[];
  feeKind: string | null;
  feeCents: number | null;
  words: string;
};

export type SaleFact = {
  shippedOn: string;
  deliveredOn: string | null;
  invoicedOn: string | null;
  condition: string;
  buyerKind: "business" | "consumer" | "unknown";
  country: string;
  pauses: { from: string; to: string }[];
};

export type PartFact = {
  family: string;
  /** The day it was fitted as a replacement; none for what was shipped with the unit. */
  swappedOn: string | null;
};

export type CoverWindow = {
  clauseId: string;
  clauseNumber: string;
  clauseTitle: string;
  kind: WindowKind;
  firstOn: string;
  lastOn: string;
  /** The replaced-part floor decided, not the remainder. */
  byFloor: boolean;
  /** The day the period runs from, and why that day. */
  startOn: string;
  startWords: string;
};

export type DecideInput = {
  sale: SaleFact;
  clauses: ClauseFact[];
  part: PartFact;
  what: string;
  faultClass: FaultClass;
  claimOn: string;
  /** What is there to see: kinds of evidence that came, in the words they were asked for. */
  evidence: { photos: number; logs: number };
  /** Exclusions that a person has found shown by the evidence. */
  established: string[];
  readings: { powerOnHours?: number; serial?: string; serialMatches?: boolean };
  /** An RMA already open on this unit. */
  openRma: string | null;
  week: { workdays: number[]; holidays: string[] };
};

export type Reason = {
  rule: string;
  clause: string | null;
  staff: string;
  customer: string;
};

export type Decision = {
  engine: string;
  outcome: Outcome;
  headline: { staff: string; customer: string };
  clauseNumber: string | null;
  lastCoveredOn: string | null;
  windows: CoverWindow[];
  remedies: Remedy[];
  fees: { kind: string; cents: number; words: string }[];
  reasons: Reason[];
  wouldChange: { fact: string; staff: string; customer: string }[];
  evidenceWanted: string[];
};

export type CoverState = "covered" | "doa" | "ended" | "person";

export type CoverRow = {
  unitId: string;
  serial: string;
  slot: string | null;
  family: string;
  modelName: string;
  depth: number;
  clauseNumber: string;
  clauseTitle: string;
  kind: WindowKind;
  firstOn: string;
  lastOn: string;
  state: CoverState;
  words: string;
  claimed: boolean;
};

/** A part in its slot, with those that stood there before. */
export type TreePart = {
  unitId: string;
  installationId: string;
  parentUnitId: string;
  serial: string;
  slot: string;
  family: string;
  modelCode: string;
  modelName: string;
  depth: number;
  fromOn: string;
  source: "as_built" | "swap";
  was: { serial: string; toOn: string; reason: string | null }[];
};

export type CoverView = {
  unit: {
    id: string;
    serial: string;
    modelCode: string;
    modelName: string;
    condition: string;
    family: string;
  };
  /** The unit asked for: the system itself or one part of it. */
  claimedUnitId: string;
  saleLineId: string;
  accountId: string;
  accountName: string;
  orderNumber: string;
  buyerKind: "business" | "consumer" | "unknown";
  country: string;
  shippedOn: string;
  deliveredOn: string | null;
  siteNote: string | null;
  termsVersionId: string;
  termsName: string;
  termsIssue: number;
  onDay: string;
  rows: CoverRow[];
  tree: TreePart[];
};
