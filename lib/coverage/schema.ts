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

export const OUTCOME_WORDS: Record<Outcome, string> = {
  covered: "covered",
  covered_doa: "covered as dead on arrival",
  not_covered: "not covered",
  needs_person: "needs a person",
};

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

/** As the customer is told it. */
export const FREIGHT_TOLD: Record<FreightRule, string> = {
  seller_both: "We pay the freight both ways.",
  customer_in: "You pay the way to us, we pay the way back.",
  customer_both: "You pay the freight both ways.",
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
  /** Set up at the customer's. */
  installedOn: string | null;
  condition: string;
  buyerKind: "business" | "consumer" | "unknown";
  country: string;
  pauses: { from: string; to: string }[];
  /** Given on to another company, in order, with the day of the written notice. */
  transfers: { on: string; noticedOn: string | null }[];
};

export type PartFact = {
  family: string;
  /** Family of the unit it was sold in; none when it was sold by itself. */
  within: string | null;
  /** Days on which its place was filled anew under this sale, in order: empty for what was shipped. */
  swaps: string[];
  /** False: it stands here but was sold elsewhere, under a sale that the one who asks may not see. */
  originKnown: boolean;
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
  /** Cover ended early on this day, because the unit was given on. */
  cutOn: string | null;
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
  /** Day of first receipt in the seller's zone. */
  claimOn: string;
  /** What is there to see: kinds of evidence that came. */
  evidence: { photos: number; logs: number };
  /** Exclusions that a person found shown by the evidence, and those a person looked for and ruled out. */
  established: string[];
  ruledOut: string[];
  readings: {
    powerOnHours?: number;
    /** Bytes written over its life. */
    bytesWritten?: number;
    serial?: string;
    /** The log names the serial claimed. Left out: it names none. */
    serialMatches?: boolean;
  };
  /** Earlier claims of this unit under the same sale, oldest first. */
  earlier: { ticket: number; on: string; outcome: Outcome }[];
  /** An RMA already open on this unit. */
  openRma: string | null;
  week: { workdays: number[]; holidays: string[] };
};

export const REASON_RULES = [
  "claim_before_ship",
  "serial_differs",
  "sold_elsewhere",
  "fitted_after_cover",
  "no_clause",
  "given_on_unnamed",
  "given_on_first_buyer",
  "given_on_notice_open",
  "given_on_not_noticed",
  "given_on_noticed",
  "given_on_follows",
  "doa_window",
  "cover_window",
  "endurance",
  "endurance_unproven",
  "exclusion_shown",
  "exclusion_unproven",
  "exclusion_open",
  "exclusion_ruled_out",
  "earlier_claims",
  "open_rma",
] as const;
export type ReasonRule = (typeof REASON_RULES)[number];

/** What a reason stands on. Days are civil days; numbers carry their unit in their name. */
export type ReasonFacts = {
  rule: ReasonRule;
  /** The clause it is by, as people cite it. */
  clause: string | null;
  /** Where the facts are from. */
  source: string;
  dates: Record<string, string>;
  numbers: Record<string, number>;
  words: Record<string, string>;
  /** The evidence that shows it, or is missing. */
  evidence: string[];
};
/** A reason with its one plain sentence for staff and one for the customer. */
export type Reason = ReasonFacts & { staff: string; customer: string };

/** One fact put otherwise. Applied to the input it gives another answer: see rules.applyChange. */
export type FactPatch = {
  sale?: Partial<Pick<SaleFact, "shippedOn" | "deliveredOn" | "invoicedOn" | "installedOn">>;
  pause?: { from: string; to: string };
  noticedOn?: string;
  claimOn?: string;
  established?: string;
  ruledOut?: string;
  photos?: number;
  readings?: DecideInput["readings"];
};
export type Change = {
  fact: string;
  /** None: no single fact settles it, a person must. */
  patch: FactPatch | null;
  /** What the decision would be then. */
  to: Outcome | null;
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
  /** What goes with the remedies: days to send the old part back, what is held, freight, our answer. */
  handling: {
    dueBackDays: number | null;
    holdCents: number | null;
    freight: FreightRule | null;
    responseHours: number | null;
  };
  reasons: Reason[];
  wouldChange: Change[];
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
  source: "as_built" | "swap" | "moved";
  /** Days on which this place was filled anew, up to this part. */
  swaps: string[];
  /** The sale whose terms cover it, when it was moved here from another system. */
  coverSaleLineId: string | null;
  /** The day it came from another customer, and that of the written notice. */
  givenOn: string | null;
  noticedOn: string | null;
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
  pauses: { from: string; to: string }[];
  transfers: { on: string; noticedOn: string | null }[];
  /** Units that no clause gives a window: a person reads their terms. */
  unread: string[];
  tree: TreePart[];
};
