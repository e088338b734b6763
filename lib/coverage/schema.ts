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

/** How long cover of a part we fitted lasts. */
export const REPLACED_RULES = ["later_of_both", "remainder", "floor"] as const;
export type ReplacedRule = (typeof REPLACED_RULES)[number];
export const REPLACED_WORDS: Record<ReplacedRule, string> = {
  later_of_both: "the rest of the first cover or the floor, whichever is later",
  remainder: "the rest of the first cover only",
  floor: "the floor only",
};

/** What becomes of cover when a unit is given on to another company. */
export const TRANSFER_RULES = ["first_buyer", "with_notice", "follows_serial"] as const;
export type TransferRule = (typeof TRANSFER_RULES)[number];
export const TRANSFER_WORDS: Record<TransferRule, string> = {
  first_buyer: "cover is the first buyer's and ends when the unit is given on",
  with_notice: "cover goes along when we are told in writing",
  follows_serial: "cover follows the serial, whoever holds it",
};

export const FREIGHT_RULES = ["seller_both", "customer_in", "customer_both"] as const;
export type FreightRule = (typeof FREIGHT_RULES)[number];
export const FREIGHT_WORDS: Record<FreightRule, string> = {
  seller_both: "we pay the freight both ways",
  customer_in: "the customer pays the way in, we pay the way out",
  customer_both: "the customer pays both ways",
};

/** What a clause may leave out, once its evidence shows it. Common practice, no source. */
export const EXCLUSIONS = [
  "physical_damage",
  "bent_contacts",
  "liquid",
  "unauthorized_change",
  "altered_label",
] as const;
export type Exclusion = (typeof EXCLUSIONS)[number];
export const EXCLUSION_WORDS: Record<Exclusion, string> = {
  physical_damage: "physical damage",
  bent_contacts: "bent socket contacts",
  liquid: "liquid inside",
  unauthorized_change: "an unauthorized change",
  altered_label: "an altered label",
};

export const CLAUSE_FEES = ["no_fault_found", "restocking", "diagnostic", "not_returned"] as const;
export type ClauseFee = (typeof CLAUSE_FEES)[number];
export const CLAUSE_FEE_WORDS: Record<ClauseFee, string> = {
  no_fault_found: "no fault found",
  restocking: "restocking",
  diagnostic: "diagnostic",
  not_returned: "old part not returned",
};

export const GOODWILL_STATES = ["asked", "granted", "declined"] as const;
export type GoodwillState = (typeof GOODWILL_STATES)[number];

export const PREVIEW_STATES = ["running", "done", "cancelled", "failed"] as const;
export type PreviewState = (typeof PREVIEW_STATES)[number];

/** Bodies of law whose notice stands beside the terms. A country outside of them gets the general one. */
export const LAW_REGIONS = ["EU", "UK", "US", "AU", "other"] as const;
export type LawRegion = (typeof LAW_REGIONS)[number];

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
  /** Added to the ship day where the day of the start basis is not known. */
  deliveryGraceDays: number;
  dayRule: DayRule;
  /** DOA: a last day that is no working day of the site moves to the next that is. */
  rolls: boolean;
  /** Cover: days of a pause are added to its end. */
  clockStops: boolean;
  replacedRule: ReplacedRule;
  transferRule: TransferRule | null;
  remedies: Remedy[];
  dueBackDays: number | null;
  /** What is held for an advance replacement until the old part is back. */
  holdCents: number | null;
  freight: FreightRule | null;
  /** Working hours within which we answer. */
  responseHours: number | null;
  enduranceHours: number | null;
  /** Terabytes written, 10^12 bytes each. */
  enduranceTb: number | null;
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
