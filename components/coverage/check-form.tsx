"use client";
import { useState, type ReactNode } from "react";
import { Button } from "../ui/button";
import { ErrorSummary } from "../ui/error-summary";
import { Field, TextArea } from "../ui/field";
import { CheckStart } from "./check-start";
import { CheckTable, type CheckRow } from "./check-table";

export type CheckAsk = { filter: string; words: string };

/** What one check answers, as its page shows it. */
export type CheckPage = {
  day: string;
  dayWords: string;
  text: string;
  sentence: string;
  notes: string[];
  /** The filters that hold a line, in words with their count. */
  filters: CheckAsk[];
  show: string;
  rows: CheckRow[];
  /** Lines of this filter that are not on the page. */
  more: number;
  total: number;
  chosen: string[];
  startable: number;
  formId: string;
  /** What stopped the start of a report. */
  problem: { message: string; fields: Record<string, string[]> } | null;
  typed: Record<string, string>;
};

type Props = {
  submit: (form: FormData) => void;
  busy: boolean;
  page: CheckPage | null;
  /** What a refused check says, and what was typed. */
  message: string | null;
  fields: Record<string, string[]>;
  typed: { text: string; day: string };
  today: string;
  formId: string;
  maxBytes: number;
  csv: string;
  back: ReactNode;
  faults: readonly { value: string; words: string }[];
  /** Who may report a fault from here, and whether for somebody else. */
  starts: "self" | "for_customer" | null;
  customers: boolean;
};

const TOO_LARGE = "This file is over 1 MiB. Leave the serials only, or split it and check each part.";

/**
 * The whole check in one form: what is asked, what is shown of the answer, the CSV, and the report for
 * what was chosen. Every button sends it whole, so it works without script too.
 */
export function CheckForm(p: Props) {
  const { page } = p;
  const [large, setLarge] = useState(false);
  const [picked, setPicked] = useState<number | null>(null);
  const list = Object.entries(p.fields).flatMap(([field, all]) => all.map((message) => ({ field, message })));
  const items = large
    ? [{ field: "file", message: TOO_LARGE }]
    : list.length > 0
      ? list
      : p.message
        ? [{ message: p.message }]
        : [];
  const shown = new Set(page?.rows.flatMap((r) => (r.unitId ? [r.unitId] : [])));
  const hidden = page?.chosen.filter((id) => !shown.has(id)) ?? [];
  const asks = (
    <>
      <TextArea
        label="Serials"
        name="text"
        mono
        rows={page ? 6 : 10}
        spellCheck={false}
        autoComplete="off"
        hint="One on each line, or a table with a column of them. Blanks, dashes and capitals do not matter. Up to 5 000 lines."
        error={p.fields.text?.[0]}
        defaultValue={page?.text ?? p.typed.text}
      />
      <div className="ck-two">
        <Field
          label="Or a file"
          name="file"
          type="file"
          accept=".csv,.tsv,.txt,text/csv,text/plain,text/tab-separated-values"
          hint="Text or CSV, up to 1 MiB. It takes the place of what is pasted."
          error={large ? TOO_LARGE : p.fields.file?.[0]}
        />
        <Field
          label="Cover on"
          name="day"
          type="date"
          hint="Today, or any other day."
          error={p.fields.day?.[0]}
          defaultValue={page?.day ?? (p.typed.day || p.today)}
        />
      </div>
      <div className="acts ck-acts">
        <Button aria-disabled={p.busy}>{p.busy ? "Checking" : page ? "Check again" : "Check them"}</Button>
        {page ? null : <Csv href={p.csv} />}
        {page ? null : p.back}
      </div>
    </>
  );
  return (
    <form
      action={p.submit}
      className={page ? "ck ck-done" : "ck"}
      noValidate
      onSubmit={(e) => {
        const file = e.currentTarget.elements.namedItem("file");
        const size = file instanceof HTMLInputElement ? (file.files?.[0]?.size ?? 0) : 0;
        setLarge(size > p.maxBytes);
        if (size > p.maxBytes) e.preventDefault();
        setPicked(null);
      }}
      onChange={(e) => {
        const boxes = e.currentTarget.querySelectorAll(
          'input[name="units[]"]:checked, input[name="units[]"][type="hidden"]',
        );
        setPicked(boxes.length);
      }}
    >
      <ErrorSummary title="Not checked yet" items={items} />
      <input type="hidden" name="formId" value={page?.formId ?? p.formId} />
      {page ? (
        <>
          {/* Enter in a field checks again; it never changes what is shown or sends a report. */}
          <div className="ck-answer" role="status">
            <h2>{page.sentence}</h2>
            {page.notes.map((n) => (
              <p key={n}>{n}</p>
            ))}
          </div>
          <details className="ck-asked" open={items.length > 0 || undefined}>
            <summary>Change the list or the day</summary>
            {asks}
          </details>
          <input type="hidden" name="shown" value={page.show} />
          <div className="ck-bar">
            <p className="ck-show">
              Show{" "}
              {page.filters.map((f, i) => (
                <span key={f.filter}>
                  {i === 0 ? "" : i === 1 ? ", or only " : i === page.filters.length - 1 ? " or " : ", "}
                  <button
                    type="submit"
                    name="show"
                    value={f.filter}
                    className="linklike"
                    aria-pressed={f.filter === page.show}
                  >
                    {f.words}
                  </button>
                </span>
              ))}
              .
            </p>
            <Csv href={p.csv} />
          </div>
          <CheckTable
            key={`${page.show}:${page.chosen.join()}`}
            rows={page.rows}
            chosen={new Set(page.chosen)}
            choosable={p.starts !== null}
            customers={p.customers}
          />
          {hidden.map((id) => (
            <input key={id} type="hidden" name="units[]" value={id} />
          ))}
          {page.more > 0 ? (
            <p className="ck-more">
              The first {page.rows.length} are on this page, {page.more} more are not. The CSV has all{" "}
              {page.total}.
            </p>
          ) : null}
          {p.starts && page.startable > 0 ? (
            <CheckStart
              page={page}
              count={picked ?? page.chosen.length}
              busy={p.busy}
              faults={p.faults}
              forCustomer={p.starts === "for_customer"}
            />
          ) : null}
        </>
      ) : (
        asks
      )}
    </form>
  );
}

/** The same form, answered as a file. */
function Csv({ href }: { href: string }) {
  return (
    <Button kind="line" formAction={href} formMethod="post" formEncType="multipart/form-data">
      Download as CSV
    </Button>
  );
}
