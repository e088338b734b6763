"use client";
import { useActionState } from "react";
import { UNSENT } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { Field } from "@/components/ui/field";
import { askForLink } from "../actions";

export function AskForm({ next }: { next: string }) {
  const [state, send, busy] = useActionState(askForLink, UNSENT);
  return (
    <form action={send} noValidate>
      <input type="hidden" name="next" value={next} />
      <Field
        label="E-mail address"
        name="email"
        type="email"
        autoComplete="email"
        inputMode="email"
        hint="We mail you a link that works once. There is no password."
        error={state.fields?.email?.[0] ?? (state.ok || state.fields ? undefined : state.message)}
        defaultValue={typeof state.values?.email === "string" ? state.values.email : ""}
        key={String(state.values?.email ?? "")}
        required
        autoFocus
      />
      <Button type="submit" className="hang-send" aria-disabled={busy}>
        {busy ? "Sending" : "Send me the link"}
      </Button>
    </form>
  );
}
