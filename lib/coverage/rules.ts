import { addDays, daysBetween } from "../base/civil";
import { periodWords } from "../base/period";
import { capital, showDay } from "../base/show";
import { EVIDENCE_FOR, type ClauseFact, type DecideInput, type Decision, type Reason } from "./schema";
import { clauseFor, windowsFor } from "./windows";

/** Changes whenever one input could get another answer. Stored with each decision. */
export const ENGINE = "2";

/** Faults that a clause may exclude, once the evidence shows them. */
const EXCLUDABLE: Record<string, string> = {
  bent_contacts: "bent_contacts",
  physical_damage: "physical_damage",
  liquid: "liquid",
};

type Draft = Omit<Decision, "engine" | "fees" | "windows">;

/**
 * The coverage decision for one unit or part, one fault and one day.
 *
 * Pure: the same input gives the same answer for ever, which is why the input is stored with it.
 * Days are civil days in the seller's zone; the last covered day counts in full.
 */
export function decide(input: DecideInput): Decision {
  const windows = windowsFor(input.sale, input.clauses, input.part, input.week);
  const draft = judge(input, windows);
  const ofCover = draft.outcome === "covered" || draft.outcome === "covered_doa";
  return { engine: ENGINE, ...draft, windows, fees: ofCover ? feesFor(input) : [] };
}

function judge(input: DecideInput, windows: Decision["windows"]): Draft {
  const { sale, claimOn, what } = input;
  const doa = windows.find((w) => w.kind === "doa");
  const cover = windows.find((w) => w.kind === "cover");
  const reasons: Reason[] = [];
  const evidenceWanted = missingEvidence(input);

  if (claimOn < sale.shippedOn) {
    const staff = `The claim of ${showDay(claimOn)} comes before the ship day ${showDay(sale.shippedOn)}; one of the two is wrong.`;
    return person(
      input,
      cover,
      [
        {
          rule: "claim_before_ship",
          clause: null,
          staff,
          customer:
            "The day we shipped it and the day you wrote do not fit together, so a person checks the order.",
        },
      ],
      [
        {
          fact: "ship_day",
          staff: "The right ship day or claim day.",
          customer: "The delivery note of this unit.",
        },
      ],
    );
  }
  if (input.readings.serialMatches === false) {
    return person(
      input,
      cover,
      [
        {
          rule: "serial_differs",
          clause: null,
          staff: `The log names ${input.readings.serial ?? "another serial"}, which is not the serial claimed.`,
          customer: "The log you sent is of another part than the one you chose, so a person looks at both.",
        },
      ],
      [
        {
          fact: "log_of_this_serial",
          staff: "A log of the claimed serial.",
          customer: "A log of the part you chose.",
        },
      ],
    );
  }
  const named = clauseFor(input.clauses, "cover", input.part.family, sale.condition);
  if (!cover && named && input.part.swappedOn) {
    const fitted = showDay(input.part.swappedOn);
    return person(
      input,
      cover,
      [
        {
          rule: "fitted_after_cover",
          clause: named.number,
          staff: `Clause ${named.number}, ${lower(named.title)}, had ended when this part was fitted on ${fitted}, and these terms give a part we fit no cover of its own.`,
          customer: `The first cover had ended when we fitted this part on ${fitted}, so a person looks at what was agreed then.`,
        },
      ],
      [
        {
          fact: "agreement",
          staff: "What was agreed when the part was fitted, or goodwill.",
          customer: "The note that came with this part.",
        },
      ],
    );
  }
  if (!cover) {
    const staff = `These terms have no clause for the ${input.part.family.replace("_", " ")}.`;
    return person(
      input,
      cover,
      [
        {
          rule: "no_clause",
          clause: null,
          staff,
          customer: "Your terms do not name this kind of part, so a person reads them with you.",
        },
      ],
      [
        {
          fact: "terms",
          staff: "A person's reading of the terms, or goodwill.",
          customer: "The offer or contract this part was sold under.",
        },
      ],
    );
  }

  const inDoa = doa !== undefined && claimOn <= doa.lastOn;
  const inCover = claimOn <= cover.lastOn;
  const active = inDoa ? doa : cover;
  const clause = input.clauses.find((c) => c.id === active.clauseId)!;
  reasons.push(dateReason(input, active, clause, inDoa || inCover));

  const hours = input.readings.powerOnHours;
  const limit = input.clauses.find((c) => c.id === cover.clauseId)?.enduranceHours ?? null;
  if (inCover && limit !== null && hours !== undefined) {
    const over = hours > limit;
    reasons.push({
      rule: "endurance",
      clause: cover.clauseNumber,
      staff: `The log shows ${thin(hours)} of ${thin(limit)} hours.`,
      customer: `Its log shows ${thin(hours)} hours; the clause covers ${thin(limit)}.`,
    });
    if (over && !inDoa)
      return no(input, cover, reasons, [
        {
          fact: "hours",
          staff: `A log of this serial under ${thin(limit)} h.`,
          customer: "A log of this drive that shows fewer hours.",
        },
      ]);
  }

  const excluded = EXCLUDABLE[input.faultClass];
  const exclusion = excluded
    ? input.clauses.find((c) => c.kind === "exclusion" && c.exclusion === excluded)
    : undefined;
  if ((inDoa || inCover) && exclusion) {
    if (input.established.includes(excluded!)) {
      reasons.push({
        rule: "exclusion_shown",
        clause: exclusion.number,
        staff: `Clause ${exclusion.number}, ${lower(exclusion.title)}: the evidence shows it.`,
        customer: `Clause ${exclusion.number} leaves out ${lower(exclusion.title)}, and the evidence shows it.`,
      });
      return no(
        input,
        exclusion,
        reasons,
        [
          {
            fact: "outbound_photo",
            staff: "Our photo from before shipping that shows the same damage.",
            customer: "If our own photo from before shipping shows it too, we decide again.",
          },
        ],
        cover.lastOn,
      );
    }
    const need = exclusion.evidence[0] ?? "photo of the damage";
    reasons.push({
      rule: "exclusion_open",
      clause: exclusion.number,
      staff:
        input.evidence.photos > 0
          ? `Clause ${exclusion.number} may apply (${lower(exclusion.title)}); a person must look at the photos and compare them with ours.`
          : `Clause ${exclusion.number} may apply (${lower(exclusion.title)}), and no ${need} is there to show it either way.`,
      customer: `We must see whether clause ${exclusion.number}, ${lower(exclusion.title)}, applies. We never assume it does.`,
    });
    return person(input, cover, reasons, [
      {
        fact: "evidence",
        staff: capital(`${need}, and ours from before shipping.`),
        customer: capital(`${need}, close enough to see it well.`),
      },
    ]);
  }

  if (!inDoa && !inCover) return no(input, cover, reasons, laterStart(input, cover));

  if (input.openRma) {
    reasons.push({
      rule: "open_rma",
      clause: null,
      staff: `${input.openRma} is open on this unit already.`,
      customer: `You already have ${input.openRma} for this part.`,
    });
  }
  return {
    outcome: inDoa ? "covered_doa" : "covered",
    headline: {
      staff: inDoa ? `Covered as dead on arrival: ${what}.` : `Covered: ${what}.`,
      customer: "You are covered.",
    },
    clauseNumber: active.clauseNumber,
    lastCoveredOn: active.lastOn,
    remedies: clause.remedies,
    reasons,
    wouldChange: exclusionsThatCould(input),
    evidenceWanted,
  };
}

