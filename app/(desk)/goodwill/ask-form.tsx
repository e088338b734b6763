"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Select, TextArea } from "@/components/ui/field";
import { REMEDIES, REMEDY_WORDS } from "@/lib/coverage/schema";
import { Hidden, keepTyped, problems } from "../desk/[number]/form-parts";
import { ask } from "./actions";

export type Askable = { ticketUnitId: string; serial: string; what: string };

/** An agent asks a manager for what the terms do not give. */
export function AskForm({
  ticketId,
  number,
  units,
}: {
  ticketId: string;
  number: number;
  units: readonly Askable[];
}) {
  const [state, send, busy] = useActionState(ask, UNSENT as FormState<never>);
  const typed = (name: string) => String(state.values?.[name] ?? "");
  return (
    <form action={send} className="actform" onReset={keepTyped}>
      <ErrorSummary title="Nothing was asked" items={problems(state)} />
      <Hidden ticketId={ticketId} number={number} />
      {units.length > 1 ? (
        <Select
          label="For which unit"
          name="ticketUnitId"
          options={units.map((u) => ({ value: u.ticketUnitId, label: `${u.serial}, ${u.what}` }))}
          defaultValue={typed("ticketUnitId") || undefined}
        />
      ) : (
        <input type="hidden" name="ticketUnitId" value={units[0]?.ticketUnitId ?? ""} />
      )}
      <Select
        label="The remedy you wish for"
        name="remedy"
        error={state.fields?.remedy?.[0]}
        defaultValue={typed("remedy")}
      >
        <option value="">Choose one</option>
        {REMEDIES.map((r) => (
          <option key={r} value={r}>
            {REMEDY_WORDS[r]}
          </option>
        ))}
      </Select>
      <TextArea
        label="Why an exception is right here"
        name="reason"
        hint="A manager decides by these words; cite entries such as C1. No customer sees them."
        error={state.fields?.reason?.[0]}
        defaultValue={typed("reason")}
      />
      <Button aria-disabled={busy}>{busy ? "Asking" : "Ask a manager"}</Button>
    </form>
  );
}
