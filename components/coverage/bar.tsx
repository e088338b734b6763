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
export function CoverBar({ kind, from, to, span }: { kind: BarKind; from: string; to: string; span: Span }) {
  const { left, width } = stretch(from, to, span);
  return <i className={FILL[kind]} style={{ "--l": `${left}%`, "--w": `${width}%` } as CSSProperties} />;
}