const lower = (t: string) => t.charAt(0).toLowerCase() + t.slice(1);
const thin = (n: number) => n.toLocaleString("en-US").replace(/,/g, "\u00a0");

function dateReason(
  input: DecideInput,
  w: Decision["windows"][number],
  clause: ClauseFact,
  inside: boolean,
): Reason {
  const { claimOn } = input;
  const gap = Math.abs(daysBetween(claimOn, w.lastOn));
  const base = w.byFloor
    ? `we fitted it on ${showDay(input.part.swappedOn!)}, and a part we fit has at least its own floor`
    : input.part.swappedOn
      ? `we fitted it on ${showDay(input.part.swappedOn)}, so it has the rest of the first cover (${w.startWords})`
      : w.startWords;
  const when =
    gap === 0
      ? "on its last covered day"
      : `${gap} ${gap === 1 ? "day" : "days"} ${inside ? "before its end" : "after it"}`;
  return {
    rule: w.kind === "doa" ? "doa_window" : "cover_window",
    clause: clause.number,
    staff: `Clause ${clause.number}, ${lower(clause.title)}: ${base}; last covered day ${showDay(w.lastOn)}. The claim of ${showDay(claimOn)} came ${when}.`,
    customer: inside
      ? `It is covered to ${showDay(w.lastOn)} under clause ${clause.number} of your terms (${base}), and you wrote to us on ${showDay(claimOn)}.`
      : `Under our warranty it was covered to ${showDay(w.lastOn)} (clause ${clause.number}: ${base}), and you wrote to us on ${showDay(claimOn)}.`,
  };
}

