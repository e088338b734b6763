"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Field, TextArea } from "@/components/ui/field";
import { keep } from "./actions";

/** Holidays as text or file. What is wrong is told line by line, and the text stays. */
export function HolidayForm() {
  const [state, send, busy] = useActionState(keep, UNSENT as FormState<{ years: string }>);
  const wrong = state.fields?.holidays ?? [];
  const typed = String(state.values?.holidays ?? "");
  return (
    <form action={send} className="lawform">
      <ErrorSummary
        title="No holiday was changed"
        items={
          wrong.length > 0
            ? wrong.map((message) => ({ field: "holidays", message }))
            : state.message && !state.ok
              ? [{ message: state.message }]
              : []
        }
      />
      <TextArea
        label="Holidays, one a line"
        name="holidays"
        mono
        rows={8}
        hint="Day and name, such as 2026-12-25, Christmas Day. The years it names are set anew; other years stay."
        error={wrong[0]}
        defaultValue={typed}
        key={typed}
      />
      <Field
        label="Or a file"
        name="file"
        type="file"
        accept=".ics,.csv,.txt,text/calendar,text/csv,text/plain"
        hint="A calendar (.ics), or the same lines as text."
      />
      <Button aria-disabled={busy}>Set these holidays</Button>
    </form>
  );
}
