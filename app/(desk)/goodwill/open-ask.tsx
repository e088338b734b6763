import Link from "next/link";
import { Cite } from "@/components/tickets/cite";
import { Tag } from "@/components/ui/tag";
import { countWord, showInstant } from "@/lib/base/show";
import type { OpenGoodwill } from "@/lib/coverage/goodwill";
import { REMEDY_WORDS } from "@/lib/coverage/schema";
import { showEuros } from "@/lib/tickets/goodwill";
import { AnswerForm } from "./answer-form";

const FILL = { covered: "g", covered_doa: "g doa", not_covered: "g end", needs_person: "g per" } as const;

/** One ask that waits: the case to the left, the answer to the right. */
export function OpenAsk({
  ask: g,
  zone,
  answers,
  own,
}: {
  ask: OpenGoodwill;
  zone: string;
  /** This person answers asks. */
  answers: boolean;
  own: boolean;
}) {
  const record = `/desk/${g.ticketNumber}`;
  const covered = g.newest.outcome === "covered" || g.newest.outcome === "covered_doa";
  return (
    <li className="gw-ask" id={`g-${g.id}`}>
      <div className="gw-case">
        <p className="gw-of">
          <Tag serial={g.serial} href={`/ledger/${encodeURIComponent(g.serial)}`} />
          <span>
            {g.modelName}, {g.customer},{" "}
            <Link href={record}>
              ticket <span className="m">{g.ticketNumber}</span>
            </Link>
          </span>
        </p>
        <h3>
          {g.askedByName} asks for {REMEDY_WORDS[g.wantedRemedy]}: “{g.reason}”
        </h3>
        <dl className="why">
          <dt>Decision</dt>
          <dd>
            <i className={FILL[g.newest.outcome]} aria-hidden="true" /> {g.newest.headline}{" "}
            {g.newest.ref ? <Cite refName={g.newest.ref} href={`${record}#${g.newest.ref}`} /> : null}
            {g.newest.reasons.map((reason) => (
              <span className="gw-reason" key={reason}>
                {reason}
              </span>
            ))}
            {g.changed ? (
              <b className="gw-changed">
                Decided again since it was asked. Read this one first; an answer holds for it.
              </b>
            ) : null}
          </dd>
          <dt>The fault</dt>
          <dd>“{g.faultWords.length > 180 ? `${g.faultWords.slice(0, 178)}…` : g.faultWords}”</dd>
          <dt>Before</dt>
          <dd>
            {g.before.granted === 0
              ? "No goodwill for this customer so far."
              : `Granted ${g.before.granted === 1 ? "once" : `${countWord(g.before.granted)} times`} for this customer, up to ${showEuros(g.before.cents)} in all.`}
          </dd>
          <dt>Asked</dt>
          <dd>
            {showInstant(g.askedAt, zone)} <Cite refName={g.askRef} href={`${record}#${g.askRef}`} />
          </dd>
        </dl>
      </div>
      {answers && !own ? (
        <AnswerForm
          goodwillId={g.id}
          decisionId={g.newest.id}
          serial={g.serial}
          wanted={g.wantedRemedy}
          nothingToGrant={covered}
        />
      ) : (
        <p className="gw-wait">
          {own && answers
            ? "You asked for this. Nobody answers their own: it waits for another manager."
            : "It waits for a manager."}
        </p>
      )}
    </li>
  );
}
