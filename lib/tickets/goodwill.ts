import { z } from "zod";
import { ok, refuse, type Result } from "../base/result";
import {
  OUTCOME_WORDS,
  REMEDIES,
  REMEDY_WORDS,
  type GoodwillState,
  type Outcome,
  type Remedy,
} from "../coverage/schema";

/** What stands in a letter and a form alike: euros with a point, never a cent lost to a fraction. */
export const showEuros = (cents: number): string => `${(cents / 100).toFixed(2)} EUR`;

/** "420", "420.50", "420,50", "€ 420": euros as people type them. "1.200" could mean two sums, so it is none. */
export function centsFrom(text: string): number | null {
  const plain = text.replace(/€|\bEUR\b|\s/gi, "");
  const [, euros, cents = ""] = /^(\d{1,7})(?:[.,](\d{1,2}))?$/.exec(plain) ?? [];
  return euros === undefined ? null : Number(euros) * 100 + Number(cents.padEnd(2, "0"));
}

const Limit = z.string({ error: "Say how much it may cost us." }).transform((text, at) => {
  const cents = centsFrom(text);
  if (cents === null)
    at.addIssue({ code: "custom", message: "Give the limit in euros, such as 420 or 420.50." });
  else if (cents === 0) at.addIssue({ code: "custom", message: "A limit of nothing grants nothing." });
  else if (cents > 10_000_000)
    at.addIssue({ code: "custom", message: "Above 100000 EUR is no goodwill; look at the figure again." });
  return cents ?? 0;
});

const REASON = "Say why, in ten characters or more: another person decides by these words.";
export const AskGoodwill = z.object({
  ticketId: z.uuid(),
  ticketUnitId: z.uuid(),
  reason: z.string({ error: REASON }).trim().min(10, REASON).max(2000, "Keep it under 2000 characters."),
  remedy: z.enum(REMEDIES, { error: "Choose the remedy you wish for." }),
});

const Answering = {
  goodwillId: z.uuid(),
  /** The newest decision that the manager has read. */
  decisionId: z.uuid(),
};
export const AnswerGoodwill = z.discriminatedUnion(
  "answer",
  [
    z.object({
      ...Answering,
      answer: z.literal("granted"),
      remedy: z.enum(REMEDIES, { error: "Choose the remedy you grant." }),
      limit: Limit,
      words: z.string().trim().max(2000, "Keep it under 2000 characters.").default(""),
      /** Write to the customer now; otherwise they learn it with the return's papers. */
      tell: z
        .union([z.boolean(), z.literal("on")])
        .transform((v) => v === true || v === "on")
        .default(false),
    }),
    z.object({
      ...Answering,
      answer: z.literal("declined"),
      words: z
        .string({ error: "Say why not: the one who asked has to tell the customer." })
        .trim()
        .min(3, "Say why not: the one who asked has to tell the customer.")
        .max(2000, "Keep it under 2000 characters."),
    }),
  ],
  { error: "Grant it or decline it." },
);

/** Goodwill is for a no, and for what no clause settles. Where the terms give, nothing is granted beside them. */
const OPEN_TO: readonly Outcome[] = ["not_covered", "needs_person"];

export type AskFacts = {
  serial: string;
  tied: boolean;
  outcome: Outcome | null;
  /** Whose ask for this unit waits. */
  waits: string | null;
  /** A grant by the newest decision that no RMA has used. */
  granted: readonly { ref: string; remedy: Remedy }[];
  onRma: string | null;
  wish: Remedy;
};

