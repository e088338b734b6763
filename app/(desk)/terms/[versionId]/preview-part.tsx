import Link from "next/link";
import { Tag } from "@/components/ui/tag";
import { capital, countWord, plural, showDay, showDayShort, showInstant } from "@/lib/base/show";
import {
  EXAMPLES_OF,
  PREVIEW_CHANGES,
  TICKET_EXAMPLES,
  type PreviewAnswer,
  type PreviewChange,
  type PreviewView,
} from "@/lib/coverage/previews";
import type { Outcome } from "@/lib/coverage/schema";
import type { TermsIssue } from "@/lib/coverage/terms.queries";
import { PreviewStart, PreviewState } from "./preview-state";

const figure = (n: number) => n.toLocaleString("en-US");
const units = (n: number) => `${n < 21 ? countWord(n) : figure(n)} ${plural(n, "unit")}`;

const SHOWN: Record<PreviewChange | "tickets", string> = {
  ended: "covered today, and would not be",
  lost: "no cover any more",
  shorter: "covered for a shorter time",
  longer: "covered longer",
  gained: "covered where they were not",
  tickets: "open tickets answered otherwise",
};
const OUTCOME: Record<Outcome, string> = {
  covered: "covered",
  covered_doa: "covered as dead on arrival",
  not_covered: "not covered",
  needs_person: "needs a person",
};

/** What the draft would do to sold units and open tickets: on the ledger as it stands, by the worker. */
export function PreviewPart({
  of,
  preview,
  writes,
  show,
  all,
  zone,
  now,
}: {
  of: TermsIssue;
  preview: PreviewView | null;
  writes: boolean;
  show?: string;
  /** Every example that was kept, not the first few. */
  all: boolean;
  zone: string;
  now: Date;
}) {
  const old = preview !== null && preview.ofVersion !== of.version;
  return (
    <section aria-labelledby="preview" className="previewpart">
      <div className="sec">
        <h2 id="preview">What it would do</h2>
        <span className="q">
          {preview
            ? `reckoned ${showInstant(preview.createdAt, zone)} for ${preview.createdByName}${old ? ", before the draft’s last change" : ""}`
            : "on the ledger as it stands"}
        </span>
      </div>
      <p className="keep">
        Nothing that was sold moves: <b>each unit keeps the issue it was sold under.</b> What was sold is
        counted by its own clauses and by the draft’s, to show what those sold from {showDay(of.effectiveOn)}{" "}
        on will get.
      </p>
      {preview ? (
        <PreviewState
          first={lean(preview)}
          versionId={of.id}
          writes={writes}
          // A worker that was killed leaves it so; what is asked for again goes on where it was.
          stuck={
            preview.state === "running" &&
            now.getTime() - new Date(preview.answer.steppedAt).getTime() > 60_000
          }
        />
      ) : null}
      {writes && preview?.state !== "running" ? (
        <PreviewStart versionId={of.id} again={preview !== null} first={preview === null || old} />
      ) : null}
      {preview && preview.done > 0 && preview.state !== "running" ? (
        <Answer answer={preview.answer} of={of} show={show} all={all} />
      ) : null}
      {!preview && !writes ? <p className="q">It was not reckoned yet.</p> : null}
    </section>
  );
}

export const lean = (p: PreviewView) => ({
  id: p.id,
  state: p.state,
  total: p.total,
  done: p.done,
  error: p.error,
});

function sentence(a: PreviewAnswer): string {
  if (a.units === 0)
    return "Nothing sold under these terms stands at a customer’s, so there is nothing to compare.";
  const parts = (
    [
      [a.shorter, "would be covered for a shorter time"],
      [a.longer, "would be covered longer"],
      [a.gained, "would gain cover"],
      [a.lost, "would have no cover"],
      [a.unchanged, plural(a.unchanged, "stays as it is", "stay as they are")],
    ] as const
  ).flatMap(([n, how]) => (n === 0 ? [] : [`${n < 21 ? countWord(n) : figure(n)} ${how}`]));
  return `Of ${units(a.units)} in ${figure(a.sales)} open ${plural(a.sales, "sale")}, ${parts.join(", ")}.`;
}

