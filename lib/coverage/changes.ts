import { addDays, daysBetween } from "../base/civil";
import { capital, showDay } from "../base/show";
import { lower, terabytes, thin } from "./reasons";
import { exclusionsFor, limitsOf } from "./limits";
import type { Change, CoverWindow, DecideInput, Decision, FactPatch, Outcome } from "./schema";
import { basisFact, clauseFor, givenOn } from "./windows";

type Try = (patch: FactPatch) => Outcome;
const gives = (o: Outcome) => o === "covered" || o === "covered_doa";
/** How long after the ship day a proof of delivery can be believed. Common practice, no source. */
const WITHIN_DAYS = 60;
/** The longest pause that nobody may have noted. Common practice, no source. */
const PAUSE_DAYS = 30;

/**
 * What would change the decision. Each fact is put otherwise and decided again; it is told only when
 * the answer is another one then. Days are searched for, so "after 3 March" is the first day that does.
 */
export function changesFor(
  input: DecideInput,
  answer: Pick<Decision, "outcome" | "reasons">,
  windows: CoverWindow[],
  outcomeWith: Try,
): Change[] {
  const found: Change[] = [];
  const add = (fact: string, patch: FactPatch, staff: string, customer: string) => {
    const to = outcomeWith(patch);
    if (to === answer.outcome || (gives(to) && gives(answer.outcome))) return;
    found.push({ fact, patch, to, staff, customer });
  };
  const by = (fact: string, staff: string, customer: string) =>
    found.push({ fact, patch: null, to: null, staff, customer });
  const rule = answer.reasons.at(-1)?.rule;
  const cover = windows.find((w) => w.kind === "cover") ?? null;

  switch (rule) {
    case "claim_before_ship":
      add(
        "ship_day",
        { sale: { shippedOn: input.claimOn, deliveredOn: null, invoicedOn: null, installedOn: null } },
        `A ship day on or before ${showDay(input.claimOn)}, shown by the order.`,
        "The delivery note of this unit.",
      );
      break;
    case "serial_differs":
      add(
        "log_of_this_serial",
        { readings: { serialMatches: true } },
        "A log of the claimed serial.",
        "A log of the part you chose.",
      );
      break;
    case "sold_elsewhere":
      by(
        "first_sale",
        "The sale it came under, read by a person of the desk.",
        "The invoice it first came with, if you have it.",
      );
      break;
    case "fitted_after_cover":
      by(
        "agreement",
        "What was agreed when the part was fitted, or goodwill.",
        "The note that came with this part.",
      );
      break;
    case "no_clause":
      by(
        "terms",
        "A person's reading of the terms, or goodwill.",
        "The offer or contract this part was sold under.",
      );
      break;
    case "given_on_unnamed":
      by(
        "agreement_on_transfer",
        "What was agreed about giving it on, read by a person.",
        "The paper by which it was given on to you.",
      );
      break;
    case "exclusion_open":
    case "exclusion_unproven":
      aboutExclusion(input, answer, add);
      break;
    case "exclusion_shown": {
      const { exclusion } = answer.reasons.at(-1)!.words;
      add(
        "outbound_photo",
        { ruledOut: exclusion },
        "Our photo from before shipping that shows the same damage.",
        "If our own photo from before shipping shows it too, we decide again.",
      );
      break;
    }
    case "endurance":
    case "endurance_unproven":
      if (!gives(answer.outcome)) aboutUse(input, cover, add);
      break;
    default:
      break;
  }
  if (rule?.startsWith("given_on") && rule !== "given_on_unnamed") aboutNotice(input, add);
  if (answer.outcome === "not_covered" && (rule === "cover_window" || rule?.startsWith("given_on")))
    aboutDays(input, cover, outcomeWith, add);
  if (gives(answer.outcome)) aboutFindings(input, cover, add);
  else if (found.length === 0)
    by(
      "goodwill",
      "No single fact; goodwill, which a manager may grant.",
      "No single paper or day that we can name. Write to us and a person looks at all of it.",
    );
  return found;
}

type Add = (fact: string, patch: FactPatch, staff: string, customer: string) => void;

function aboutExclusion(input: DecideInput, answer: Pick<Decision, "reasons">, add: Add) {
  const last = answer.reasons.at(-1)!;
  const name = last.words.exclusion!;
  const need = last.evidence[0] ?? "photo of the damage";
  const title = lower(last.words.title!);
  const seen = input.evidence.photos > 0;
  add(
    "exclusion_ruled_out",
    { ruledOut: name },
    seen
      ? `A person's finding that the photos do not show ${title}, or that ours from before shipping show it too.`
      : capital(`${need} that does not show ${title}, or ours from before shipping that shows it too.`),
    seen ? "A person's look at your photos beside ours." : capital(`${need}, close enough to see it well.`),
  );
  add(
    "exclusion_shown",
    { established: name, photos: seen ? 0 : 1 },
    capital(`${need} that shows ${title} which ours from before shipping does not.`),
    `If they show ${title} that was not there when we shipped, clause ${last.clause} applies; you hear from us first.`,
  );
}

