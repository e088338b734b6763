"use client";
import { useActionState, type ReactNode } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Field } from "@/components/ui/field";
import { givenOn, moved, noticed, paused } from "./actions";

type Unit = { unitId: string; serial: string };
type Act = (state: FormState<{ serial: string }>, form: FormData) => Promise<FormState<{ serial: string }>>;
type FieldOf = (
  name: string,
  label: string,
  more?: { hint?: string; day?: boolean; mono?: boolean },
) => ReactNode;

function Note({
  unit,
  act,
  summary,
  button,
  hint,
  children,
}: {
  unit: Unit;
  act: Act;
  summary: string;
  button: string;
  hint: string;
  children: (field: FieldOf) => ReactNode;
}) {
  const [state, send, busy] = useActionState(act, UNSENT as FormState<{ serial: string }>);
  const fields = Object.entries(state.fields ?? {}).flatMap(([field, list]) =>
    list.map((message) => ({ field, message })),
  );
  const items = fields.length > 0 ? fields : state.message && !state.ok ? [{ message: state.message }] : [];
  const field: FieldOf = (name, label, more = {}) => (
    <Field
      label={label}
      name={name}
      type={more.day ? "date" : "text"}
      mono={more.day || more.mono}
      hint={more.hint}
      error={state.fields?.[name]?.[0]}
      defaultValue={String(state.values?.[name] ?? "")}
      key={`${name} ${String(state.values?.[name] ?? "")}`}
      autoComplete="off"
    />
  );
  return (
    <details className="more" open={items.length > 0 ? true : undefined}>
      <summary>{summary}</summary>
      <form action={send} className="noteform">
        <ErrorSummary title="Nothing was noted" items={items} />
        <input type="hidden" name="unitId" value={unit.unitId} />
        <input type="hidden" name="serial" value={unit.serial} />
        <div className="findings">{children(field)}</div>
        <p className="hint">{hint}</p>
        <Button kind="line" aria-disabled={busy}>
          {button}
        </Button>
      </form>
    </details>
  );
}

/** What has become of a unit at the customer's: each note changes its cover by the clause that names it. */
export function Holding({
  unit,
  sold,
  part,
  waits,
}: {
  unit: Unit;
  sold: boolean;
  part: boolean;
  waits: boolean;
}) {
  return (
    <>
      {sold ? (
        <Note
          unit={unit}
          act={givenOn}
          summary="Given on to another company"
          button="Note who holds it now"
          hint="The sale goes along with its days and terms. Whether cover does, its transfer clause says."
        >
          {(field) => (
            <>
              {field("accountCode", "Code of the account", { mono: true })}
              {field("onDay", "Given on on", { day: true })}
              {field("noticedOn", "Written notice of", { day: true, hint: "if there is one" })}
            </>
          )}
        </Note>
      ) : null}
      {waits ? (
        <Note
          unit={unit}
          act={noticed}
          summary="The written notice has come"
          button="Note the notice"
          hint="The day on the letter or mail that told us."
        >
          {(field) => field("noticedOn", "Notice of", { day: true })}
        </Note>
      ) : null}
      {sold ? (
        <Note
          unit={unit}
          act={paused}
          summary="Its cover rested"
          button="Note the pause"
          hint="Both ends count. Where the clause lets the clock stop, the days are added to the end."
        >
          {(field) => (
            <>
              {field("from", "First day", { day: true })}
              {field("to", "Last day", { day: true })}
              {field("reason", "Why")}
            </>
          )}
        </Note>
      ) : null}
      {part ? (
        <Note
          unit={unit}
          act={moved}
          summary="Moved to another system"
          button="Note where it stands"
          hint="It keeps the terms it was sold under. Into another customer’s system, it counts as given on."
        >
          {(field) => (
            <>
              {field("toSerial", "Serial of that system", { mono: true })}
              {field("slot", "Slot")}
              {field("onDay", "Since", { day: true })}
              {field("noticedOn", "Written notice of", { day: true, hint: "if another customer’s" })}
            </>
          )}
        </Note>
      ) : null}
    </>
  );
}
