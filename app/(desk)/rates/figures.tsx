import { grouped } from "@/components/reliability/axes";
import { RateFigure, runsBelow } from "@/components/reliability/rate-figure";
import { SurvivalFigure } from "@/components/reliability/survival-figure";
import { RateTable, SurvivalTable, TriangleTable } from "@/components/reliability/tables";
import { SMALL_COHORT, TriangleFigure } from "@/components/reliability/triangle-figure";
import { Empty } from "@/components/ui/empty";
import { showDay, showMonth } from "@/lib/base/show";
import { FAMILY_WORDS } from "@/lib/ledger/schema";
import { monthsShown } from "@/lib/reliability/rules";
import type { RatesFilter, RatesView, SurvivalView, TriangleView } from "@/lib/reliability/schema";

const sheet = (name: string, filter: RatesFilter) => {
  const query = new URLSearchParams({ sheet: name });
  for (const [key, value] of Object.entries(filter)) if (value) query.set(key, value);
  return `/rates/export?${query}`;
};

export function FigureOne({ view }: { view: RatesView }) {
  const by = view.filter.by === "model" ? "model" : "part family";
  const systems = view.rows.some((r) => r.family === "system");
  return (
    <>
      <figure tabIndex={0} aria-label="Figure 1">
        <RateFigure view={view} by={by} />
        <figcaption>
          <b>Figure 1.</b> Failure rate by {by}, as of {showDay(view.asOf)}. Dots are confirmed failures over
          exposure under cover; whiskers are exact Poisson 95% intervals. Open dots and † mark a small sample:
          under 5 failures or 200 unit-years. Read the whisker there, not the dot.
          {runsBelow(view) ? " A whisker without a left end goes on below the scale." : ""}
          {systems ? " Whole systems are those returned whole; the line of all parts leaves them out." : ""}
        </figcaption>
      </figure>
      <details>
        <summary>Figure 1 as a table</summary>
        <RateTable rows={view.rows} all={view.all} />
        <p className="s">
          <a href={sheet("rates", view.filter)}>Export figure 1</a>
        </p>
      </details>
      <div className="side">
        <div>
          <b>What stands on firm ground.</b>
          {view.firm.length === 0 ? <p>Nothing yet: all intervals overlap.</p> : null}
          {view.firm.map((line) => (
            <p key={line}>{line}</p>
          ))}
        </div>
        <div>
          <b>What does not, yet.</b>
          {view.notYet.length === 0 ? <p>Every row has failures and time enough.</p> : null}
          {view.notYet.map((line) => (
            <p key={line}>{line}</p>
          ))}
        </div>
      </div>
    </>
  );
}

export function FigureTwo({ view, filter }: { view: SurvivalView; filter: RatesFilter }) {
  const what = FAMILY_WORDS[view.family];
  if (view.groups.length === 0)
    return (
      <Empty title={`No ${what.toLowerCase()} has been in service for a day.`}>
        Figure 2 needs one. Choose another part family above.
      </Empty>
    );
  const failures = view.groups.map((g) => `${grouped(g.failures)} ${g.condition}`).join(", ");
  const cut = view.groups.some((g) => g.steps.length > 0);
  return (
    <>
      <figure tabIndex={0} aria-label="Figure 2">
        <SurvivalFigure view={view} />
        <figcaption>
          <b>Figure 2.</b> {what}: share still working by months in service, as of {showDay(view.asOf)}{" "}
          (Kaplan-Meier; failures: {failures}). Shaded and dotted bands are 95% log-log intervals. A curve
          ends where fewer than ten are at risk.
          {cut
            ? " The axis is cut below the lowest band."
            : " No failure so far: the line is flat, not certain."}
        </figcaption>
      </figure>
      <details>
        <summary>Figure 2 as a table</summary>
        <SurvivalTable view={view} />
        <p className="s">
          <a href={sheet("survival", filter)}>Export figure 2</a>
        </p>
      </details>
    </>
  );
}

export function FigureThree({ view, filter }: { view: TriangleView; filter: RatesFilter }) {
  const what = FAMILY_WORDS[view.family];
  const months = monthsShown(view.asOf);
  if (view.cohorts.length === 0)
    return (
      <Empty title={`No ${what.toLowerCase()} was shipped in the last twelve months.`}>
        Figure 3 shows those. Choose another part family or other months above.
      </Empty>
    );
  const small = view.cohorts.some((c) => c.units < SMALL_COHORT);
  return (
    <>
      <figure tabIndex={0} aria-label="Figure 3">
        <TriangleFigure view={view} months={months} />
        <figcaption>
          <b>Figure 3.</b> {what}: failures per 1000 at risk, by ship month and month in service, as of{" "}
          {showDay(view.asOf)}. {standsOutWords(view)}
          {small ? ` † marks fewer than ${SMALL_COHORT} units; those rows stay pale.` : ""}
        </figcaption>
      </figure>
      <details>
        <summary>Figure 3 as a table</summary>
        <TriangleTable view={view} months={months.length} />
        <p className="s">
          <a href={sheet("triangle", filter)}>Export figure 3</a>
        </p>
      </details>
    </>
  );
}

function standsOutWords({ standsOut, cohorts }: TriangleView): string {
  if (!standsOut)
    return cohorts.some((c) => c.cells.some((cell) => cell.failed > 0))
      ? "No month departs from the others by more than chance."
      : "No failure so far.";
  const { month, failures, expected, lot } = standsOut;
  const named = lot ? ` ${grouped(lot.units)} of its ${grouped(lot.of)} units are lot ${lot.code}.` : "";
  return `${showMonth(`${month}-01`)} stands out: ${grouped(failures)} failures where ${expected.toFixed(1)} were to be expected.${named}`;
}
