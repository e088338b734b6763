import { capital, showDay } from "@/lib/base/show";
import { familiesWords } from "@/lib/coverage/terms";
import { clauseWords, comparisonWords, type ClauseComparison } from "@/lib/coverage/termwords";

/** What differs from the issue before, clause by clause: was on the left, is on the right. */
export function Compare({
  rows,
  before,
  draft,
}: {
  rows: readonly ClauseComparison[];
  before: { issue: number; effectiveOn: string };
  draft: boolean;
}) {
  const differ = rows.filter((r) => r.state !== "same");
  const same = rows.filter((r) => r.state === "same").map((r) => r.number);
  const words = comparisonWords(rows);
  return (
    <section aria-labelledby="compare-h" className="comparepart">
      <div className="sec">
        <h2 id="compare-h">
          {draft ? "What would change" : "What changed"} since issue {before.issue}
        </h2>
        <span className="q">
          {words ? `${words}; ` : "nothing; "}
          {same.length} as before
        </span>
      </div>
      {differ.length > 0 ? (
        <div className="tablewrap" role="region" aria-labelledby="compare-h" tabIndex={0}>
          <table className="tbl compare">
            <thead>
              <tr>
                <th scope="col">Clause</th>
                <th scope="col">
                  <span className="vh">What of it</span>
                </th>
                <th scope="col">
                  Issue {before.issue}, from {showDay(before.effectiveOn)}
                </th>
                <th scope="col">{draft ? "This draft" : "This issue"}</th>
              </tr>
            </thead>
            {differ.map((r) => (
              <tbody key={r.number}>
                {lines(r).map((line, i, all) => (
                  <tr key={line.label}>
                    {i === 0 ? (
                      <th scope="rowgroup" rowSpan={all.length}>
                        <span className="m">{r.number}</span> {r.title}
                      </th>
                    ) : null}
                    <td className="q">{line.label}</td>
                    <td className={r.state === "removed" ? "gone" : "was"}>{line.was}</td>
                    <td className={r.state === "changed" ? "now" : undefined}>{line.now}</td>
                  </tr>
                ))}
              </tbody>
            ))}
          </table>
        </div>
      ) : (
        <p className="q">
          {draft
            ? `The draft says what issue ${before.issue} says. Change a clause, and the difference stands here.`
            : `It says what issue ${before.issue} said.`}
        </p>
      )}
      {differ.length > 0 && same.length > 0 ? (
        <p className="q s">
          As before: <span className="m">{same.join(", ")}</span>
        </p>
      ) : null}
    </section>
  );
}

function lines(r: ClauseComparison): { label: string; was: string; now: string }[] {
  if (r.state === "changed") return r.changes;
  const c = (r.after ?? r.before)!;
  const who = `${capital(familiesWords(c.families))}${c.condition ? `, ${c.condition}` : ""}`;
  const whole = c.kind === "fee" ? clauseWords(c) : `${who}: ${clauseWords(c)}`;
  return r.state === "added"
    ? [{ label: "New clause", was: "", now: whole }]
    : [{ label: "Taken out", was: whole, now: "" }];
}
