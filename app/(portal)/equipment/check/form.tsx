"use client";
import Link from "next/link";
import { useActionState } from "react";
import { CheckForm } from "@/components/coverage/check-form";
import { MAX_BYTES } from "@/lib/coverage/check";
import { FAULT_CLASSES, FAULT_WORDS } from "@/lib/coverage/schema";
import { check } from "./actions";

const FAULTS = FAULT_CLASSES.map((value) => ({ value, words: FAULT_WORDS[value] }));

export function EquipmentCheck({ today, formId }: { today: string; formId: string }) {
  const [state, submit, busy] = useActionState(check, {
    page: null,
    message: null,
    fields: {},
    typed: { text: "", day: "" },
  });
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
      csv="/equipment/check/csv"
      back={<Link href="/equipment">Back to your equipment</Link>}
      faults={FAULTS}
      starts="self"
      customers={false}
    />
  );
}