function aboutUse(input: DecideInput, cover: CoverWindow | null, add: Add) {
  const clause = input.clauses.find((c) => c.id === cover?.clauseId);
  const { limitHours, limitBytes } = limitsOf(clause);
  const limits = [
    limitHours === null ? null : `${thin(limitHours)} h`,
    limitBytes === null ? null : `${terabytes(limitBytes)} TB`,
  ].filter((x) => x !== null);
  add(
    "use",
    {
      readings: {
        serialMatches: true,
        ...(limitHours === null ? {} : { powerOnHours: limitHours }),
        ...(limitBytes === null ? {} : { bytesWritten: limitBytes }),
      },
    },
    `A log of this serial at or under ${limits.join(" and ")}.`,
    "A log of this drive that shows less use.",
  );
  if (input.readings.serialMatches !== true)
    add(
      "log_names_serial",
      { readings: { ...input.readings, serialMatches: true } },
      "The same figures in a log that names this serial.",
      "A log that says which drive it is of.",
    );
}

function aboutNotice(input: DecideInput, add: Add) {
  const open = givenOn(input.sale, input.clauses, input.part, input.week, input.claimOn)
    .filter((g) => g.on < input.claimOn && g.noticedOn === null && g.clause?.transferRule === "with_notice")
    .at(-1);
  if (!open) return;
  const day = open.noticeBy ?? input.claimOn;
  const by = open.noticeBy ? ` dated ${showDay(day)} or before` : "";
  add(
    "transfer_notice",
    { noticedOn: open.noticeBy && open.noticeBy < input.claimOn ? open.noticeBy : day },
    `Written notice of giving it on${by}.`,
    `A letter or mail that told us it was given on${by}.`,
  );
}

/** Days that would bring the claim inside: a later start, a pause, an earlier report. */
function aboutDays(input: DecideInput, cover: CoverWindow | null, outcomeWith: Try, add: Add) {
  if (!cover) return;
  const clause = clauseFor(input.clauses, "cover", input.part, input.sale.condition);
  const fact = clause ? basisFact(clause) : null;
  if (fact && input.sale[fact] === null) {
    const wins = (day: string) => gives(outcomeWith({ sale: { [fact]: day } }));
    const day = firstDay(cover.startOn, addDays(input.sale.shippedOn, WITHIN_DAYS), wins);
    const name = { deliveredOn: "delivery", invoicedOn: "the invoice day", installedOn: "setting it up" }[
      fact
    ];
    const paper = {
      deliveredOn: "delivery note",
      invoicedOn: "invoice",
      installedOn: "note of setting it up",
    }[fact];
    if (day)
      add(
        { deliveredOn: "delivery_proof", invoicedOn: "invoice_proof", installedOn: "installation_proof" }[
          fact
        ],
        { sale: { [fact]: day } },
        `Proof of ${name} on or after ${showDay(day)}.`,
        capital(`${/^[aeiou]/.test(paper) ? "an" : "a"} ${paper} that shows ${showDay(day)} or later.`),
      );
  }
  if (clause?.clockStops && cover.cutOn === null) {
    const short = daysBetween(cover.lastOn, input.claimOn);
    if (short <= PAUSE_DAYS) {
      const pause = { from: addDays(cover.lastOn, 1 - short), to: cover.lastOn };
      add(
        "pause",
        { pause },
        `A pause of at least ${short} ${short === 1 ? "day" : "days"} within its cover that the ledger does not know, such as time at our bench.`,
        `A note that we had it for ${short} ${short === 1 ? "day" : "days"} or more while it was covered.`,
      );
    }
  }
  add(
    "earlier_report",
    { claimOn: cover.lastOn },
    `A first report received on or before ${showDay(cover.lastOn)}.`,
    `A mail or note that shows you told us by ${showDay(cover.lastOn)}.`,
  );
}

/** The first day from..to on which a condition holds that, once it holds, goes on holding. */
function firstDay(from: string, to: string, holds: (day: string) => boolean): string | null {
  if (to < from || !holds(to)) return null;
  let low = 0;
  let high = daysBetween(from, to);
  while (low < high) {
    const middle = Math.floor((low + high) / 2);
    if (holds(addDays(from, middle))) high = middle;
    else low = middle + 1;
  }
  return addDays(from, low);
}

/** What dock, bench or a log may still find about a claim that is covered. */
function aboutFindings(input: DecideInput, cover: CoverWindow | null, add: Add) {
  for (const { name, clause } of exclusionsFor(input)) {
    if (input.ruledOut.includes(name)) continue;
    const common = name === "physical_damage" || (name === "bent_contacts" && needsSocket(input.part.family));
    if (!common) continue;
    const title = lower(clause.title);
    add(
      `${name}_found`,
      { established: name, photos: 1 },
      `A dock or bench photo that shows ${title}; then clause ${clause.number}, and a person rules on it.`,
      `If our bench finds ${title}, a person looks again and writes to you first.`,
    );
  }
  const clause = input.clauses.find((c) => c.id === cover?.clauseId);
  const { limitHours, limitBytes } = limitsOf(clause);
  if (limitHours === null && limitBytes === null) return;
  const { powerOnHours, bytesWritten } = input.readings;
  if (powerOnHours !== undefined || bytesWritten !== undefined) return;
  const over =
    limitHours !== null ? { powerOnHours: limitHours + 1 } : { bytesWritten: (limitBytes ?? 0) + 1e12 };
  add(
    "use_over",
    { readings: { ...over, serialMatches: true } },
    `A log of this serial over ${limitHours !== null ? `${thin(limitHours)} h` : `${terabytes(limitBytes!)} TB written`}.`,
    "A log that shows more use than the clause covers.",
  );
}

const needsSocket = (family: string) => ["board", "processor", "system"].includes(family);
