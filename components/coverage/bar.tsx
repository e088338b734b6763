import type { CSSProperties } from "react";
import { stretch, type Span } from "../ui/scale";

export type BarKind = "covered" | "doa" | "ended" | "person";

const FILL: Record<BarKind, string> = {
  covered: "bar-c",
  doa: "bar-c doa",
  ended: "bar-c end",
  person: "bar-c per",
};

/** One stretch of cover on a scale. The last day counts whole. */
export function CoverBar({
  kind,
  from,
  to,
  span,
  open,
}: {
  kind: BarKind;
  from: string;
  to: string;
  span: Span;
  /** Where it runs on past the scale: no edge is drawn there, for there is none. */
  open?: { left: boolean; right: boolean };
}) {
  const { left, width } = stretch(from, to, span);
  const cut = `${open?.left ? " on-l" : ""}${open?.right ? " on-r" : ""}`;
  return (
    <i className={FILL[kind] + cut} style={{ "--l": `${left}%`, "--w": `${width}%` } as CSSProperties} />
  );
}
