"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Check, Choice, ChoiceGroup, Field } from "@/components/ui/field";
import { admit, again, discard } from "./actions";

function problems(state: FormState<unknown>, heldId: string) {
  const list = Object.entries(state.fields ?? {}).flatMap(([field, messages]) =>
    messages.map((message) => ({ field: `${field}-${heldId}`, message })),
  );
  return list.length > 0 ? list : state.message && !state.ok ? [{ message: state.message }] : [];
}

/** Where a held mail goes: into a record, into a new one, or aside. */
export function HeldForm({
  heldId,
  hint,
  fromEmail,
  mayOpen,
}: {
  heldId: string;
  hint: number | null;
  fromEmail: string;
  mayOpen: boolean;
}) {
  const [state, send, busy] = useActionState(admit, UNSENT as FormState<never>);
  const [aside, put, putting] = useActionState(discard, UNSENT as FormState<never>);
  const typed = typeof state.values?.ticketNumber === "string" ? state.values.ticketNumber : undefined;
  return (
    <div className="mt-3 max-w-[620px]">
      <form action={send} className="grid gap-3">
        <ErrorSummary
          title="It stays held"
          items={[...problems(state, heldId), ...problems(aside, heldId)]}
        />
        <input type="hidden" name="heldId" value={heldId} />
        <ChoiceGroup legend="Where does it belong?" name={`to-${heldId}`}>
          <Choice
            name="to"
            value="ticket"
            title="To a ticket that is there"
            defaultChecked={state.values?.to !== "new" && (hint !== null || !mayOpen)}
          />
          {mayOpen ? (
            <Choice
              name="to"
              value="new"
              title="To a new ticket"
              detail="Its first entry is this mail."
              defaultChecked={state.values?.to === "new" || hint === null}
            />
          ) : null}
        </ChoiceGroup>
        <Field
          label="Ticket number"
          name="ticketNumber"
          id={`f-ticketNumber-${heldId}`}
          mono
          inputMode="numeric"
          autoComplete="off"
          className="max-w-[180px]"
          defaultValue={typed ?? (hint === null ? "" : String(hint))}
          error={state.fields?.ticketNumber?.[0]}
        />
        <Check
          name="takesPart"
          title={`Let ${fromEmail} write into that ticket from now on`}
          detail="Only when you know that this person has a part in it."
        />
        <div className="flex flex-wrap gap-3">
          <Button disabled={busy}>{busy ? "Letting it in" : "Let it in"}</Button>
        </div>
      </form>
      <form action={put} className="mt-1">
        <input type="hidden" name="heldId" value={heldId} />
        <Button kind="quiet" disabled={putting}>
          Put it aside: it belongs nowhere
        </Button>
      </form>
    </div>
  );
}

/** Tries a mail of ours again, under the same message id. */
export function AgainForm({ outboxId }: { outboxId: string }) {
  const [state, send, busy] = useActionState(again, UNSENT as FormState<never>);
  return (
    <form action={send}>
      <ErrorSummary title="Not sent" items={problems(state, outboxId)} />
      <input type="hidden" name="outboxId" value={outboxId} />
      <Button kind="line" disabled={busy}>
        Send it again
      </Button>
    </form>
  );
}
