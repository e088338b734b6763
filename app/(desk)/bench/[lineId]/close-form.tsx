"use client";
import { useActionState, useState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Choice, ChoiceGroup, Field, Select, TextArea } from "@/components/ui/field";
import type { Disposition, TestOutcome } from "@/lib/dock/schema";
import { closeTest, scanIn } from "../actions";

const problems = (state: FormState<unknown>) => {
  const list = Object.entries(state.fields ?? {}).flatMap(([field, m]) =>
    m.map((message) => ({ field, message })),
  );
  return list.length > 0 ? list : state.message && !state.ok ? [{ message: state.message }] : [];
};

export function ScanInForm({ lineId, serial }: { lineId: string; serial: string }) {
  const [state, send, busy] = useActionState(scanIn, UNSENT as FormState<never>);
  return (
    <form action={send} className="actform">
      <ErrorSummary title="The test has not begun" items={problems(state)} />
      <input type="hidden" name="lineId" value={lineId} />
      <Field
        label="Scan the unit in"
        name="scan"
        mono
        hint={`Its own label must read ${serial}.`}
        error={state.fields?.scan?.[0]}
        autoComplete="off"
        autoFocus
      />
      <Button aria-disabled={busy}>Begin the test</Button>
    </form>
  );
}

const OUTCOMES: [TestOutcome, string, string][] = [
  ["fault_confirmed", "Fault confirmed", "The unit does what the customer says, and the cause is ours."],
  [
    "no_fault_found",
    "No fault found",
    "All steps pass twice and the customer’s case cannot be made to happen.",
  ],
  [
    "damage_not_covered",
    "Damage not covered",
    "A cause that a clause leaves out. Needs a photo and a second pair of eyes.",
  ],
];
const DISPOSITION_WORDS: Record<Disposition, string> = {
  restock: "Restock",
  repair: "Repair",
  return_to_supplier: "Return to supplier",
  scrap: "Scrap",
  send_back: "Send back",
};

type Props = {
  lineId: string;
  testId: string;
  serial: string;
  dataBearing: boolean;
  open: number;
  dispositions: Record<TestOutcome, readonly Disposition[]>;
  suggested: TestOutcome | null;
};

export function CloseForm({ lineId, testId, serial, dataBearing, open, dispositions, suggested }: Props) {
  const [state, send, busy] = useActionState(closeTest, UNSENT as FormState<never>);
  const [outcome, setOutcome] = useState<TestOutcome | null>(suggested);
  const [disposition, setDisposition] = useState<Disposition | null>(null);
  const allowed = outcome ? dispositions[outcome] : [];
  const kept = (name: string) =>
    typeof state.values?.[name] === "string" ? (state.values[name] as string) : "";
  return (
    <form action={send} key={kept("finding")}>
      <ErrorSummary title="The record stays open" items={problems(state)} />
      <input type="hidden" name="lineId" value={lineId} />
      <input type="hidden" name="testId" value={testId} />
      <div className="sec">
        <h2>Outcome</h2>
      </div>
      <ChoiceGroup legend="Outcome" name="outcome" error={state.fields?.outcome?.[0]} quiet>
        {OUTCOMES.map(([value, title, detail]) => (
          <Choice
            key={value}
            name="outcome"
            value={value}
            title={title}
            detail={detail}
            checked={outcome === value}
            onChange={() => {
              setOutcome(value);
              setDisposition(null);
            }}
          />
        ))}
      </ChoiceGroup>
      <TextArea
        label="What was found, in a sentence the customer can read"
        name="finding"
        rows={3}
        error={state.fields?.finding?.[0]}
        defaultValue={kept("finding")}
      />
      <div className="sec">
        <h2>Disposition</h2>
        {outcome ? null : <span className="q">choose the outcome first</span>}
      </div>
      <ChoiceGroup legend="Disposition" name="disposition" error={state.fields?.disposition?.[0]} quiet>
        {allowed.map((d) => (
          <label className="disp" key={d}>
            <input
              type="radio"
              className="rad"
              name="disposition"
              value={d}
              checked={disposition === d}
              onChange={() => setDisposition(d)}
            />
            <span>{DISPOSITION_WORDS[d]}</span>
          </label>
        ))}
      </ChoiceGroup>
      {outcome === "damage_not_covered" ? (
        <Field
          label="Who looked too"
          name="secondPerson"
          hint="A second pair of eyes, by name."
          error={state.fields?.secondPerson?.[0]}
          defaultValue={kept("secondPerson")}
        />
      ) : null}
      {dataBearing && disposition === "restock" ? (
        <fieldset className="field sanit">
          <legend>Sanitization record</legend>
          {state.fields?.sanitization ? <p className="err">{state.fields.sanitization[0]}</p> : null}
          <Select
            label="Method"
            name="method"
            options={[
              { value: "clear", label: "Clear" },
              { value: "purge", label: "Purge" },
              { value: "destroy", label: "Destroy" },
            ]}
          />
          <Field label="Technique" name="technique" hint="Such as block erase." />
          <Field label="Tool and version" name="tool" />
          <Field label="Verification" name="verification" hint="Full or sampled, and its result." />
        </fieldset>
      ) : null}
      <Field
        label="Scan the unit out"
        name="scan"
        mono
        hint={`${serial}: two alike on one bench get swapped.`}
        error={state.fields?.scan?.[0]}
        autoComplete="off"
      />
      <div className="closefoot">
        <span className="s q">
          {open > 0
            ? `${open} ${open === 1 ? "step is" : "steps are"} not run. You can close with them open, and the record says so.`
            : "Every step is run."}
        </span>
        <Button
          aria-disabled={busy}
          reason={
            outcome === null
              ? "Choose the outcome first"
              : disposition === null
                ? "Choose what becomes of it"
                : undefined
          }
        >
          Close the record
        </Button>
      </div>
    </form>
  );
}
