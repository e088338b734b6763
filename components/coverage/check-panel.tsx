"use client";
import Link from "next/link";
import { useActionState } from "react";
import { MAX_BYTES } from "@/lib/coverage/check";
import { FAULT_CLASSES, FAULT_WORDS } from "@/lib/coverage/schema";
import { CheckForm, type CheckPage } from "./check-form";

/** What a check shows after it was sent: its answer, or why not, with what was typed. */
export type CheckShown = {
  page: CheckPage | null;
  message: string | null;
  fields: Record<string, string[]>;
  typed: { text: string; day: string };
};

const FAULTS = FAULT_CLASSES.map((value) => ({ value, words: FAULT_WORDS[value] }));
const UNASKED: CheckShown = { page: null, message: null, fields: {}, typed: { text: "", day: "" } };

/** The check of many serials, for the ledger and for a customer's equipment: what differs comes in. */
export function CheckPanel({
  check,
  today,
  formId,
  csv,
  back,
  starts,
  customers,
}: {
  check: (state: CheckShown, form: FormData) => Promise<CheckShown>;
  today: string;
  formId: string;
  csv: string;
  back: { href: string; words: string };
  starts: "self" | "for_customer" | null;
  customers: boolean;
}) {
  const [state, submit, busy] = useActionState(check, UNASKED);
  return (
    <CheckForm
      submit={submit}
      busy={busy}
      page={state.page}
      message={state.message}
      fields={state.fields}
      typed={state.typed}
      today={today}
      formId={formId}
      maxBytes={MAX_BYTES}
      csv={csv}
      back={<Link href={back.href}>{back.words}</Link>}
      faults={FAULTS}
      starts={starts}
      customers={customers}
    />
  );
}
