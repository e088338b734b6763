"use client";
import { useRouter } from "next/navigation";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Uploader } from "@/components/evidence/uploader";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { TextArea } from "@/components/ui/field";
import { answerCase } from "../../actions";

export function AnswerForm({ ticketId, number }: { ticketId: string; number: number }) {
  const [state, submit, busy] = useActionState(answerCase, UNSENT as FormState<never>);
  const error = state.fields?.text?.[0] ?? (state.ok ? undefined : state.message);
  return (
    <form action={submit}>
      <ErrorSummary title="It was not sent" items={error ? [{ field: "text", message: error }] : []} />
      <input type="hidden" name="ticketId" value={ticketId} />
      <input type="hidden" name="number" value={number} />
      <TextArea
        label="Your answer"
        name="text"
        rows={5}
        error={error}
        defaultValue={typeof state.values?.text === "string" ? state.values.text : ""}
        key={String(state.values?.text ?? "")}
        hint="It joins the same record as your mails."
      />
      <p className="pact">
        <Button type="submit" aria-disabled={busy}>
          {busy ? "Sending" : "Send the answer"}
        </Button>
      </p>
    </form>
  );
}

export function MoreEvidence({ ticketId }: { ticketId: string }) {
  const router = useRouter();
  return (
    <Uploader
      endpoint="evidence"
      input={{ ticketId }}
      label="Add photos, video or logs"
      hint="Up to 25 MB each."
      onDone={() => router.refresh()}
    />
  );
}