function missingEvidence(input: DecideInput): string[] {
  const wanted = EVIDENCE_FOR[input.faultClass].map((e) => e.what);
  const isLog = (w: string) => /\blog\b/.test(w) && !/photo/.test(w);
  return wanted.filter((w) =>
    isLog(w) ? input.evidence.logs === 0 : input.evidence.photos + input.evidence.logs === 0,
  );
}

/** What start day would make the claim fall inside, computed by trying the days that could. */
function laterStart(input: DecideInput, cover: Decision["windows"][number]): Decision["wouldChange"] {
  const clause = input.clauses.find((c) => c.id === cover.clauseId)!;
  const changes: Decision["wouldChange"] = [];
  if (clause.startBasis === "delivered" && input.sale.deliveredOn === null) {
    // Months differ in length, so the day sought lies a few days to either side of the plain difference.
    let day = addDays(cover.startOn, Math.max(1, daysBetween(cover.lastOn, input.claimOn) - 4));
    for (let i = 0; i < 9; i++) {
      const again = windowsFor({ ...input.sale, deliveredOn: day }, input.clauses, input.part, input.week);
      if ((again.find((w) => w.kind === "cover")?.lastOn ?? "") >= input.claimOn) break;
      day = addDays(day, 1);
    }
    if (daysBetween(cover.startOn, day) <= 60)
      changes.push({
        fact: "delivery_proof",
        staff: `Proof of delivery on or after ${showDay(day)}.`,
        customer: `A delivery note that shows ${showDay(day)} or later.`,
      });
  }
  changes.push({
    fact: "earlier_report",
    staff: `A first report received on or before ${showDay(cover.lastOn)}.`,
    customer: `A mail or note that shows you told us by ${showDay(cover.lastOn)}.`,
  });
  return changes;
}

function exclusionsThatCould(input: DecideInput): Decision["wouldChange"] {
  const damage = input.clauses.find((c) => c.kind === "exclusion" && c.exclusion === "physical_damage");
  if (!damage) return [];
  return [
    {
      fact: "damage_found",
      staff: `A dock or bench photo that shows ${lower(damage.title)}; then clause ${damage.number}, and a person rules on it.`,
      customer: `If our bench finds ${lower(damage.title)}, a person looks again and writes to you first.`,
    },
  ];
}

function no(
  input: DecideInput,
  at: { clauseNumber?: string; number?: string; lastOn?: string },
  reasons: Reason[],
  wouldChange: Decision["wouldChange"],
  lastOn?: string,
): Draft {
  return {
    outcome: "not_covered",
    headline: { staff: `Not covered: ${input.what}.`, customer: "This is not covered under our warranty." },
    clauseNumber: at.clauseNumber ?? at.number ?? null,
    lastCoveredOn: lastOn ?? at.lastOn ?? null,
    remedies: [],
    reasons,
    wouldChange,
    evidenceWanted: missingEvidence(input),
  };
}

function person(
  input: DecideInput,
  cover: Decision["windows"][number] | undefined,
  reasons: Reason[],
  wouldChange: Decision["wouldChange"],
): Draft {
  return {
    outcome: "needs_person",
    headline: { staff: `Needs a person: ${input.what}.`, customer: "A person is looking at this." },
    clauseNumber: cover?.clauseNumber ?? null,
    lastCoveredOn: cover?.lastOn ?? null,
    remedies: cover ? (input.clauses.find((c) => c.id === cover.clauseId)?.remedies ?? []) : [],
    reasons,
    wouldChange,
    evidenceWanted: missingEvidence(input),
  };
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
  input: Pick<DecideInput, "sale" | "clauses" | "week"> & { family: string; swapOn: string },
) {
  const w = windowsFor(
    input.sale,
    input.clauses,
    { family: input.family, swappedOn: input.swapOn },
    input.week,
  ).find((x) => x.kind === "cover");
  if (!w) return null;
  const floor = clauseFor(input.clauses, "replaced_part", input.family, input.sale.condition);
  const words = w.byFloor
    ? `covered to ${showDay(w.lastOn)}: ${periodWords(floor?.period ?? "")} from the swap, longer than the rest of the first cover`
    : `covered to ${showDay(w.lastOn)}: the rest of the first cover (${w.startWords})`;
  return { lastCoveredOn: w.lastOn, byFloor: w.byFloor, words };
}
