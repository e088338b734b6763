import type { CSSProperties } from "react";

/**
 * Pin 1: the gold corner of the one current thing in a set. It is decoration only: whoever draws it
 * also sets aria-current or aria-selected and a second visible sign.
 */
export function Pin({ size }: { size?: number }) {
  const style = size === undefined ? undefined : ({ "--pin": `${size}px` } as CSSProperties);
  return <i className="pin" style={style} aria-hidden="true" />;
}
