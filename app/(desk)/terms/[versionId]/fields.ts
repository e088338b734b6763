import {
  CLAUSE_FEES,
  CLAUSE_FEE_WORDS,
  EXCLUSIONS,
  EXCLUSION_WORDS,
  FREIGHT_RULES,
  FREIGHT_WORDS,
  REMEDIES,
  REMEDY_WORDS,
  REPLACED_RULES,
  REPLACED_WORDS,
  START_BASES,
  TRANSFER_RULES,
  TRANSFER_WORDS,
  type ClauseFact,
  type ClauseKind,
} from "@/lib/coverage/schema";
import { inOrder } from "@/lib/coverage/terms";
import { BASIS_WORDS } from "@/lib/coverage/termwords";
import { capital } from "@/lib/base/show";
import { CONDITIONS, FAMILIES, FAMILY_WORDS } from "@/lib/ledger/schema";

export type Options = { value: string; label: string }[];
const options = <T extends string>(of: readonly T[], words: (value: T) => string): Options =>
  of.map((value) => ({ value, label: capital(words(value)) }));

/** What a clause's form lets choose from. Made on the server, so that the lists do not travel as code. */
export const choices = {
  families: options(FAMILIES, (f) => FAMILY_WORDS[f]),
  condition: [{ value: "", label: "Any" }, ...options(CONDITIONS, (c) => c)],
  startBasis: [{ value: "", label: "Choose a day" }, ...options(START_BASES, (b) => BASIS_WORDS[b])],
  dayRule: [
    { value: "event_day_excluded", label: "Not counted" },
    { value: "start_day_included", label: "Counted" },
  ],
  remedies: [{ value: "", label: "None" }, ...options(REMEDIES, (r) => REMEDY_WORDS[r])],
  freight: [{ value: "", label: "Not said" }, ...options(FREIGHT_RULES, (f) => FREIGHT_WORDS[f])],
  replacedRule: options(REPLACED_RULES, (r) => REPLACED_WORDS[r]),
  transferRule: [{ value: "", label: "Choose a rule" }, ...options(TRANSFER_RULES, (t) => TRANSFER_WORDS[t])],
  exclusion: [{ value: "", label: "Choose one" }, ...options(EXCLUSIONS, (e) => EXCLUSION_WORDS[e])],
  feeKind: [{ value: "", label: "Choose one" }, ...options(CLAUSE_FEES, (f) => CLAUSE_FEE_WORDS[f])],
} satisfies Record<string, Options>;
export type Choices = typeof choices;

export type Values = Record<string, string | string[]>;
const amount = (cents: number | null) => (cents === null ? "" : (cents / 100).toFixed(2));
const digits = (n: number | null) => (n === null ? "" : String(n));

/** Where clauses of a kind usually stand, for the number of one more. Common practice, no source. */
const CHAPTER: Record<ClauseKind, number> = {
  doa: 2,
  cover: 3,
  replaced_part: 5,
  transfer: 6,
  exclusion: 7,
  fee: 8,
};

function nextNumber(kind: ClauseKind, all: readonly ClauseFact[]): string {
  const last = inOrder(all.filter((c) => c.kind === kind)).at(-1);
  const steps = (last?.number ?? `${CHAPTER[kind]}.0`).split(".");
  const taken = new Set(all.map((c) => c.number));
  for (let n = Number(steps.at(-1)) + 1; ; n++) {
    const number = [...steps.slice(0, -1), n].join(".");
    if (!taken.has(number)) return number;
  }
}

/** What the form shows before anything is typed: the clause as it is, or a new one of its kind. */
export function firstValues(kind: ClauseKind, c: ClauseFact | undefined, all: readonly ClauseFact[]): Values {
  return {
    number: c?.number ?? nextNumber(kind, all),
    title: c?.title ?? "",
    parts: c && c.families.length > 0 ? "named" : c ? "every" : kind === "cover" ? "named" : "every",
    "families[]": c?.families ?? [],
    condition: c?.condition ?? "",
    period: c?.period ?? "",
    startBasis: c?.startBasis ?? "",
    deliveryGraceDays: c && c.deliveryGraceDays > 0 ? String(c.deliveryGraceDays) : "",
    dayRule: c?.dayRule ?? "event_day_excluded",
    rolls: (c?.rolls ?? true) ? "on" : "",
    clockStops: (c?.clockStops ?? true) ? "on" : "",
    replacedRule: c?.replacedRule ?? "later_of_both",
    transferRule: c?.transferRule ?? "",
    "remedies[]": c?.remedies ?? [],
    dueBackDays: digits(c?.dueBackDays ?? null),
    holdCents: amount(c?.holdCents ?? null),
    freight: c?.freight ?? "",
    responseHours: digits(c?.responseHours ?? null),
    enduranceHours: digits(c?.enduranceHours ?? null),
    enduranceTb: digits(c?.enduranceTb ?? null),
    exclusion: c?.exclusion ?? "",
    evidence: c?.evidence.join("\n") ?? "",
    feeKind: c?.feeKind ?? "",
    feeCents: amount(c?.feeCents ?? null),
    words: c?.words ?? "",
  };
}
