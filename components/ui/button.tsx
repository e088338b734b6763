import Link from "next/link";
import type { ComponentProps, ReactNode } from "react";

/** One solid button (main, stop or ink) in a region; the rest are outlined or quiet. */
export type ButtonKind = "main" | "line" | "stop" | "ink" | "quiet";

const LOOK: Record<ButtonKind, string> = {
  main: "btn",
  line: "btn line notch",
  stop: "btn stop",
  ink: "btn ink",
  quiet: "btn quiet",
};

const look = (kind: ButtonKind, huge?: boolean, more?: string) =>
  [LOOK[kind], huge && "huge", more].filter(Boolean).join(" ");

type Common = { kind?: ButtonKind; huge?: boolean };

/**
 * A button. With `reason` it cannot act yet, and the reason stands in place of its label
 * ("Needs a scan first"): nobody has to guess why it is dull.
 */
export function Button({
  kind = "main",
  huge,
  reason,
  className,
  children,
  ...props
}: ComponentProps<"button"> & Common & { reason?: string | null | false }) {
  const held = Boolean(reason);
  return (
    <button
      type="submit"
      {...props}
      className={look(kind, huge, className)}
      disabled={held || props.disabled === true}
    >
      {held ? reason : children}
    </button>
  );
}

/** A link that looks like a button, for steps that only lead on. */
export function ButtonLink({
  kind = "main",
  huge,
  className,
  children,
  ...props
}: ComponentProps<typeof Link> & Common & { children: ReactNode }) {
  return (
    <Link {...props} className={look(kind, huge, className)}>
      {children}
    </Link>
  );
}
