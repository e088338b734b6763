"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Check, Field, Select, TextArea } from "@/components/ui/field";
import { REMEDIES, REMEDY_WORDS, type Remedy } from "@/lib/coverage/schema";
import { keepTyped, problems } from "../desk/[number]/form-parts";
import { answer } from "./actions";

/** Grant or decline, with the decision it is answered by: an answer by an older one is refused. */
export function AnswerForm({
  goodwillId,
  decisionId,
  serial,
  wanted,
  nothingToGrant,
}: {
  goodwillId: string;
  decisionId: string;
  serial: string;
  wanted: Remedy;
  /** The newest decision covers it. */
  nothingToGrant: boolean;
}) {
  const [state, send, busy] = useActionState(answer, UNSENT as FormState<never>);
  const typed = (name: string) => String(state.values?.[name] ?? "");
  const at = (name: string) => ({
    id: `f-${name}-${goodwillId}`,
    error: state.fields?.[name]?.[0],
    defaultValue: typed(name),
  });
  return (
    <form action={send} className="gw-form" aria-label={`Answer for ${serial}`} onReset={keepTyped}>
      <ErrorSummary
        title="It is not answered yet"
        items={problems(state).map((p) => ("field" in p ? { ...p, field: `${p.field}-${goodwillId}` } : p))}
      />
      <input type="hidden" name="goodwillId" value={goodwillId} />
      <input type="hidden" name="decisionId" value={decisionId} />
      <div className="gw-two">
        <Select
          label="Remedy"
          name="remedy"
          {...at("remedy")}
          defaultValue={typed("remedy") || wanted}
          options={REMEDIES.map((r) => ({ value: r, label: REMEDY_WORDS[r] }))}
        />
        <Field
          label="May cost us at most, EUR"
          name="limit"
          mono
          inputMode="decimal"
          autoComplete="off"
          {...at("limit")}
        />
      </div>
      <TextArea
        label="Your words"
        hint="For us only. Needed to decline."
        name="words"
        rows={2}
        {...at("words")}
      />
      <Check
        name="tell"
        title="Write to the customer now that we make an exception"
        detail="Otherwise they learn it with the papers of the return. The limit is never told."
        defaultChecked={typed("tell") === "on"}
      />
      <div className="acts">
        <Button
          name="answer"
          value="granted"
          aria-disabled={busy}
          reason={nothingToGrant ? "Grant: it is covered now" : undefined}
        >
          Grant it
        </Button>
        <Button kind="line" name="answer" value="declined" aria-disabled={busy}>
          Decline it
        </Button>
      </div>
    </form>
  );
}
