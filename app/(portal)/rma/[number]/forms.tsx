"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Field } from "@/components/ui/field";
import { sent, withdraw } from "../../actions";

export function SentForm({ rmaId, number }: { rmaId: string; number: string }) {
  const [state, submit, busy] = useActionState(sent, UNSENT as FormState<never>);
  const items = Object.entries(state.fields ?? {}).map(([field, m]) => ({ field, message: m[0]! }));
  return (
    <form action={submit}>
      <ErrorSummary
        title="Not kept yet"
        items={items.length > 0 ? items : state.message && !state.ok ? [{ message: state.message }] : []}
      />
      <input type="hidden" name="rmaId" value={rmaId} />
      <input type="hidden" name="number" value={number} />
      <Field
        label="Carrier"
        name="carrier"
        error={state.fields?.carrier?.[0]}
        defaultValue={String(state.values?.carrier ?? "")}
        key={`c${String(state.values?.carrier ?? "")}`}
      />
      <Field
        label="Tracking number"
        name="tracking"
        mono
        hint="If you have one."
        defaultValue={String(state.values?.tracking ?? "")}
        key={`t${String(state.values?.tracking ?? "")}`}
      />
      <p className="pact">
        <Button type="submit" kind="line" aria-disabled={busy}>
          I have sent it
        </Button>
      </p>
    </form>
  );
}

export function WithdrawForm({ rmaId, number }: { rmaId: string; number: string }) {
  const [state, submit, busy] = useActionState(withdraw, UNSENT as FormState<never>);
  return (
    <form action={submit}>
      <ErrorSummary
        title="Not withdrawn"
        items={state.message && !state.ok ? [{ message: state.message }] : []}
      />
      <input type="hidden" name="rmaId" value={rmaId} />
      <input type="hidden" name="number" value={number} />
      <p className="pact">
        <Button type="submit" kind="quiet" aria-disabled={busy}>
          Withdraw {number}
        </Button>
      </p>
    </form>
  );
}