function Answer({
  answer: a,
  of,
  show,
  all,
}: {
  answer: PreviewAnswer;
  of: TermsIssue;
  show?: string;
  all: boolean;
}) {
  const counts: Record<PreviewChange | "tickets", number> = {
    ended: a.ended,
    lost: a.lost,
    shorter: a.shorter,
    longer: a.longer,
    gained: a.gained,
    tickets: a.ticketsDiffer,
  };
  const kinds = [...PREVIEW_CHANGES, "tickets" as const].filter((k) => counts[k] > 0);
  const shown = kinds.find((k) => k === show) ?? kinds[0];
  return (
    <>
      <p className="answer">
        {sentence(a)}{" "}
        {a.ended > 0
          ? `${capital(units(a.ended))} ${plural(a.ended, "is", "are")} covered on ${showDay(a.onDay)} and would not be. `
          : ""}
        {a.doaShorter + a.doaLonger > 0
          ? `The window for dead on arrival would be shorter for ${figure(a.doaShorter)} and longer for ${figure(a.doaLonger)}. `
          : ""}
        {a.tickets === 0
          ? "No open ticket has a decision by these terms."
          : a.ticketsDiffer === 0
            ? `Of ${figure(a.tickets)} open ${plural(a.tickets, "ticket")} with a decision, none would be answered otherwise.`
            : `Of ${figure(a.tickets)} open ${plural(a.tickets, "ticket")} with a decision, ${figure(a.ticketsDiffer)} would be answered otherwise.`}
      </p>
      {shown ? (
        <>
          <ul className="shares">
            {kinds.map((k) => {
              const whole = k === "tickets" ? a.tickets : a.units;
              return (
                <li key={k} aria-current={k === shown ? "true" : undefined}>
                  <Link href={`/terms/${of.id}?show=${k}#shown`} scroll={false}>
                    {capital(SHOWN[k])}
                  </Link>
                  <span className="num">{figure(counts[k])}</span>
                  <span className={`share ${k}`} aria-hidden="true">
                    <i style={{ width: `${Math.max(0.4, (counts[k] / Math.max(1, whole)) * 100)}%` }} />
                  </span>
                  <span className="s">of {figure(whole)}</span>
                </li>
              );
            })}
          </ul>
          <div id="shown">
            {shown === "tickets" ? (
              <Tickets answer={a} />
            ) : (
              <Units
                answer={a}
                change={shown}
                count={counts[shown]}
                more={all ? null : `/terms/${of.id}?show=${shown}&all=1#shown`}
              />
            )}
          </div>
        </>
      ) : null}
    </>
  );
}

const day = (on: string | null, clause: string | null) =>
  on === null ? (
    <span className="q">no cover</span>
  ) : (
    <>
      {showDayShort(on)} <span className="q s">by {clause}</span>
    </>
  );

const FIRST = 20;

function Units({
  answer,
  change,
  count,
  more,
}: {
  answer: PreviewAnswer;
  change: PreviewChange;
  count: number;
  /** Where all examples are shown; none: here. */
  more: string | null;
}) {
  // Cover that ends is shorter or lost too: it stands under its own name first.
  const kept = answer.examples.filter(
    (e) =>
      e.change === change ||
      (e.change === "ended" && (change === "lost" ? e.now === null : change === "shorter" && e.now !== null)),
  );
  const list = more ? kept.slice(0, FIRST) : kept;
  return (
    <>
      <div className="tablewrap" role="region" aria-label={`Units ${SHOWN[change]}`} tabIndex={0}>
        <table className="tbl">
          <caption>
            Units {SHOWN[change]}
            {count > list.length ? `: ${figure(list.length)} of ${figure(count)} as examples` : ""}
          </caption>
          <thead>
            <tr>
              <th scope="col">Unit</th>
              <th scope="col">Stands in</th>
              <th scope="col">Sold to</th>
              <th scope="col">Covered to</th>
              <th scope="col">Would be to</th>
              <th scope="col" className="num">
                Days
              </th>
            </tr>
          </thead>
          <tbody>
            {list.map((e) => (
              <tr key={e.unitId}>
                <th scope="row">
                  <Tag
                    serial={e.serial}
                    part={e.systemSerial !== null}
                    href={`/ledger/${encodeURIComponent(e.serial)}`}
                  />
                </th>
                <td>
                  {e.systemSerial ? (
                    <>
                      <span className="m">{e.systemSerial}</span>
                      <span className="q">, {e.slot}</span>
                    </>
                  ) : (
                    <span className="q">by itself</span>
                  )}
                </td>
                <td>
                  {e.accountName} <span className="m q s">{e.orderNumber}</span>
                </td>
                <td>{day(e.was, e.wasClause)}</td>
                <td>{day(e.now, e.nowClause)}</td>
                <td className="num">
                  {e.days === null ? "–" : `${e.days > 0 ? "+" : "−"}${figure(Math.abs(e.days))}`}
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {more && kept.length > list.length ? (
        <p>
          <Link href={more} scroll={false}>
            Show all {figure(kept.length)} examples
          </Link>
        </p>
      ) : count > kept.length ? (
        <p className="q s">At most {figure(EXAMPLES_OF[change])} of each are kept as examples.</p>
      ) : null}
    </>
  );
}

function Tickets({ answer }: { answer: PreviewAnswer }) {
  return (
    <>
      <div className="tablewrap" role="region" aria-label="Tickets answered otherwise" tabIndex={0}>
        <table className="tbl">
          <caption>Open tickets: their newest decision, decided again from its stored inputs</caption>
          <thead>
            <tr>
              <th scope="col" className="num">
                Ticket
              </th>
              <th scope="col">Unit</th>
              <th scope="col">Decided</th>
              <th scope="col">Would be</th>
            </tr>
          </thead>
          <tbody>
            {answer.ticketExamples.map((t, i) => (
              <tr key={i}>
                <th scope="row" className="num">
                  <Link href={`/desk/${t.number}`}>{t.number}</Link>
                </th>
                <td>{t.serial ? <Tag serial={t.serial} part /> : null}</td>
                <td>{capital(OUTCOME[t.was])}</td>
                <td>
                  {capital(OUTCOME[t.now])}
                  {t.differs.some((d) => d !== "answer") ? (
                    <span className="q">, other {t.differs.filter((d) => d !== "answer").join(" and ")}</span>
                  ) : null}
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {answer.ticketExamples.length >= TICKET_EXAMPLES ? (
        <p className="q s">The first {figure(TICKET_EXAMPLES)} are kept as examples.</p>
      ) : null}
    </>
  );
}
