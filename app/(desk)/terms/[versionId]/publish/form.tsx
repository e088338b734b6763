"use client";
import { useActionState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button, ButtonLink } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { publish } from "../../actions";

export function PublishForm(props: { versionId: string; version: number; issue: number; stops: string[] }) {
  const [state, send, busy] = useActionState(publish, UNSENT as FormState<never>);
  const said = state.ok || !state.message ? props.stops : [state.message];
  return (
    <form action={send}>
      <ErrorSummary title="It cannot be published yet" items={said.map((message) => ({ message }))} />
      <input type="hidden" name="versionId" value={props.versionId} />
      <input type="hidden" name="version" value={props.version} />
      <div className="acts">
        <Button
          aria-disabled={busy}
          reason={props.stops.length > 0 ? "Needs the above put right first" : undefined}
        >
          Publish issue {props.issue}
        </Button>
        <ButtonLink kind="line" href={`/terms/${props.versionId}`}>
          Back to the draft
        </ButtonLink>
      </div>
    </form>
  );
}
