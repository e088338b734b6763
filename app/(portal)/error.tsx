"use client";
import { Button } from "@/components/ui/button";

export default function PortalError({ reset }: { error: Error; reset: () => void }) {
  return (
    <>
      <h1>Something went wrong here.</h1>
      <p>What you had sent is kept. Try again; if it stays like this, write to us and we look at it.</p>
      <p>
        <Button onClick={reset}>Try again</Button>
      </p>
    </>
  );
}
