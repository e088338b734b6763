"use client";
import { useRouter } from "next/navigation";
import { useActionState, useEffect, useState } from "react";
import { UNSENT, type FormState } from "@/app/_edge/form";
import { Button } from "@/components/ui/button";
import { ErrorSummary } from "@/components/ui/error-summary";
import { Progress } from "@/components/ui/progress";
import type { ImportView } from "@/lib/ledger/schema";
import { add, stop } from "./actions";

type Lean = Pick<ImportView, "id" | "state" | "rowsGood" | "rowsDone" | "added" | "error" | "rowsTotal">;

/** How far an import is. It can be left and come back to; it goes on in the worker. */
export function ImportState({ first }: { first: Lean }) {
  const router = useRouter();
  const [live, setLive] = useState<Lean>(first);
  const now =
    live.id === first.id && live.rowsDone >= first.rowsDone && live.state !== "previewed" ? live : first;
  const [added, sendAdd, adding] = useActionState(add, UNSENT as FormState<never>);
  const [stopped, sendStop, stopping] = useActionState(stop, UNSENT as FormState<never>);
  const runs = now.state === "applying";

  useEffect(() => {
    if (!runs) return;
    const timer = setInterval(async () => {
      const response = await fetch(`/ledger/import/${first.id}/state`).catch(() => null);
      if (!response?.ok) return;
      const next = (await response.json()) as Lean;
      setLive(next);
      if (next.state !== "applying") router.refresh();
    }, 700);
    return () => clearInterval(timer);
  }, [runs, first.id, router]);

  const problem = (added.ok ? undefined : added.message) ?? (stopped.ok ? undefined : stopped.message);
  return (
    <section aria-label="How far it is" className="importstate">
      <ErrorSummary title="It did not go on" items={problem ? [{ message: problem }] : []} />
      {now.state === "previewed" ? (
        <form action={sendAdd}>
          <input type="hidden" name="id" value={first.id} />
          <Button aria-disabled={adding} reason={first.rowsGood === 0 ? "No row can be added" : undefined}>
            Add {first.rowsGood} {first.rowsGood === 1 ? "row" : "rows"}
          </Button>
        </form>
      ) : null}
      {runs ? (
        <>
          <Progress
            share={now.rowsGood === 0 ? 0 : now.rowsDone / now.rowsGood}
            words={`${now.rowsDone} of ${now.rowsGood} rows added. You may leave this page.`}
          />
          <form action={sendStop}>
            <input type="hidden" name="id" value={first.id} />
            <Button kind="quiet" aria-disabled={stopping}>
              Stop here
            </Button>
          </form>
        </>
      ) : null}
      {now.state === "applied" ? (
        <p className="ok" role="status">
          Done.{" "}
          {Object.values(now.added).every((n) => n === 0)
            ? "Everything in it was there already: nothing was added."
            : `Added ${now.added.systems ?? 0} systems, ${now.added.parts ?? 0} parts, ${now.added.sales ?? 0} sales, ${now.added.accounts ?? 0} customers.`}
        </p>
      ) : null}
      {now.state === "cancelled" ? <p role="status">Stopped after {now.rowsDone} rows; those stay.</p> : null}
      {now.state === "failed" ? (
        <p className="err" role="alert">
          {now.error}
        </p>
      ) : null}
    </section>
  );
}
