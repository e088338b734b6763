import { capital, showDay } from "../base/show";
import { terabytes, thin } from "./reasons";
import { compareTerms } from "./termwords";
import { exclusionWords } from "./rules";
import { FAULT_WORDS, OUTCOME_WORDS, type DecideInput, type Decision } from "./schema";

export type Stored = { inputs: DecideInput; answer: Decision };
export type Difference = {
  /** What is other in the facts, one line each; empty when the same facts were decided again. */
  facts: string[];
  /** What is other in the answer. */
  answer: string[];
};

const day = (d: string | null) => (d === null ? "not known" : showDay(d));
const list = (names: readonly string[]) => names.map(exclusionWords).join(", ") || "none";

/** What a new decision knows or says that the one before it did not. */
export function differenceOf(before: Stored, after: Stored): Difference {
  const facts: string[] = [];
  const say = (what: string, was: string, now: string) => {
    if (was !== now) facts.push(`${what}: ${was}, now ${now}`);
  };
  const [a, b] = [before.inputs, after.inputs];
  say("Fault", lower(FAULT_WORDS[a.faultClass]), lower(FAULT_WORDS[b.faultClass]));
  say("Claim day", day(a.claimOn), day(b.claimOn));
  say("Shipped", day(a.sale.shippedOn), day(b.sale.shippedOn));
  say("Delivered", day(a.sale.deliveredOn), day(b.sale.deliveredOn));
  say("Invoiced", day(a.sale.invoicedOn), day(b.sale.invoicedOn));
  say("Set up", day(a.sale.installedOn), day(b.sale.installedOn));
  say("Buyer", a.sale.buyerKind, b.sale.buyerKind);
  say("Pauses", pauses(a), pauses(b));
  say("Given on", given(a), given(b));
  say(
    "Fitted anew",
    a.part.swaps.map(showDay).join(", ") || "never",
    b.part.swaps.map(showDay).join(", ") || "never",
  );
  say("Photos", thin(a.evidence.photos), thin(b.evidence.photos));
  say("Logs", thin(a.evidence.logs), thin(b.evidence.logs));
  say("Shown by the evidence", list(a.established), list(b.established));
  say("Ruled out", list(a.ruledOut), list(b.ruledOut));
  say("The log", readings(a), readings(b));
  say("Open RMA", a.openRma ?? "none", b.openRma ?? "none");
  const changed = clauseChanges(a, b);
  if (changed) facts.push(changed);

  const answer: string[] = [];
  const [x, y] = [before.answer, after.answer];
  if (x.outcome !== y.outcome)
    answer.push(`${capital(OUTCOME_WORDS[x.outcome])}, now ${OUTCOME_WORDS[y.outcome]}`);
  if (x.lastCoveredOn !== y.lastCoveredOn)
    answer.push(`Last covered day: ${day(x.lastCoveredOn)}, now ${day(y.lastCoveredOn)}`);
  if (x.clauseNumber !== y.clauseNumber)
    answer.push(`Decided by clause ${x.clauseNumber ?? "none"}, now ${y.clauseNumber ?? "none"}`);
  if (x.engine !== y.engine) answer.push(`Decided by engine ${x.engine}, now ${y.engine}`);
  return { facts, answer };
}

const lower = (t: string) => t.charAt(0).toLowerCase() + t.slice(1);
const pauses = (i: DecideInput) =>
  [...i.sale.pauses]
    .sort((p, q) => (p.from < q.from ? -1 : 1))
    .map((p) => `${showDay(p.from)} to ${showDay(p.to)}`)
    .join(", ") || "none";
const given = (i: DecideInput) =>
  i.sale.transfers
    .map((t) => `${showDay(t.on)}${t.noticedOn ? `, noticed ${showDay(t.noticedOn)}` : ", no notice"}`)
    .join("; ") || "never";

function readings({ readings: r }: DecideInput): string {
  const parts = [
    r.powerOnHours === undefined ? null : `${thin(r.powerOnHours)} h`,
    r.bytesWritten === undefined ? null : `${terabytes(r.bytesWritten)} TB written`,
    r.serial === undefined ? null : `of ${r.serial}`,
  ].filter((p) => p !== null);
  return parts.join(", ") || "nothing read";
}

/** Clauses that say something else, each with what; other terms are not told clause by clause. */
function clauseChanges(a: DecideInput, b: DecideInput): string | null {
  const rows = compareTerms(a.clauses, b.clauses).filter((r) => r.state !== "same");
  if (rows.length === 0) return null;
  if (rows.length > 2) return "Other terms apply to it";
  return rows
    .map((r) =>
      r.state === "changed"
        ? `Clause ${r.number}: ${r.changes.map((c) => `${lower(c.label)} ${c.was}, now ${c.now}`).join(", ")}`
        : `Clause ${r.number} ${r.state}`,
    )
    .join(". ");
}
