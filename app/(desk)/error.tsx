"use client";
import { Button, ButtonLink } from "@/components/ui/button";

/** A fault of ours on a staff page. What was being looked at is untouched. */
export default function DeskError({
  error,
  reset,
}: {
  error: Error & { digest?: string };
  reset: () => void;
}) {
  return (
    <main id="main" className="desk">
      <div className="max-w-[66ch] py-8" role="alert">
        <h1 className="text-6">This page could not be made.</h1>
        <p className="mt-2">
          The fault is ours. Nothing was changed by looking. Try again; if it stays, give an admin the
          reference below.
        </p>
        {error.digest ? <p className="m mt-2">{error.digest}</p> : null}
        <div className="acts mt-6">
          <Button type="button" onClick={reset}>
            Try again
          </Button>
          <ButtonLink kind="line" href="/desk">
            Go to the desk
          </ButtonLink>
        </div>
      </div>
    </main>
  );
}
