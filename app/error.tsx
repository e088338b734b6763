"use client";
import { Button } from "@/components/ui/button";

/** A fault of ours on any other page. What was sent before it happened is kept. */
export default function PageError({
  error,
  reset,
}: {
  error: Error & { digest?: string };
  reset: () => void;
}) {
  return (
    <div className="portal">
      <main id="main" className="letter" role="alert">
        <h1>This page could not be made.</h1>
        <p>The fault is ours. What you sent before is kept. Try again in a moment, or write to us.</p>
        {error.digest ? (
          <p className="hint">
            Give us this reference: <span className="m">{error.digest}</span>
          </p>
        ) : null}
        <p className="acts">
          <Button type="button" onClick={reset}>
            Try again
          </Button>
        </p>
      </main>
    </div>
  );
}
