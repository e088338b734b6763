import { capital, countWord, plural } from "@/lib/base/show";
import { Button } from "../ui/button";
import { CautionStrip } from "../ui/caution-strip";
import { ErrorSummary } from "../ui/error-summary";
import { Choice, ChoiceGroup, Field, Select, TextArea } from "../ui/field";
import type { CheckPage } from "./check-form";

/** One report for every unit chosen in the table above it. */
export function CheckStart({
  page,
  count,
  busy,
  faults,
  forCustomer,
}: {
  page: CheckPage;
  count: number;
  busy: boolean;
  faults: readonly { value: string; words: string }[];
  forCustomer: boolean;
}) {
  const { problem, typed } = page;
  const list = Object.entries(problem?.fields ?? {}).flatMap(([field, all]) =>
    all.map((message) => ({ field: field === "unitIds" || field === "units" ? "units[]" : field, message })),
  );
  const error = (field: string) => problem?.fields[field]?.[0];
  return (
    <section className="ck-start" aria-labelledby="ck-start">
      <h2 id="ck-start">Report a fault for the chosen units</h2>
      <p>
        One report for all of them: one fault, one customer, fifty units at most. It counts from today, and
        the decision for each follows at once.
      </p>
      <ErrorSummary
        title="Nothing was reported yet"
        items={list.length > 0 ? list : problem ? [{ message: problem.message }] : []}
      />
      <p className="ck-count">
        <span aria-live="polite">
          {count === 0
            ? "None is chosen yet."
            : `${capital(countWord(count))} ${plural(count, "is", "are")} chosen.`}
        </span>{" "}
        <button type="submit" name="choose" value="all" className="linklike">
          Choose {page.startable > 50 ? "the first fifty" : "all"} that can be
        </button>
        {page.chosen.length > 0 ? (
          <button type="submit" name="choose" value="none" className="linklike">
            Choose none
          </button>
        ) : null}
      </p>
      <Select
        label="What do they do?"
        name="faultClass"
        error={error("faultClass")}
        defaultValue={typed.faultClass ?? ""}
        key={`f${typed.faultClass ?? ""}`}
      >
        <option value="">Choose what comes closest</option>
        {faults.map((f) => (
          <option key={f.value} value={f.value}>
            {f.words}
          </option>
        ))}
      </Select>
      <TextArea
        label={forCustomer ? "In the customer’s words" : "In your words"}
        name="words"
        hint="What was seen, what was tried, what changed before it."
        error={error("words")}
        defaultValue={typed.words ?? ""}
      />
      <ChoiceGroup
        legend="Batteries"
        name="battery"
        hint="Boards hold a coin cell, some controllers a pack."
        error={error("battery")}
      >
        {problem?.fields.battery && typed.battery === "damaged" ? (
          <CautionStrip
            column
            items={[
              {
                drawing: "battery",
                title: "Do not ship it.",
                detail: "Keep it apart, away from what burns, and call the desk.",
              },
            ]}
          />
        ) : null}
        <Choice
          name="battery"
          value="none"
          title="No battery in any of them"
          defaultChecked={typed.battery === "none"}
        />
        <Choice
          name="battery"
          value="inside"
          title="Batteries inside, and they look as they should"
          defaultChecked={typed.battery === "inside"}
        />
        <Choice
          name="battery"
          value="damaged"
          title="One is swollen, hot, leaking or dented"
          detail="Do not ship it. Keep it apart, away from what burns. A person arranges what follows."
          defaultChecked={typed.battery === "damaged"}
        />
      </ChoiceGroup>
      <ChoiceGroup
        legend="Data"
        name="data"
        hint="Drives, boot modules and some controllers hold data."
        error={error("data")}
      >
        <Choice
          name="data"
          value="cleared"
          title={
            forCustomer
              ? "The customer clears it, or nothing is on them"
              : "I clear it, or nothing is on them"
          }
          defaultChecked={typed.data === "cleared"}
        />
        <Choice
          name="data"
          value="sanitize"
          title={forCustomer ? "We sanitize it" : "You sanitize it"}
          detail={forCustomer ? "The customer gets a sanitization record." : "You get a sanitization record."}
          defaultChecked={typed.data === "sanitize"}
        />
      </ChoiceGroup>
      {forCustomer ? (
        <div className="ck-two">
          <Field
            label="Whose report it is"
            name="personEmail"
            type="email"
            hint="Their e-mail. Left empty: the customer’s first contact."
            error={error("personEmail")}
            defaultValue={typed.personEmail ?? ""}
          />
          <Field
            label="Their name"
            name="personName"
            error={error("personName")}
            defaultValue={typed.personName ?? ""}
          />
        </div>
      ) : null}
      <p className="pact">
        <Button name="intent" value="start" aria-disabled={busy}>
          {busy ? "Reporting" : "Report the fault"}
        </Button>
      </p>
    </section>
  );
}
