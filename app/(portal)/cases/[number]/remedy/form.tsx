"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Check, Choice, ChoiceGroup } from "@/components/ui/field";
import { CautionStrip } from "@/components/ui/caution-strip";
import { FREIGHT_TOLD, type FreightRule } from "@/lib/coverage/schema";
import { chooseRemedy } from "../../../actions";

const WORDS: Record<string, [title: string, detail: string]> = {
  advance_replacement: [
    "We send a like part first",
    "You send yours within fourteen days. What does not come back is invoiced.",
  ],
  replacement_on_receipt: [
    "We send a like part when yours has arrived",
    "It leaves after our bench has seen yours.",
  ],
  repair: ["We repair yours", "It comes back to you as soon as it passes our tests."],
  credit: ["A credit", "On your account, after our bench has seen the part."],
  refund: ["Your money back", "By the way you paid, after our bench has seen the part."],
};

export function RemedyForm(p: {
  ticketId: string;
  units: { id: string; serial: string; what: string }[];
  remedies: string[];
  fees: string[];
  freight: FreightRule | null;
  battery: string;
}) {
  const [state, submit, busy] = useActionState(chooseRemedy, UNSENT as FormState<never>);
  const fields = Object.entries(state.fields ?? {}).map(([field, m]) => ({ field, message: m[0]! }));
  return (
    <form action={submit} className="question">
      <ErrorSummary
        title="Not yet authorized"
        items={fields.length > 0 ? fields : state.message && !state.ok ? [{ message: state.message }] : []}
      />
      <input type="hidden" name="ticketId" value={p.ticketId} />
      {p.units.length === 1 ? (
        <input type="hidden" name="units[]" value={p.units[0]!.id} />
      ) : (
        <ChoiceGroup
          legend="Which units"
          name="units"
          hint="They come back together, under one number."
          error={state.fields?.lines?.[0]}
        >
          {p.units.map((u) => (
            <Check
              key={u.id}
              name="units[]"
              value={u.id}
              title={
                <>
                  <span className="m">{u.serial}</span>, {u.what}
                </>
              }
              defaultChecked
            />
          ))}
        </ChoiceGroup>
      )}
      <input type="hidden" name="battery" value={p.battery} />
      <ChoiceGroup
        legend={p.units.length === 1 ? "Remedies your clause gives" : "Remedies your clauses give"}
        name="remedy"
        error={state.fields?.remedy?.[0]}
        quiet
      >
        {p.remedies.map((r, i) => (
          <Choice
            key={r}
            name="remedy"
            value={r}
            title={WORDS[r]?.[0] ?? r}
            detail={WORDS[r]?.[1]}
            defaultChecked={i === 0}
          />
        ))}
      </ChoiceGroup>
      {p.battery === "damaged" ? (
        <CautionStrip
          column
          items={[
            {
              drawing: "battery",
              title: "Do not ship it.",
              detail: "Isolate the unit and call the desk. A person arranges what follows.",
            },
          ]}
        />
      ) : null}
      <h2>What it costs</h2>
      {p.freight ? <p>{FREIGHT_TOLD[p.freight]}</p> : null}
      {p.fees.length === 0 ? (
        <p>Nothing{p.freight && p.freight !== "seller_both" ? " else" : ""}.</p>
      ) : (
        p.fees.map((f) => <p key={f}>Nothing, unless: {f}</p>)
      )}
      <p className="pact">
        <Button
          type="submit"
          aria-disabled={busy}
          reason={p.battery === "damaged" ? "A damaged battery: a person calls you first" : undefined}
        >
          {busy ? "Authorizing" : "Get the RMA"}
        </Button>
        <a href="decision">Back to the decision</a>
      </p>
    </form>
  );
}
