"use client";
import { useActionState, useEffect, useRef, useState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Check } from "@/components/ui/field";
import { Pin } from "@/components/ui/pin";
import { EVIDENCE_FOR, type FaultClass } from "@/lib/coverage/schema";
import { write } from "./actions";

type Mode = "write" | "ask" | "note";
type Props = {
  ticketId: string;
  number: number;
  personName: string;
  nextMail: number;
  faultClass: string | null;
  refs: string[];
};

const SEND: Record<Mode, string> = {
  write: "Send and wait on customer",
  ask: "Ask and wait on customer",
  note: "Keep the note",
};

/** Writes the next entry. What is typed is kept in this browser until it is sent. */
export function Composer({ ticketId, number, personName, nextMail, faultClass, refs }: Props) {
  const [state, send, busy] = useActionState(write, UNSENT as FormState<never>);
  const [mode, setMode] = useState<Mode>("write");
  const field = useRef<HTMLTextAreaElement>(null);
  const key = `draft-${ticketId}`;

  useEffect(() => {
    const kept = localStorage.getItem(key);
    if (kept && field.current && field.current.value === "") field.current.value = kept;
  }, [key]);

  const wanted = EVIDENCE_FOR[(faultClass ?? "other") as FaultClass] ?? EVIDENCE_FOR.other;
  const all = [
    ...new Map(
      [
        ...wanted,
        ...EVIDENCE_FOR.failed_drive,
        ...EVIDENCE_FOR.bent_contacts,
        ...EVIDENCE_FOR.not_detected,
      ].map((w) => [w.what, w]),
    ).values(),
  ];
  const problems = Object.entries(state.fields ?? {}).flatMap(([f, m]) =>
    m.map((message) => ({ field: f === "text" ? "composer" : f, message })),
  );
  const modes: [Mode, string][] = [
    ["write", `Write to ${personName}`],
    ["ask", "Ask for evidence"],
    ["note", "Note for us"],
  ];
  return (
    <form
      action={(form) => {
        localStorage.removeItem(key);
        send(form);
      }}
      className="composer"
      aria-label="Next entry"
    >
      <ErrorSummary
        title="It was not kept"
        items={
          problems.length > 0 ? problems : state.message && !state.ok ? [{ message: state.message }] : []
        }
      />
      <input type="hidden" name="ticketId" value={ticketId} />
      <input type="hidden" name="number" value={number} />
      <input type="hidden" name="mode" value={mode} />
      <div className="to">
        {modes.map(([m, words]) => (
          <button key={m} type="button" aria-pressed={mode === m} onClick={() => setMode(m)}>
            {mode === m ? <Pin size={8} /> : null}
            {words}
          </button>
        ))}
        <span className="r q">
          {mode === "note"
            ? "no customer sees it"
            : mode === "write"
              ? `this entry will be M${nextMail}`
              : "each with why it helps"}
        </span>
      </div>
      {mode === "ask" ? (
        <fieldset className="wantedset">
          <legend className="vh">What to ask for</legend>
          {all.map((w, i) => (
            <Check
              key={w.what}
              name="wanted"
              value={w.what}
              title={w.what}
              detail={w.why}
              defaultChecked={i < wanted.length}
            />
          ))}
        </fieldset>
      ) : null}
      <label className="vh" htmlFor="f-composer">
        {mode === "note" ? "Note" : "Text"}
      </label>
      <textarea
        ref={field}
        id="f-composer"
        name="text"
        rows={5}
        defaultValue={typeof state.values?.text === "string" ? state.values.text : ""}
        key={String(state.values?.text ?? "")}
        onChange={(e) => localStorage.setItem(key, e.target.value)}
        placeholder={
          mode === "note"
            ? "For the desk, the dock and the bench."
            : mode === "ask"
              ? "A sentence before the list, if you like."
              : "Say what was found, and what happens next."
        }
      />
      <div className="act">
        <span className="s q">
          {refs.length > 0 ? `Cite an entry by its letter, such as ${refs.at(-1)}` : "The record begins here"}
        </span>
        <span className="r" />
        <Button aria-disabled={busy}>{busy ? "Sending" : SEND[mode]}</Button>
      </div>
    </form>
  );
}
