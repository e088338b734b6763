import { periodWords } from "../base/period";
import { showDay } from "../base/show";
import { changesFor } from "./changes";
import { exclusionsFor, limitsOf } from "./limits";
import { lower, reason } from "./reasons";
import {
  EVIDENCE_FOR,
  EXCLUSION_WORDS,
  type ClauseFact,
  type CoverWindow,
  type DecideInput,
  type Decision,
  type FactPatch,
  type Outcome,
  type Reason,
} from "./schema";
import { clauseFor, givenOn, windowsFor } from "./windows";

/** Changes whenever one input could get another answer. Stored with each decision. */
export const ENGINE = "3";

/** What a decision is before it is said what would change it. */
export type Judgement = Omit<Decision, "engine" | "fees" | "windows" | "wouldChange" | "handling"> & {
  active: CoverWindow | null;
};

/**
 * The coverage decision for one unit or part, one fault and one day.
 *
 * Pure: the same input gives the same answer for ever, which is why the input is stored with it.
 * Days are civil days in the seller's zone; the last covered day counts in full. What would change
 * the answer is found by putting one fact otherwise and deciding again, never from a list.
 */
export function decide(input: DecideInput): Decision {
  const windows = windowsFor(input.sale, input.clauses, input.part, input.week);
  const { active, ...answer } = judge(input, windows);
  const clause = active ? input.clauses.find((c) => c.id === active.clauseId) : undefined;
  const gives = covers(answer.outcome);
  return {
    engine: ENGINE,
    ...answer,
    windows,
    fees: gives ? feesFor(input) : [],
    handling: {
      dueBackDays: gives ? (clause?.dueBackDays ?? null) : null,
      holdCents: gives && input.sale.buyerKind === "business" ? (clause?.holdCents ?? null) : null,
      // Freight of a consumer's faulty unit is the seller's; so it is for a buyer we do not know.
      freight: !gives
        ? null
        : input.sale.buyerKind === "business"
          ? (clause?.freight ?? null)
          : "seller_both",
      responseHours: clause?.responseHours ?? null,
    },
    wouldChange: changesFor(input, answer, windows, (patch) => outcomeWith(input, patch)),
  };
}

export const covers = (outcome: Outcome) => outcome === "covered" || outcome === "covered_doa";

/** The input with one fact put otherwise. */
export function applyChange(input: DecideInput, patch: FactPatch): DecideInput {
  const { sale } = input;
  const open = sale.transfers.findLastIndex((t) => t.noticedOn === null);
  return {
    ...input,
    sale: {
      ...sale,
      ...patch.sale,
      pauses: patch.pause ? [...sale.pauses, patch.pause] : sale.pauses,
      transfers: patch.noticedOn
        ? sale.transfers.map((t, i) => (i === open ? { ...t, noticedOn: patch.noticedOn! } : t))
        : sale.transfers,
    },
    claimOn: patch.claimOn ?? input.claimOn,
    established: patch.established
      ? [...new Set([...input.established, patch.established])]
      : input.established.filter((x) => x !== patch.ruledOut),
    ruledOut: patch.ruledOut
      ? [...new Set([...input.ruledOut, patch.ruledOut])]
      : input.ruledOut.filter((x) => x !== patch.established),
    evidence: {
      ...input.evidence,
      photos: input.evidence.photos + (patch.photos ?? 0),
    },
    readings: patch.readings ?? input.readings,
  };
}

function outcomeWith(input: DecideInput, patch: FactPatch): Outcome {
  const put = applyChange(input, patch);
  return judge(put, windowsFor(put.sale, put.clauses, put.part, put.week)).outcome;
}

/** True when either of the two is past its limit: whichever is reached first counts. */
const pastLimits = (readings: DecideInput["readings"], clause: ClauseFact | null | undefined) => {
  const { limitHours, limitBytes } = limitsOf(clause);
  return (
    (limitHours !== null && (readings.powerOnHours ?? 0) > limitHours) ||
    (limitBytes !== null && (readings.bytesWritten ?? 0) > limitBytes)
  );
};

const aboutLog = (need: string) => /\b(log|read-out)\b/.test(need) && !/photo/.test(need);
const hasEvidence = (input: DecideInput, need: string) =>
  aboutLog(need) ? input.evidence.logs > 0 : input.evidence.photos > 0;

