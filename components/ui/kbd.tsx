import type { ReactNode } from "react";

/** A key, as printed on a keyboard. */
export function Kbd({ children }: { children: ReactNode }) {
  return <kbd>{children}</kbd>;
}