export function mayAsk(f: AskFacts): Result<undefined> {
  if (!f.tied) return refuse("rule", "Tie the unit first: goodwill is about a unit that a person has named.");
  if (f.outcome === null) return refuse("rule", `Take the coverage decision for ${f.serial} first.`);
  if (!OPEN_TO.includes(f.outcome))
    return refuse(
      "rule",
      `${f.serial} is ${OUTCOME_WORDS[f.outcome]}: authorize what the clause gives, no goodwill is needed.`,
    );
  if (f.onRma) return refuse("conflict", `${f.serial} is on ${f.onRma} already.`);
  if (f.waits)
    return refuse(
      "conflict",
      `${f.waits} has asked for ${f.serial} already, and a manager has not answered.`,
    );
  const same = f.granted.find((g) => g.remedy === f.wish);
  if (same)
    return refuse(
      "conflict",
      `${same.ref} grants ${REMEDY_WORDS[f.wish]} for ${f.serial} already. Authorize it.`,
    );
  return ok();
}

export type AnswerFacts = {
  serial: string;
  state: GoodwillState;
  askedBy: string;
  /** "granted by Anneke Sow on 12 Nov 2026, 11:24", of one that is answered. */
  answered: string;
  by: string;
  newest: { id: string; outcome: Outcome; headline: string };
  seen: string;
  answer: "granted" | "declined";
};

/** One answer, by another manager, who has read the newest decision. */
export function mayAnswer(f: AnswerFacts): Result<undefined> {
  if (f.state !== "asked") return refuse("conflict", `Somebody was first: it was ${f.answered}.`);
  if (f.askedBy === f.by)
    return refuse("rule", "Nobody answers their own ask. Another manager grants or declines it.");
  if (f.newest.id !== f.seen)
    return refuse(
      "stale",
      `${f.serial} was decided again since you read this: ${f.newest.headline} Read that, then answer.`,
      { details: { decisionId: f.newest.id } },
    );
  if (f.answer === "granted" && !OPEN_TO.includes(f.newest.outcome))
    return refuse(
      "rule",
      `${f.serial} is ${OUTCOME_WORDS[f.newest.outcome]} by the newest decision, so there is nothing to grant. Decline it and say so.`,
    );
  return ok();
}

export type Grant = {
  goodwillId: string;
  ref: string;
  decisionId: string;
  remedy: Remedy;
  limitCents: number;
  /** The RMA that carries it out. */
  usedBy: string | null;
};

/** The grant an RMA may go by: of the newest decision, for exactly this remedy, and not used yet. */
export function grantFor(
  line: { serial: string; decisionId: string; remedy: Remedy },
  grants: readonly Grant[],
): Result<Grant> {
  const now = grants.filter((g) => g.decisionId === line.decisionId);
  const fits = now.filter((g) => g.remedy === line.remedy);
  const free = fits.find((g) => g.usedBy === null);
  if (free) return ok(free);
  const { serial } = line;
  if (fits[0])
    return refuse("rule", `${fits[0].ref} was carried out by ${fits[0].usedBy}. Ask for goodwill anew.`);
  if (now[0])
    return refuse(
      "rule",
      `${now[0].ref} grants ${REMEDY_WORDS[now[0].remedy]} for ${serial}, not ${REMEDY_WORDS[line.remedy]}. Choose what was granted, or ask anew.`,
    );
  if (grants[0])
    return refuse(
      "rule",
      `${serial} was decided again after ${grants[0].ref}: a grant holds for the decision it was given on. Ask for goodwill anew.`,
    );
  return refuse(
    "rule",
    `${serial} is not covered. Decide again with new facts, or ask for goodwill: a manager who did not ask grants it.`,
  );
}

/** What the customer reads of a grant, in the portal and in the letter. Its limit is ours alone. */
export const exceptionLine = (serial: string, remedy: Remedy): string =>
  `We make an exception for you: ${REMEDY_WORDS[remedy]} for ${serial}`;

export const exceptionLetter = (serial: string, remedy: Remedy): string =>
  [
    `${exceptionLine(serial, remedy)}.`,
    "It is goodwill, outside the terms of our warranty, and it changes no right that you have by law.",
    "You need do nothing yet. What to do next comes with our next mail.",
  ].join("\n\n");

/** What we are about to do, as a customer gets it: that somebody asked a manager is ours alone. */
export const moveSeen = (waitingFor: string): string => (/goodwill/.test(waitingFor) ? "answer" : waitingFor);
