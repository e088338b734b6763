"use client";
import { useRouter } from "next/navigation";
import { useActionState, useEffect, useState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Progress } from "@/components/ui/progress";
import type { PreviewState as State } from "@/lib/coverage/schema";
import { preview, stop } from "../actions";
import { problemsOf } from "../state";

type Lean = { id: string; state: State; total: number; done: number; error: string | null };
const figure = (n: number) => n.toLocaleString("en-US");

/** How far a preview is. It can be left and come back to, and stopped; it goes on in the worker. */
export function PreviewState({
  first,
  versionId,
  writes,
  stuck,
}: {
  first: Lean;
  versionId: string;
  writes: boolean;
  stuck: boolean;
}) {
  const router = useRouter();
  const [live, setLive] = useState<Lean>(first);
  const now = live.id === first.id && live.done >= first.done && first.state === "running" ? live : first;
  const [stopped, sendStop, stopping] = useActionState(stop, UNSENT as FormState<never>);
  const [again, sendAgain, asking] = useActionState(preview, UNSENT as FormState<never>);
  const runs = now.state === "running";

  useEffect(() => {
    if (!runs) return;
    const timer = setInterval(async () => {
      const response = await fetch(`/terms/${versionId}/preview`).catch(() => null);
      if (!response?.ok) return;
      const next = (await response.json()) as Lean;
      setLive(next);
      if (next.state !== "running" || next.id !== first.id) router.refresh();
    }, 700);
    return () => clearInterval(timer);
  }, [runs, versionId, first.id, router]);

  return (
    <div className="previewstate">
      <ErrorSummary title="It goes on" items={problemsOf(stopped)} />
      <ErrorSummary title="It stands still" items={problemsOf(again)} />
      {runs ? (
        <>
          <Progress
            label="Preview"
            share={now.total === 0 ? 0 : now.done / now.total}
            words={
              now.done === 0
                ? `${figure(now.total)} sales and tickets to go through. You may leave this page.`
                : `${figure(now.done)} of ${figure(now.total)} sales and tickets. You may leave this page.`
            }
          />
          {writes ? (
            <div className="acts">
              <form action={sendStop}>
                <input type="hidden" name="previewId" value={first.id} />
                <Button kind="quiet" aria-disabled={stopping}>
                  Stop here
                </Button>
              </form>
              {stuck && now.done === first.done ? (
                <form action={sendAgain}>
                  <input type="hidden" name="versionId" value={versionId} />
                  <span className="q">It has not moved for a while. </span>
                  <Button kind="quiet" aria-disabled={asking}>
                    Go on where it was
                  </Button>
                </form>
              ) : null}
            </div>
          ) : null}
        </>
      ) : null}
      {now.state === "cancelled" ? (
        <p role="status">
          Stopped after {figure(now.done)} of {figure(now.total)} sales and tickets
          {now.error ? `. ${now.error}` : "; what follows was counted so far."}
        </p>
      ) : null}
      {now.state === "failed" ? (
        <p className="err" role="alert">
          {now.error}
        </p>
      ) : null}
    </div>
  );
}

export function PreviewStart({
  versionId,
  again,
  first,
}: {
  versionId: string;
  again: boolean;
  first: boolean;
}) {
  const [state, send, busy] = useActionState(preview, UNSENT as FormState<never>);
  return (
    <form action={send} className="previewstart">
      <ErrorSummary title="It did not begin" items={problemsOf(state)} />
      <input type="hidden" name="versionId" value={versionId} />
      <Button kind={first ? "line" : "quiet"} aria-disabled={busy}>
        {again ? "Count again" : "Count what it would do"}
      </Button>
    </form>
  );
}
