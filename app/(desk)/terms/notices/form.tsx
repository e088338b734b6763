"use client";
import { useActionState, useState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { LawAside } from "@/components/coverage/law-notice";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Field, Select, TextArea } from "@/components/ui/field";
import { capital } from "@/lib/base/show";
import { REGION_WORDS } from "@/lib/coverage/law";
import { LAW_REGIONS, type LawRegion } from "@/lib/coverage/schema";
import { keep } from "./actions";

/** A notice to be shown from a day on, seen as the customer will see it while it is written. */
export function NoticeForm() {
  const [state, send, busy] = useActionState(keep, UNSENT as FormState<{ kept: boolean }>);
  const typed = (name: string) => String(state.values?.[name] ?? "");
  const [title, setTitle] = useState(typed("title"));
  const [words, setWords] = useState(typed("words"));
  const [region, setRegion] = useState(typed("region") || "EU");
  const error = (name: string) => state.fields?.[name]?.[0];
  const listed = Object.entries(state.fields ?? {}).flatMap(([field, list]) =>
    list.map((message) => ({ field, message })),
  );
  const items = listed.length > 0 ? listed : state.message && !state.ok ? [{ message: state.message }] : [];
  return (
    <form action={send} className="lawform">
      <ErrorSummary title="It is not kept yet" items={items} />
      <div className="findings">
        <Select
          label="Where"
          name="region"
          error={error("region")}
          value={region}
          onChange={(e) => setRegion(e.target.value)}
          options={LAW_REGIONS.map((r) => ({ value: r, label: capital(REGION_WORDS[r]) }))}
        />
        <Select
          label="Shown to"
          name="buyer"
          defaultValue={typed("buyer") || "consumer"}
          key={`b${typed("buyer")}`}
          options={[
            { value: "consumer", label: "Consumers, and buyers we do not know" },
            { value: "business", label: "Businesses" },
          ]}
        />
        <Field
          label="Shown from"
          name="effectiveOn"
          type="date"
          mono
          error={error("effectiveOn")}
          defaultValue={typed("effectiveOn")}
          key={`d${typed("effectiveOn")}`}
        />
      </div>
      <Field
        label="Title"
        name="title"
        error={error("title")}
        value={title}
        onChange={(e) => setTitle(e.target.value)}
        autoComplete="off"
      />
      <TextArea
        label="In two to four plain sentences"
        name="words"
        hint="It stands beside our terms and decides nothing. Write “our warranty”, never that there are no rights."
        error={error("words")}
        value={words}
        onChange={(e) => setWords(e.target.value)}
      />
      <Field
        label="Source"
        name="source"
        hint="The statute by its section, or that it is common practice. Staff see it."
        error={error("source")}
        defaultValue={typed("source")}
        key={`s${typed("source")}`}
        autoComplete="off"
      />
      {title || words ? (
        <LawAside
          notice={{
            region: region as LawRegion,
            forConsumers: true,
            effectiveOn: "",
            title: title || "…",
            words: words || "…",
            source: "",
          }}
        />
      ) : null}
      <Button aria-disabled={busy}>Keep this notice</Button>
    </form>
  );
}
