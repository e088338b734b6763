import { Fragment } from "react";
import type { Difference } from "@/lib/coverage/difference";
import { FREIGHT_WORDS, type Change, type Decision } from "@/lib/coverage/schema";

const FILL: Record<Decision["outcome"], string> = {
  covered: "g",
  covered_doa: "g doa",
  not_covered: "g end",
  needs_person: "g per",
};

const THEN: Record<Decision["outcome"], string> = {
  covered: "Then covered.",
  covered_doa: "Then covered as dead on arrival.",
  not_covered: "Then not covered.",
  needs_person: "Then a person decides.",
};

/** What the clause attaches to its remedies, as a person says it. */
function handlingWords({ handling }: Decision): string {
  if (!handling) return "";
  return [
    handling.dueBackDays === null ? null : `old part back within ${handling.dueBackDays} days`,
    handling.holdCents === null
      ? null
      : `${(handling.holdCents / 100).toFixed(2)} EUR may be held until then`,
    handling.freight === null ? null : FREIGHT_WORDS[handling.freight],
    handling.responseHours === null ? null : `our answer within ${handling.responseHours} working hours`,
  ]
    .filter((w) => w !== null)
    .join("; ");
}

function Changes({ changes }: { changes: readonly Change[] }) {
  return (
    <ul className="changes">
      {changes.map((c) => (
        <li key={c.fact}>
          {c.staff}
          {c.to ? <span className="q"> {THEN[c.to]}</span> : null}
        </li>
      ))}
    </ul>
  );
}

/** A coverage decision as staff read it: the verdict, why, what would change it, and what is other than last time. */
export function DecisionBody({
  answer,
  difference,
  differs = "Since the last",
}: {
  answer: Decision;
  difference?: Difference;
  /** What it is compared with, as the row's head. */
  differs?: string;
}) {
  const handling = handlingWords(answer);
  const news = difference ? [...difference.answer, ...difference.facts] : [];
  return (
    <>
      <div className="verdict">
        <i className={FILL[answer.outcome]} aria-hidden="true" />
        <div className="v">{answer.headline.staff}</div>
      </div>
      <dl className="why">
        {answer.reasons.map((r, i) => (
          <Fragment key={`${r.rule}${i}`}>
            <dt>{r.clause ? `Clause ${r.clause}` : "Finding"}</dt>
            <dd>{r.staff}</dd>
          </Fragment>
        ))}
        {handling ? (
          <>
            <dt>Goes with it</dt>
            <dd>{handling.charAt(0).toUpperCase() + handling.slice(1)}.</dd>
          </>
        ) : null}
        {answer.wouldChange.length > 0 ? (
          <>
            <dt>Would change it</dt>
            <dd>
              <Changes changes={answer.wouldChange} />
            </dd>
          </>
        ) : null}
        {answer.evidenceWanted.length > 0 ? (
          <>
            <dt>Not yet here</dt>
            <dd>{answer.evidenceWanted.join(", ")}</dd>
          </>
        ) : null}
        {difference ? (
          <>
            <dt>{differs}</dt>
            <dd>
              {news.length > 0 ? `${news.join(". ")}.` : "The same facts, decided again: the same answer."}
            </dd>
          </>
        ) : null}
      </dl>
    </>
  );
}
