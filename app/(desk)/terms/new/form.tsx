"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Field } from "@/components/ui/field";
import { begin } from "../actions";
import { problemsOf, typed } from "../state";

export function NewTermsForm() {
  const [state, send, busy] = useActionState(begin, UNSENT as FormState<never>);
  return (
    <form action={send} className="termsform narrowform">
      <ErrorSummary title="Not begun yet" items={problemsOf(state)} />
      <Field
        label="Code"
        name="code"
        hint="As it stands in the column “terms” of a shipments file: capitals, digits and dashes."
        mono
        autoComplete="off"
        defaultValue={typed(state, "code")}
        error={state.fields?.code?.[0]}
      />
      <Field
        label="Name"
        name="name"
        autoComplete="off"
        defaultValue={typed(state, "name")}
        error={state.fields?.name?.[0]}
      />
      <div className="acts">
        <Button aria-disabled={busy}>Begin the draft</Button>
      </div>
    </form>
  );
}
