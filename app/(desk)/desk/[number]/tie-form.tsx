"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Field } from "@/components/ui/field";
import { showDay } from "@/lib/base/show";
import { tie } from "./actions";
import { Hidden, problems } from "./form-parts";

export function TieForm({
  ticketId,
  number,
  firstDay,
}: {
  ticketId: string;
  number: number;
  firstDay: string;
}) {
  const [state, send, busy] = useActionState(tie, UNSENT as FormState<never>);
  const typed = (name: string) => String(state.values?.[name] ?? "");
  return (
    <form action={send} className="actform">
      <ErrorSummary title="Not tied" items={problems(state)} />
      <Hidden ticketId={ticketId} number={number} />
      <Field
        label="Serial of the unit or part"
        name="serial"
        mono
        hint="Scan it, or type it as printed."
        error={state.fields?.serial?.[0]}
        defaultValue={typed("serial")}
        key={`s${typed("serial")}`}
        autoComplete="off"
        autoFocus
      />
      <Field
        label="First named in"
        name="namedIn"
        mono
        hint={`Only if a later entry named it first, such as M3: its claim counts from that day. Left empty: ${showDay(firstDay)}.`}
        error={state.fields?.namedIn?.[0]}
        defaultValue={typed("namedIn")}
        key={`n${typed("namedIn")}`}
        autoComplete="off"
        size={8}
      />
      <Button aria-disabled={busy}>Tie this unit</Button>
    </form>
  );
}
