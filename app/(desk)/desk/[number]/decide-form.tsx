"use client";
import { useActionState, useState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Field, Select } from "@/components/ui/field";
import { capital } from "@/lib/base/show";
import { EXCLUSIONS, EXCLUSION_WORDS, FAULT_CLASSES, FAULT_WORDS } from "@/lib/coverage/schema";
import { decide } from "./actions";
import type { UnitAct } from "./acts";
import { Hidden, problems } from "./form-parts";

/** What a decision knew: findings of persons, and what was read from a log. */
export type Known = {
  ticketUnitId: string;
  established: string[];
  ruledOut: string[];
  powerOnHours: number | null;
  terabytes: number | null;
  logSerial: string | null;
};

const FINDINGS = [
  { value: "", label: "Not looked into" },
  { value: "shown", label: "The evidence shows it" },
  { value: "ruled_out", label: "It does not apply" },
];

/** Fault, findings and readings; the rules do the rest. What was known last time stands in the fields. */
export function DecideForm({
  ticketId,
  number,
  units,
  known,
}: {
  ticketId: string;
  number: number;
  units: UnitAct[];
  known: Known | null;
}) {
  const [state, send, busy] = useActionState(decide, UNSENT as FormState<never>);
  const [unit, setUnit] = useState(units[0]?.ticketUnitId ?? "");
  const [fault, setFault] = useState(units[0]?.faultClass ?? "");
  const last = known && known.ticketUnitId === unit ? known : null;
  const typed = (name: string, was: string) => String(state.values?.[name] ?? was);
  const finding = (name: string) =>
    typed(
      `finding.${name}`,
      last?.established.includes(name) ? "shown" : last?.ruledOut.includes(name) ? "ruled_out" : "",
    );
  const asked = (EXCLUSIONS as readonly string[]).includes(fault);
  const field = (name: string, label: string, was: string | number | null | undefined, hint?: string) => (
    <Field
      label={label}
      name={name}
      mono
      hint={hint}
      error={state.fields?.[name]?.[0]}
      defaultValue={typed(name, was === null || was === undefined ? "" : String(was))}
      key={`${unit} ${name} ${typed(name, "")}`}
      autoComplete="off"
      inputMode={name === "logSerial" ? undefined : "decimal"}
    />
  );
  return (
    <form action={send} className="actform">
      <ErrorSummary title="No decision was taken" items={problems(state)} />
      <Hidden ticketId={ticketId} number={number} />
      {units.length > 1 ? (
        <Select
          label="For which unit"
          name="ticketUnitId"
          value={unit}
          onChange={(e) => {
            setUnit(e.target.value);
            setFault(units.find((u) => u.ticketUnitId === e.target.value)?.faultClass ?? "");
          }}
          options={units.map((u) => ({ value: u.ticketUnitId, label: `${u.serial}, ${u.what}` }))}
        />
      ) : (
        <input type="hidden" name="ticketUnitId" value={unit} />
      )}
      <Select
        label="Kind of fault"
        name="faultClass"
        error={state.fields?.faultClass?.[0]}
        value={fault}
        onChange={(e) => setFault(e.target.value)}
        options={[
          { value: "", label: "Choose" },
          ...FAULT_CLASSES.map((c) => ({ value: c, label: FAULT_WORDS[c] })),
        ]}
      />
      <details className="more" open={asked || last !== null || state.fields !== undefined}>
        <summary>Findings, and what a log says</summary>
        <p className="hint">
          A finding needs its photo on record, compared with ours from before shipping. Without it a person
          must look again.
        </p>
        <div className="findings">
          {EXCLUSIONS.map((name) => (
            <Select
              key={`${unit} ${name} ${finding(name)}`}
              label={capital(EXCLUSION_WORDS[name])}
              name={`finding.${name}`}
              defaultValue={finding(name)}
              options={FINDINGS}
            />
          ))}
        </div>
        <div className="findings">
          {field("powerOnHours", "Hours in the log", last?.powerOnHours)}
          {field("terabytesWritten", "Terabytes written", last?.terabytes)}
          {field(
            "logSerial",
            "Serial the log names",
            last?.logSerial,
            "One that differs stops the decision.",
          )}
        </div>
      </details>
      <Button aria-disabled={busy}>{busy ? "Deciding" : "Decide and keep it"}</Button>
      <p className="hint">
        The rules decide by the clause, the dates and the evidence. It is kept as it was made.
      </p>
    </form>
  );
}
