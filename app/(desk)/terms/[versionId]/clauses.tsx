import Link from "next/link";
import { ButtonLink } from "@/components/ui/button";
import { Empty } from "@/components/ui/empty";
import { Pin } from "@/components/ui/pin";
import { capital } from "@/lib/base/show";
import { CLAUSE_KINDS, REMEDY_WORDS, type ClauseFact, type ClauseKind } from "@/lib/coverage/schema";
import { familiesWords, FIELDS_OF, inOrder, KIND_WORDS } from "@/lib/coverage/terms";
import type { TermsIssue } from "@/lib/coverage/terms.queries";
import { clauseWords, type ClauseComparison } from "@/lib/coverage/termwords";
import { ClauseForm } from "./editor";
import { choices, firstValues } from "./fields";

const MARK = { same: "", changed: "changed", added: "new", removed: "" } as const;
const KIND_HELP: Record<ClauseKind, string> = {
  doa: "A fault told of in the first days: its own window and remedies.",
  cover: "How long parts are covered, from which day, and what is done about a fault.",
  replaced_part: "How long a part that we fit is covered.",
  exclusion: "What is left out, and the evidence that must show it.",
  fee: "What may be charged, and the words that tell of it before.",
  transfer: "What becomes of cover when a unit is given on to another company.",
};

/** The clauses like a contract reads, numbers in the margin; in a draft, one of them opened to be changed. */
export function ClauseList({
  of,
  rows,
  writes,
  open,
  kind,
}: {
  of: TermsIssue;
  rows: readonly ClauseComparison[];
  writes: boolean;
  /** Id of the clause that is opened, or "new". */
  open?: string;
  kind?: ClauseKind;
}) {
  const states = new Map(rows.map((r) => [r.number, of.before ? r.state : "same"]));
  return (
    <section aria-labelledby="clauses-h">
      <div className="sec">
        <h2 id="clauses-h">Clauses</h2>
      </div>
      {of.clauses.length === 0 ? (
        <Empty title="No clause yet.">
          Terms need at least one clause of cover before they can be published.
        </Empty>
      ) : null}
      <ol className="clauses">
        {inOrder(of.clauses).map((c) =>
          c.id === open ? (
            <li key={c.id} className="open" id="open" aria-current="true">
              <Pin size={14} />
              <Editor of={of} clause={c} kind={c.kind} />
            </li>
          ) : (
            <li key={c.id} id={`c-${c.id}`}>
              <div className="no">
                <span className="m">{c.number}</span>
                <span className="s">{MARK[states.get(c.number) ?? "same"]}</span>
              </div>
              <div className="about">
                <h3>{c.title}</h3>
                {FIELDS_OF[c.kind].includes("families") ? (
                  <p className="s">
                    {capital(familiesWords(c.families))}
                    {c.condition ? `, ${c.condition}` : ""}
                  </p>
                ) : null}
              </div>
              <div className="rule">
                <p>{clauseWords(c)}</p>
                {c.remedies.length > 0 ? (
                  <p className="s">{capital(c.remedies.map((r) => REMEDY_WORDS[r]).join(", then "))}</p>
                ) : null}
              </div>
              {writes ? (
                <Link className="do" href={`/terms/${of.id}?clause=${c.id}#open`}>
                  Change<span className="vh"> clause {c.number}</span>
                </Link>
              ) : null}
            </li>
          ),
        )}
        {open === "new" && kind ? (
          <li className="open" id="open" aria-current="true">
            <Pin size={14} />
            <Editor of={of} kind={kind} />
          </li>
        ) : null}
      </ol>
      {writes && open === "new" && !kind ? (
        <div className="kinds" id="open">
          <h3>What shall the new clause be about?</h3>
          <ul>
            {CLAUSE_KINDS.map((k) => (
              <li key={k}>
                <Link href={`/terms/${of.id}?clause=new&kind=${k}#open`}>{capital(KIND_WORDS[k])}</Link>
                <span className="s">{KIND_HELP[k]}</span>
              </li>
            ))}
          </ul>
        </div>
      ) : null}
      {writes && open === undefined ? (
        <div className="acts addclause">
          <ButtonLink kind="line" href={`/terms/${of.id}?clause=new#open`}>
            Add a clause
          </ButtonLink>
        </div>
      ) : null}
    </section>
  );
}

function Editor({ of, clause, kind }: { of: TermsIssue; clause?: ClauseFact; kind: ClauseKind }) {
  return (
    <ClauseForm
      key={clause?.id ?? "new"}
      versionId={of.id}
      version={of.version}
      clauseId={clause?.id}
      kind={kind}
      heading={clause ? `Clause ${clause.number}, ${KIND_WORDS[kind]}` : `A new clause: ${KIND_WORDS[kind]}`}
      fields={FIELDS_OF[kind]}
      choices={choices}
      first={firstValues(kind, clause, of.clauses)}
      back={clause ? `/terms/${of.id}#c-${clause.id}` : `/terms/${of.id}#clauses-h`}
    />
  );
}
