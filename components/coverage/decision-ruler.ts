import type { Decision } from "@/lib/coverage/schema";
import { showDayShort } from "@/lib/base/show";
import type { RulerRow } from "./ruler";

/** The windows of one decision as ruler rows, the one that decided marked. */
export const decisionRows = (d: Decision): RulerRow[] =>
  d.windows.map((w) => ({
    clause: w.clauseNumber,
    label: w.clauseTitle,
    kind: d.outcome === "needs_person" ? "person" : w.kind === "doa" ? "doa" : "covered",
    from: w.firstOn,
    to: w.lastOn,
    words: `to ${showDayShort(w.lastOn)}${w.cutOn ? ", when it was given on" : w.byFloor ? ", by the floor of a part we fitted" : ""}`,
    claimed: w.clauseNumber === d.clauseNumber,
  }));