function judge(input: DecideInput, windows: CoverWindow[]): Judgement {
  const { sale, claimOn, part } = input;
  const doa = windows.find((w) => w.kind === "doa") ?? null;
  const cover = windows.find((w) => w.kind === "cover") ?? null;
  const person = (reasons: Reason[], at: CoverWindow | null = cover) =>
    answer(input, "needs_person", at, reasons);

  if (claimOn < sale.shippedOn)
    return person([
      reason("claim_before_ship", {
        source: "the ledger's ship day and the record's first receipt",
        dates: { claimOn, shippedOn: sale.shippedOn },
      }),
    ]);
  // A log of another drive raises a question only while there is cover to ask about.
  const daysOver = windows.length > 0 && !windows.some((w) => claimOn <= w.lastOn);
  if (input.readings.serialMatches === false && !daysOver)
    return person([
      reason("serial_differs", { source: "the log", words: { logSerial: input.readings.serial ?? "" } }),
    ]);
  if (!part.originKnown) return person([reason("sold_elsewhere", {})]);

  const reasons: Reason[] = [];
  const given = givenOn(sale, input.clauses, part, input.week, claimOn).filter((g) => g.on < claimOn);
  for (const g of given) {
    const r = reason(`given_on_${g.state}`, {
      clause: g.clause?.number,
      source: "the ledger's note of it",
      dates: { givenOn: g.on, noticedOn: g.noticedOn, noticeBy: g.noticeBy },
      words: { title: g.clause?.title ?? "" },
    });
    reasons.push(r);
    // Where the days are over anyway, no notice helps: the days decide.
    const over = !windowsFor({ ...sale, transfers: [] }, input.clauses, part, input.week).some(
      (w) => claimOn <= w.lastOn,
    );
    if (!over && (g.state === "unnamed" || g.state === "notice_open")) return person(reasons);
    if (!over && (g.state === "first_buyer" || g.state === "not_noticed"))
      return answer(input, "not_covered", cover ?? doa, reasons);
  }

  const named = clauseFor(input.clauses, "cover", part, sale.condition);
  const inDoa = doa !== null && claimOn <= doa.lastOn;
  // Terms that give the first days and nothing after, "as is": then their window decides.
  const asIs = doa !== null && !input.clauses.some((c) => c.kind === "cover");
  if (!cover && !inDoa && !asIs) {
    const fittedOn = part.swaps.at(-1);
    if (named && fittedOn)
      return person([
        reason("fitted_after_cover", {
          clause: named.number,
          source: "the as-built tree",
          dates: { fittedOn },
          words: { title: named.title },
        }),
      ]);
    return person([
      reason("no_clause", { source: "the terms", words: { family: part.family.replace("_", " ") } }),
    ]);
  }

  const inCover = cover !== null && claimOn <= cover.lastOn;
  const active = (inDoa ? doa : (cover ?? doa))!;
  reasons.push(dateReason(input, active));
  if (!inDoa && !inCover) return answer(input, "not_covered", active, reasons);

  const clause = input.clauses.find((c) => c.id === cover?.clauseId);
  const { limitHours, limitBytes } = limitsOf(clause);
  const { powerOnHours: hours, bytesWritten: bytes, serialMatches } = input.readings;
  const read = (limitHours !== null && hours !== undefined) || (limitBytes !== null && bytes !== undefined);
  if (inCover && read) {
    const past = pastLimits(input.readings, clause);
    reasons.push(
      reason("endurance", {
        clause: clause?.number,
        source: "the log",
        numbers: { hours, limitHours, bytes, limitBytes },
        words: { log: serialMatches === true ? "The log of this serial" : "A log that names no serial" },
      }),
    );
    if (past && !inDoa && cover) {
      if (serialMatches === true) return answer(input, "not_covered", cover, reasons);
      return person([
        ...reasons.slice(0, -1),
        reason("endurance_unproven", { clause: clause?.number, source: "the log" }),
      ]);
    }
  }

  // What is shown comes before what is only asked: an open question never hides an answer.
  const exclusions = exclusionsFor(input).sort(
    (a, b) => Number(input.established.includes(b.name)) - Number(input.established.includes(a.name)),
  );
  for (const { name, clause, asked } of exclusions) {
    const facts = {
      clause: clause.number,
      source: "the evidence on record",
      words: { title: clause.title, exclusion: name },
      evidence: clause.evidence,
      numbers: { photos: input.evidence.photos, logs: input.evidence.logs },
    };
    if (input.ruledOut.includes(name)) {
      reasons.push(reason("exclusion_ruled_out", facts));
    } else if (input.established.includes(name)) {
      const need = clause.evidence[0] ?? "photo of the damage";
      if (!hasEvidence(input, need))
        return person([...reasons, reason("exclusion_unproven", { ...facts, evidence: [need] })]);
      return answer(
        input,
        "not_covered",
        cover,
        [...reasons, reason("exclusion_shown", facts)],
        clause.number,
      );
    } else if (asked) {
      const need = clause.evidence[0] ?? "photo of the damage";
      return person([...reasons, reason("exclusion_open", { ...facts, evidence: [need] })]);
    }
  }

  if (input.earlier.length > 0)
    reasons.push(
      reason("earlier_claims", {
        source: "the record",
        dates: { lastOn: input.earlier.at(-1)!.on },
        numbers: { count: input.earlier.length },
        words: { list: input.earlier.map((e) => `ticket ${e.ticket} of ${showDay(e.on)}`).join(", ") },
      }),
    );
  if (input.openRma)
    reasons.push(reason("open_rma", { source: "the record", words: { rma: input.openRma } }));
  return answer(input, inDoa ? "covered_doa" : "covered", active, reasons);
}

