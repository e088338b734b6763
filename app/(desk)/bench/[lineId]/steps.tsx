"use client";
import { useActionState } from "react";
import { useRouter } from "next/navigation";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Uploader } from "@/components/evidence/uploader";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Pin } from "@/components/ui/pin";
import { keep } from "../actions";

type Step = {
  step: number;
  title: string;
  detail: string;
  measure: string | null;
  unit: string;
  limits: string;
  judged: boolean;
  photo: boolean;
  reading: { value: string; verdict: "pass" | "fail" | "not_run"; note: string; by: string } | null;
};
type Props = { lineId: string; testId: string; at: number; photos: number; steps: Step[] };

const TRI = { pass: "p", fail: "f", not_run: undefined } as const;

function Mark({ verdict }: { verdict: "pass" | "fail" | "not_run" }) {
  if (verdict === "not_run") return <span className="q">not run</span>;
  return (
    <span className={verdict === "pass" ? "mark p" : "mark f"}>
      <svg viewBox="0 0 16 16" aria-hidden="true">
        <path d={verdict === "pass" ? "M2 9l4 4 8-10" : "M3 3l10 10M13 3 3 13"} />
      </svg>
      {verdict}
    </span>
  );
}

/** A number is read with its unit; words stand for themselves. */
const withUnit = (value: string, unit: string) =>
  unit && /^-?\d+([.,]\d+)?$/.test(value) ? `${value} ${unit}` : value;

/** The checklist: what was read stays, the one step in hand is open. */
export function Steps({ lineId, testId, at, photos, steps }: Props) {
  return (
    <ol className="steps">
      {steps.map((s) => (
        <li
          key={s.step}
          id={`step-${s.step}`}
          className={s.step === at ? "on" : undefined}
          aria-current={s.step === at ? "step" : undefined}
        >
          {s.step === at ? <Pin size={16} /> : null}
          <span className="no">{s.step}</span>
          {s.step === at ? (
            <StepForm lineId={lineId} testId={testId} step={s} last={steps.length} photos={photos} />
          ) : (
            <>
              <span>
                {at > 0 ? <a href={`/bench/${lineId}?at=${s.step}#step-${s.step}`}>{s.title}</a> : s.title}
                {s.reading?.note ? <span className="q s block">{s.reading.note}</span> : null}
              </span>
              <span className="meas">
                {s.reading ? withUnit(s.reading.value, s.unit) || "seen" : s.limits}
                {s.reading && s.limits !== s.unit ? <small>{s.limits}</small> : null}
              </span>
              {s.reading ? <Mark verdict={s.reading.verdict} /> : <span className="q">not yet run</span>}
            </>
          )}
        </li>
      ))}
    </ol>
  );
}

function StepForm({
  lineId,
  testId,
  step,
  last,
  photos,
}: {
  lineId: string;
  testId: string;
  step: Step;
  last: number;
  photos: number;
}) {
  const router = useRouter();
  const [state, send, busy] = useActionState(keep, UNSENT as FormState<never>);
  const r = step.reading;
  const words = state.fields?.value?.[0] ?? (state.ok ? undefined : state.message);
  return (
    <form action={send} className="stepform">
      <b className="stept">{step.title}</b>
      <span className="s stepd">{step.detail}</span>
      <ErrorSummary
        title="This reading was not kept"
        items={words ? [{ field: "value", message: words }] : []}
      />
      <input type="hidden" name="lineId" value={lineId} />
      <input type="hidden" name="testId" value={testId} />
      <input type="hidden" name="step" value={step.step} />
      <div className="stepin">
        {step.measure ? (
          <div className="field">
            <label htmlFor="f-value">
              {step.measure.charAt(0).toUpperCase() + step.measure.slice(1)}
              {step.unit ? `, ${step.unit}` : ""} <span className="q s">{step.limits}</span>
            </label>
            <input
              id="f-value"
              name="value"
              className="in m"
              defaultValue={r?.value ?? ""}
              autoComplete="off"
              autoFocus
            />
          </div>
        ) : null}
        <div className="field">
          <label htmlFor="f-note">Note</label>
          <input id="f-note" name="note" className="in" defaultValue={r?.note ?? ""} autoComplete="off" />
        </div>
      </div>
      <div className="stepfoot">
        {step.judged ? null : (
          <fieldset className="tri">
            <legend className="vh">Verdict</legend>
            {(["pass", "fail", "not_run"] as const).map((v) => (
              <label key={v} className={TRI[v]}>
                <input type="radio" name="verdict" value={v} defaultChecked={r?.verdict === v} />
                <span>{v.replace("_", " ")}</span>
              </label>
            ))}
          </fieldset>
        )}
        {step.photo ? (
          <Uploader
            compact
            endpoint="photo"
            input={{ subject: "bench_test", subjectId: testId, slot: "finding" }}
            label="Photo of the finding"
            hint={`${photos} kept`}
            accept="image/*"
            onDone={() => router.refresh()}
          />
        ) : null}
        <Button aria-disabled={busy}>
          {step.step < last ? `Keep, go to step ${step.step + 1}` : "Keep the last step"}
        </Button>
      </div>
    </form>
  );
}
