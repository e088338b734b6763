import type { FormState } from "@/app/_edge/form";
import type { SummaryItem } from "@/components/ui/error-summary";

/** What a form's summary says: each field's first reason, or the one sentence of the refusal. */
export function problemsOf(state: FormState<unknown>): SummaryItem[] {
  if (state.ok) return [];
  const fields = Object.entries(state.fields ?? {}).flatMap(([field, messages]) =>
    messages.map((message) => ({ field, message })),
  );
  return fields.length > 0 ? fields : state.message ? [{ message: state.message }] : [];
}

/** What was typed into a field before it was refused. */
export function typed(state: FormState<unknown>, name: string): string {
  const value = state.values?.[name];
  return typeof value === "string" ? value : "";
}