function answer(
  input: DecideInput,
  outcome: Outcome,
  at: CoverWindow | null,
  reasons: Reason[],
  clauseNumber?: string,
): Judgement {
  const head = {
    covered: ["Covered", "You are covered."],
    covered_doa: ["Covered as dead on arrival", "You are covered."],
    not_covered: ["Not covered", "This is not covered under our warranty."],
    needs_person: ["Needs a person", "A person is looking at this."],
  }[outcome] as [string, string];
  const clause = at ? input.clauses.find((c) => c.id === at.clauseId) : undefined;
  return {
    outcome,
    headline: { staff: `${head[0]}: ${input.what}.`, customer: head[1] },
    clauseNumber: clauseNumber ?? at?.clauseNumber ?? null,
    lastCoveredOn: at?.lastOn ?? null,
    remedies: outcome === "not_covered" ? [] : (clause?.remedies ?? []),
    reasons,
    evidenceWanted: missingEvidence(input),
    active: at,
  };
}

function dateReason(input: DecideInput, w: CoverWindow): Reason {
  const swappedOn = input.part.swaps.at(-1);
  const base = w.byFloor
    ? `we fitted it on ${showDay(swappedOn!)}, and a part we fit has at least its own floor`
    : swappedOn
      ? `we fitted it on ${showDay(swappedOn)}, so it has the rest of the first cover (${w.startWords})`
      : w.startWords;
  return reason(w.kind === "doa" ? "doa_window" : "cover_window", {
    clause: w.clauseNumber,
    source: "the ledger's days and the clause",
    dates: {
      claimOn: input.claimOn,
      startOn: w.startOn,
      lastOn: w.lastOn,
      cutOn: w.cutOn,
      swappedOn: swappedOn ?? null,
    },
    words: { title: w.clauseTitle, base },
  });
}

function missingEvidence(input: DecideInput): string[] {
  return EVIDENCE_FOR[input.faultClass]
    .map((e) => e.what)
    .filter((w) =>
      aboutLog(w) ? input.evidence.logs === 0 : input.evidence.photos + input.evidence.logs === 0,
    );
}

/** Fees that may apply, told before. A consumer, or a buyer we do not know, never pays one on a fault. */
function feesFor(input: DecideInput): Decision["fees"] {
  if (input.sale.buyerKind !== "business") return [];
  return input.clauses
    .filter((c) => c.kind === "fee" && c.feeKind !== null && c.feeCents !== null)
    .map((c) => ({ kind: c.feeKind!, cents: c.feeCents!, words: c.words }));
}

/** The last covered day that a part fitted today would have, with the sentence for it. */
export function inherited(
  input: Pick<DecideInput, "sale" | "clauses" | "week"> & {
    part: Pick<DecideInput["part"], "family" | "within" | "swaps">;
    swapOn: string;
  },
) {
  const part = { ...input.part, swaps: [...input.part.swaps, input.swapOn], originKnown: true };
  const w = windowsFor(input.sale, input.clauses, part, input.week).find((x) => x.kind === "cover");
  if (!w) return null;
  const floor = clauseFor(input.clauses, "replaced_part", part, input.sale.condition);
  const words = w.byFloor
    ? `covered to ${showDay(w.lastOn)}: ${periodWords(floor?.period ?? "")} from the swap, longer than the rest of the first cover`
    : `covered to ${showDay(w.lastOn)}: the rest of the first cover (${w.startWords})`;
  return { lastCoveredOn: w.lastOn, byFloor: w.byFloor, words };
}

/** Words of an exclusion, also of one that a newer list no longer has. */
export const exclusionWords = (name: string): string =>
  (EXCLUSION_WORDS as Record<string, string>)[name] ?? lower(name.replaceAll("_", " "));

/** Inputs as an earlier engine stored them, in today's shape: what it did not know is left as unknown. */
export function readInputs(stored: unknown): DecideInput {
  const old = stored as DecideInput & { part: { swappedOn?: string | null } };
  const clause = (c: ClauseFact): ClauseFact => ({
    ...c,
    rolls: c.rolls ?? true,
    clockStops: c.clockStops ?? true,
    replacedRule: c.replacedRule ?? "later_of_both",
    transferRule: c.transferRule ?? null,
    holdCents: c.holdCents ?? null,
    freight: c.freight ?? null,
    responseHours: c.responseHours ?? null,
    enduranceTb: c.enduranceTb ?? null,
  });
  return {
    ...old,
    clauses: old.clauses.map(clause),
    sale: { ...old.sale, installedOn: old.sale.installedOn ?? null, transfers: old.sale.transfers ?? [] },
    part: {
      family: old.part.family,
      within: old.part.within ?? null,
      swaps: old.part.swaps ?? (old.part.swappedOn ? [old.part.swappedOn] : []),
      originKnown: old.part.originKnown ?? true,
    },
    ruledOut: old.ruledOut ?? [],
    earlier: old.earlier ?? [],
  };
}
