import type { SyntheticEvent } from "react";
import type { FormState } from "@/app/_edge/form";

/** Which ticket an act's form is about. */
export function Hidden({ ticketId, number }: { ticketId: string; number: number }) {
  return (
    <>
      <input type="hidden" name="ticketId" value={ticketId} />
      <input type="hidden" name="number" value={number} />
    </>
  );
}

/** What a refused form's summary lists: its fields, or the refusal's own sentence. */
export function problems(state: FormState<unknown>) {
  const list = Object.entries(state.fields ?? {}).flatMap(([field, messages]) =>
    messages.map((message) => ({ field, message })),
  );
  return list.length > 0 ? list : state.message && !state.ok ? [{ message: state.message }] : [];
}

/** A form is emptied after it was sent, also when it was refused: what was typed stays instead. */
export const keepTyped = (event: SyntheticEvent<HTMLFormElement>): void => event.preventDefault();
