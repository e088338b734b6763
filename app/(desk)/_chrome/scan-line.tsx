"use client";
import Form from "next/form";
import { usePathname } from "next/navigation";
import { useEffect, useRef } from "react";
import { ScanBars } from "@/components/ui/drawings";
import { Kbd } from "@/components/ui/kbd";

const SAYS = "Scan or type a serial, RMA, ticket or e-mail";

const typing = (target: EventTarget | null) =>
  target instanceof HTMLElement &&
  (target.isContentEditable || /^(INPUT|TEXTAREA|SELECT)$/.test(target.tagName));

/**
 * The one field that finds anything. "/" brings the cursor here; a scanner's Enter sends it. On the
 * dock it is left out: there the page's own scan field is the first thing.
 */
export function ScanLine() {
  const field = useRef<HTMLInputElement>(null);
  const onDock = usePathname().startsWith("/dock");
  useEffect(() => {
    if (onDock) return;
    const onKey = (event: KeyboardEvent) => {
      if (event.key !== "/" || event.ctrlKey || event.metaKey || event.altKey || typing(event.target)) return;
      event.preventDefault();
      field.current?.focus();
      field.current?.select();
    };
    document.addEventListener("keydown", onKey);
    return () => document.removeEventListener("keydown", onKey);
  }, [onDock]);

  if (onDock) return null;
  return (
    <Form className="scan" role="search" action="/desk/find">
      <ScanBars />
      <input
        ref={field}
        name="q"
        type="text"
        aria-label={SAYS}
        placeholder={SAYS}
        autoComplete="off"
        autoCapitalize="off"
        autoCorrect="off"
        spellCheck={false}
        enterKeyHint="search"
        maxLength={200}
        required
      />
      <Kbd>/</Kbd>
    </Form>
  );
}
