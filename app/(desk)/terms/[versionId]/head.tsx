"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button, ButtonLink } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Field, TextArea } from "@/components/ui/field";
import { discard, keepHead } from "../actions";
import { problemsOf, typed } from "../state";

/** The day the draft shall come in force, and its note. */
export function HeadForm(props: {
  versionId: string;
  version: number;
  effectiveOn: string;
  note: string;
  /** The day of the issue before, in words. */
  after: string | null;
}) {
  const [state, send, busy] = useActionState(keepHead, UNSENT as FormState<never>);
  const of = (name: "effectiveOn" | "note") => (state.values ? typed(state, name) : props[name]);
  return (
    <section aria-labelledby="day-h">
      <div className="sec">
        <h2 id="day-h">Day and note</h2>
      </div>
      <form action={send} className="termsform" key={`${props.effectiveOn} ${props.note}`}>
        <ErrorSummary title="It is not kept yet" items={problemsOf(state)} />
        <input type="hidden" name="versionId" value={props.versionId} />
        <input type="hidden" name="version" value={props.version} />
        <div className="cfields">
          <Field
            label="In force from"
            hint={
              props.after
                ? `Sales shipped from this day on. Not before ${props.after}.`
                : "Sales shipped from this day on."
            }
            name="effectiveOn"
            type="date"
            mono
            defaultValue={of("effectiveOn")}
            error={state.fields?.effectiveOn?.[0]}
          />
          <div className="wide">
            <TextArea
              label="Note"
              hint="Why it was made; staff read it beside the issue."
              name="note"
              rows={2}
              defaultValue={of("note")}
              error={state.fields?.note?.[0]}
            />
          </div>
        </div>
        <div className="acts">
          <Button kind="line" aria-disabled={busy}>
            Keep day and note
          </Button>
        </div>
      </form>
    </section>
  );
}

/** The two ways a draft ends. */
export function DraftEnd(props: { versionId: string; version: number; issue: number; problems: number }) {
  const [state, send, busy] = useActionState(discard, UNSENT as FormState<never>);
  return (
    <section aria-label="Publish or throw away" className="draftend">
      <ErrorSummary title="It is still there" items={problemsOf(state)} />
      <div className="acts">
        {props.problems === 0 ? (
          <ButtonLink href={`/terms/${props.versionId}/publish`}>Publish issue {props.issue}…</ButtonLink>
        ) : (
          <Button
            type="button"
            reason={`Needs ${props.problems === 1 ? "one thing" : `${props.problems} things`} put right first`}
          />
        )}
        <details className="away">
          <summary>Throw this draft away</summary>
          <form action={send}>
            <input type="hidden" name="versionId" value={props.versionId} />
            <input type="hidden" name="version" value={props.version} />
            <p>
              Its clauses and its preview go with it. Published issues and what was sold stay as they are.
            </p>
            <Button kind="stop" aria-disabled={busy}>
              Throw it away
            </Button>
          </form>
        </details>
      </div>
    </section>
  );
}
