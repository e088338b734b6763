"use client";
import Link from "next/link";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Check, ChoiceGroup, Field, Select, TextArea } from "@/components/ui/field";
import type { ClauseKind } from "@/lib/coverage/schema";
import { drop, keep } from "../actions";
import { problemsOf } from "../state";
import type { Choices, Values } from "./fields";

type Props = {
  versionId: string;
  version: number;
  clauseId?: string;
  kind: ClauseKind;
  heading: string;
  /** The fields that this kind of clause has. */
  fields: readonly string[];
  choices: Choices;
  first: Values;
  back: string;
};

const PERIOD: Record<ClauseKind, [label: string, hint: string]> = {
  doa: ["Window", "Such as P30D: thirty days."],
  cover: ["Period", "Such as P36M or P90D."],
  replaced_part: [
    "Floor",
    "From the swap, such as P90D. Empty where only the rest of the first cover counts.",
  ],
  transfer: ["Notice within", "Such as P30D. Empty: whenever we are told."],
  exclusion: ["", ""],
  fee: ["", ""],
};
const PLACES = ["First", "Then", "Or else", "Or else", "Or else"];

/** One clause opened to be changed. What was refused comes back as typed, each reason at its field. */
export function ClauseForm(props: Props) {
  const { versionId, clauseId, kind, choices } = props;
  const [state, send, busy] = useActionState(keep, UNSENT as FormState<never>);
  const [gone, sendDrop, dropping] = useActionState(drop, UNSENT as FormState<never>);
  const values: Values = state.values ?? props.first;
  // Who was told of another's change saves over it knowingly.
  const theirs = state.details;
  const version = typeof theirs?.version === "number" ? theirs.version : props.version;
  const has = (field: string) => props.fields.includes(field);
  const of = (name: string) => (typeof values[name] === "string" ? values[name] : "");
  const all = (name: string) => [values[name] ?? []].flat();
  const error = (name: string) => state.fields?.[name]?.join(" ");
  const text = (name: string) => ({ name, defaultValue: of(name), error: error(name), autoComplete: "off" });
  const pick = (name: keyof Choices) => ({
    name,
    defaultValue: of(name),
    error: error(name),
    options: choices[name],
  });
  const remedies = all("remedies[]").filter(Boolean);
  return (
    <div className="clauseform">
      <form action={send}>
        <h3>{props.heading}</h3>
        <ErrorSummary title="It is not kept yet" items={[...problemsOf(state), ...problemsOf(gone)]} />
        {typeof theirs?.theirs === "string" ? (
          <p className="theirs">
            <b>As {String(theirs.by)} left it:</b> {theirs.theirs}
          </p>
        ) : null}
        <input type="hidden" name="versionId" value={versionId} />
        <input type="hidden" name="version" value={version} />
        <input type="hidden" name="kind" value={kind} />
        {clauseId ? <input type="hidden" name="clauseId" value={clauseId} /> : null}
        {/* Made anew when it comes back, so that every field shows what was typed. */}
        <div className="cfields" key={JSON.stringify(values)}>
          <Field label="Number" mono {...text("number")} />
          <div className="wide">
            <Field label="About" {...text("title")} />
          </div>
          {has("families") ? (
            <div className="all">
              <ChoiceGroup legend="Parts it is for" name="families" error={error("families")}>
                <div className="scope">
                  <label className="chk">
                    <input
                      type="radio"
                      className="rad"
                      name="parts"
                      value="every"
                      defaultChecked={of("parts") !== "named"}
                    />
                    Every part that no other clause names
                  </label>
                  <label className="chk">
                    <input
                      type="radio"
                      className="rad"
                      name="parts"
                      value="named"
                      defaultChecked={of("parts") === "named"}
                    />
                    These families only
                  </label>
                </div>
                <div className="families">
                  {choices.families.map((f) => (
                    <Check
                      key={f.value}
                      name="families[]"
                      value={f.value}
                      title={f.label}
                      defaultChecked={all("families[]").includes(f.value)}
                    />
                  ))}
                </div>
              </ChoiceGroup>
            </div>
          ) : null}
          {has("condition") ? <Select label="Condition" {...pick("condition")} /> : null}
          {has("replacedRule") ? (
            <div className="wide">
              <Select label="A part we fit has" {...pick("replacedRule")} />
            </div>
          ) : null}
          {has("transferRule") ? (
            <div className="wide">
              <Select label="When it is given on" {...pick("transferRule")} />
            </div>
          ) : null}
          {has("period") ? (
            <Field
              label={PERIOD[kind][0]}
              hint={PERIOD[kind][1]}
              mono
              {...text("period")}
              spellCheck={false}
            />
          ) : null}
          {has("startBasis") ? (
            <Select label="Runs from" hint="Not known: the ship day." {...pick("startBasis")} />
          ) : null}
          {has("deliveryGraceDays") ? (
            <Field
              label="Days added then"
              hint="To the ship day, without proof."
              inputMode="numeric"
              mono
              {...text("deliveryGraceDays")}
            />
          ) : null}
          {has("dayRule") ? (
            <Select label="The day itself" hint="The day the period runs from." {...pick("dayRule")} />
          ) : null}
          {has("enduranceHours") ? (
            <Field
              label="Hours of use, at most"
              hint="Empty: no limit."
              inputMode="numeric"
              mono
              {...text("enduranceHours")}
            />
          ) : null}
          {has("enduranceTb") ? (
            <Field
              label="Terabytes written, at most"
              hint="Empty: no limit."
              inputMode="numeric"
              mono
              {...text("enduranceTb")}
            />
          ) : null}
          {has("rolls") || has("clockStops") ? (
            <div className="all">
              {has("rolls") ? (
                <Check
                  name="rolls"
                  title="A last day that is no working day moves to the next that is"
                  defaultChecked={of("rolls") === "on"}
                />
              ) : null}
              {has("clockStops") ? (
                <Check
                  name="clockStops"
                  title="Pauses add their days to the end"
                  defaultChecked={of("clockStops") === "on"}
                />
              ) : null}
            </div>
          ) : null}
          {has("remedies") ? (
            <div className="all">
              <ChoiceGroup
                legend="Remedies, in order"
                hint="The customer is offered the first that can be done."
                name="remedies"
                error={error("remedies")}
              >
                <div className="remedies">
                  {PLACES.map((place, i) => (
                    <label key={i}>
                      <span className="s">{place}</span>
                      <select className="in" name="remedies[]" defaultValue={remedies[i] ?? ""}>
                        {choices.remedies.map((o) => (
                          <option key={o.value} value={o.value}>
                            {o.label}
                          </option>
                        ))}
                      </select>
                    </label>
                  ))}
                </div>
              </ChoiceGroup>
            </div>
          ) : null}
          {has("dueBackDays") ? (
            <Field
              label="Old part due back, days"
              hint="After an advance replacement."
              inputMode="numeric"
              mono
              {...text("dueBackDays")}
            />
          ) : null}
          {has("holdCents") ? (
            <Field
              label="Held in advance, EUR"
              hint="Until the old part is back."
              inputMode="decimal"
              mono
              {...text("holdCents")}
            />
          ) : null}
          {has("responseHours") ? (
            <Field
              label="We answer within, hours"
              hint="Working hours."
              inputMode="numeric"
              mono
              {...text("responseHours")}
            />
          ) : null}
          {has("freight") ? (
            <div className="wide">
              <Select label="Freight" {...pick("freight")} />
            </div>
          ) : null}
          {has("exclusion") ? <Select label="Leaves out" {...pick("exclusion")} /> : null}
          {has("evidence") ? (
            <div className="wide">
              <TextArea
                label="Evidence that shows it"
                hint="One a line, such as: photo of the damage. The first is asked for."
                name="evidence"
                rows={3}
                defaultValue={of("evidence")}
                error={error("evidence")}
              />
            </div>
          ) : null}
          {has("feeKind") ? <Select label="Fee for" {...pick("feeKind")} /> : null}
          {has("feeCents") ? (
            <Field
              label="Amount, EUR"
              hint="Never charged to a consumer on a fault."
              inputMode="decimal"
              mono
              {...text("feeCents")}
            />
          ) : null}
          <div className="all">
            <TextArea
              label="In our words"
              hint={
                kind === "fee"
                  ? "They tell the customer of the fee before; the amount follows them."
                  : "Plain words that the customer reads."
              }
              name="words"
              rows={2}
              defaultValue={of("words")}
              error={error("words")}
            />
          </div>
        </div>
        <div className="acts">
          <Button aria-disabled={busy}>
            {theirs?.by ? `Keep mine over ${String(theirs.by)}’s change` : "Keep this clause"}
          </Button>
          <Link href={props.back}>Leave it as it is</Link>
        </div>
      </form>
      {clauseId ? (
        <form action={sendDrop} className="dropform">
          <input type="hidden" name="versionId" value={versionId} />
          <input type="hidden" name="version" value={props.version} />
          <input type="hidden" name="clauseId" value={clauseId} />
          <Button kind="quiet" aria-disabled={dropping}>
            Take this clause out
          </Button>
        </form>
      ) : null}
    </div>
  );
}
