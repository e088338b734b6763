"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Check, Field } from "@/components/ui/field";
import { Tag } from "@/components/ui/tag";
import { back, money, shipOut } from "../actions";

type Candidate = {
  serial: string;
  modelName: string;
  place: string | null;
  condition: string;
  fits: boolean;
  same: boolean;
  reasons: string[];
  warnings: string[];
};
type Props = {
  lineId: string;
  remedy: string;
  disposition: string;
  outcome: string;
  candidates: Candidate[];
};

const problems = (state: FormState<unknown>) => {
  const list = Object.entries(state.fields ?? {}).flatMap(([field, m]) =>
    m.map((message) => ({ field, message })),
  );
  return list.length > 0 ? list : state.message && !state.ok ? [{ message: state.message }] : [];
};

/** What follows the test: a replacement scanned out, the same unit back, or money. */
export function GoesOut({ lineId, remedy, disposition, outcome, candidates }: Props) {
  const [state, send, busy] = useActionState(shipOut, UNSENT as FormState<never>);
  const [backState, sendBackForm, backBusy] = useActionState(back, UNSENT as FormState<never>);
  const [moneyState, sendMoney, moneyBusy] = useActionState(money, UNSENT as FormState<never>);
  const kept = (name: string) =>
    typeof state.values?.[name] === "string" ? (state.values[name] as string) : "";
  const sameBack = disposition === "send_back" || (disposition === "repair" && remedy === "repair");
  const fitting = candidates.filter((c) => c.fits);
  const others = candidates.filter((c) => !c.fits).slice(0, 6);
  if (sameBack) {
    return (
      <form action={sendBackForm} className="actform">
        <h2>What goes out</h2>
        <ErrorSummary title="Not sent" items={problems(backState)} />
        <input type="hidden" name="lineId" value={lineId} />
        <p>
          {outcome === "fault_confirmed"
            ? "Repaired, the same unit goes back."
            : "The same unit goes back to the customer."}
        </p>
        <div className="pair">
          <Field label="Carrier" name="carrier" error={backState.fields?.carrier?.[0]} />
          <Field label="Tracking number" name="tracking" mono />
        </div>
        <Button aria-disabled={backBusy}>Send it back</Button>
      </form>
    );
  }
  if (remedy === "credit" || remedy === "refund") {
    return (
      <form action={sendMoney} className="actform">
        <h2>What goes out</h2>
        <ErrorSummary title="Not settled" items={problems(moneyState)} />
        <input type="hidden" name="lineId" value={lineId} />
        <p>The remedy is a {remedy}. Nothing goes out; the sale ends, and the customer is told.</p>
        <Button aria-disabled={moneyBusy}>Settle by {remedy}</Button>
      </form>
    );
  }
  return (
    <form action={send} className="actform" key={kept("serial")}>
      <h2>What goes out</h2>
      <ErrorSummary title="Nothing was shipped" items={problems(state)} />
      <input type="hidden" name="lineId" value={lineId} />
      {fitting.length > 0 ? (
        <ul className="candidates" aria-label="In stock, the same or better">
          {fitting.slice(0, 6).map((c) => (
            <li key={c.serial}>
              <Tag serial={c.serial} part />
              <span>
                {c.modelName}, {c.condition},{" "}
                <span className="nw">
                  bay <span className="m">{c.place ?? "none"}</span>
                </span>
                {c.same ? "" : ", better"}
                {c.warnings.map((w) => (
                  <span className="s block" key={w}>
                    {w}
                  </span>
                ))}
              </span>
            </li>
          ))}
        </ul>
      ) : (
        <p className="q">Nothing in stock is the same or better. Order one, or settle otherwise.</p>
      )}
      {others.length > 0 ? (
        <details>
          <summary>{others.length} in stock do not fit, and why</summary>
          <ul className="candidates">
            {others.map((c) => (
              <li key={c.serial}>
                <Tag serial={c.serial} part />
                <span className="s">{c.reasons.join(" ")}</span>
              </li>
            ))}
          </ul>
        </details>
      ) : null}
      <Field
        label="Scan the replacement out"
        name="serial"
        mono
        error={state.fields?.serial?.[0]}
        defaultValue={kept("serial")}
        autoComplete="off"
      />
      {state.fields?.acceptWarnings ? (
        <Check
          name="acceptWarnings"
          value="1"
          title="I have thought of it, and the customer knows."
          detail={state.fields.acceptWarnings.join(" ")}
        />
      ) : null}
      <div className="pair">
        <Field
          label="Carrier"
          name="carrier"
          error={state.fields?.carrier?.[0]}
          defaultValue={kept("carrier")}
        />
        <Field label="Tracking number" name="tracking" mono defaultValue={kept("tracking")} />
      </div>
      <Button aria-disabled={busy}>{busy ? "Shipping" : "Ship it and tell the customer"}</Button>
    </form>
  );
}
