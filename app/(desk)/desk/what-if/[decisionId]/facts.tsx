import { Field, Select } from "@/components/ui/field";
import { capital, showDay } from "@/lib/base/show";
import {
  EXCLUSIONS,
  EXCLUSION_WORDS,
  FAULT_CLASSES,
  FAULT_WORDS,
  type ClauseFact,
  type DecideInput,
} from "@/lib/coverage/schema";

type Props = {
  input: DecideInput;
  clause: ClauseFact | null;
  typed: Record<string, string>;
  errors: Record<string, string>;
};

const known = (day: string | null) => (day ? `now ${showDay(day)}` : "now not known");

/** The facts that can be put otherwise. Empty means: as it stands, which each field's hint says. */
export function Facts({ input, clause, typed, errors }: Props) {
  const { sale } = input;
  const text = (name: string, label: string, hint: string, more: object = {}) => (
    <Field
      label={label}
      name={name}
      hint={hint}
      error={errors[name]}
      defaultValue={typed[name] ?? ""}
      autoComplete="off"
      mono
      {...more}
    />
  );
  const day = (name: string, label: string, hint: string) => text(name, label, hint, { type: "date" });
  const choice = (name: string, label: string, hint: string, options: [string, string][]) => (
    <Select
      label={label}
      name={name}
      hint={hint}
      error={errors[name]}
      defaultValue={typed[name] ?? ""}
      options={[{ value: "", label: "As it stands" }, ...options.map(([value, label]) => ({ value, label }))]}
    />
  );
  const exclusions = EXCLUSIONS.map((e): [string, string] => [e, capital(EXCLUSION_WORDS[e])]);
  return (
    <>
      <fieldset className="wset">
        <legend>Days</legend>
        {day("claimOn", "Claim day", known(input.claimOn))}
        {day("shippedOn", "Shipped", known(sale.shippedOn))}
        {day("deliveredOn", "Delivered", known(sale.deliveredOn))}
        {day("invoicedOn", "Invoiced", known(sale.invoicedOn))}
        {day("installedOn", "Set up", known(sale.installedOn))}
        {day("swappedOn", "Fitted anew on", "a swap more")}
        {day("pauseFrom", "A pause more, from", "both ends counted")}
        {day("pauseTo", "to", "")}
        {sale.transfers.length > 0 ? day("noticedOn", "Notice of giving it on", "the last one") : null}
      </fieldset>
      <fieldset className="wset">
        <legend>Fault and findings</legend>
        {choice(
          "faultClass",
          "Kind of fault",
          `now: ${FAULT_WORDS[input.faultClass].toLowerCase()}`,
          FAULT_CLASSES.map((c) => [c, FAULT_WORDS[c]]),
        )}
        {choice("shown", "The evidence shows", "", exclusions)}
        {choice("ruledOut", "Ruled out", "", exclusions)}
        {text("photos", "Photos on record", `now ${input.evidence.photos}`, { inputMode: "numeric" })}
        {text("hours", "Hours in the log", `now ${input.readings.powerOnHours ?? "not read"}`, {
          inputMode: "numeric",
        })}
        {text("terabytes", "Terabytes written", "", { inputMode: "decimal" })}
        {choice("log", "The log names", "", [
          ["this", "this serial"],
          ["other", "another serial"],
          ["none", "no serial"],
        ])}
      </fieldset>
      {clause ? (
        <fieldset className="wset">
          <legend>
            Clause {clause.number}, {clause.title.toLowerCase()}
          </legend>
          {text("period", "Period", `now ${clause.period}`, { size: 8 })}
          {choice("startBasis", "Counts from", "", [
            ["shipped", "the ship day"],
            ["delivered", "delivery"],
            ["invoiced", "the invoice day"],
            ["installed", "setting it up"],
          ])}
          {choice("dayRule", "The first day", "", [
            ["event_day_excluded", "is not counted"],
            ["start_day_included", "is counted"],
          ])}
        </fieldset>
      ) : null}
    </>
  );
}
