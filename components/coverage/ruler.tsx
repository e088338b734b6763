import type { CSSProperties } from "react";
import { percentOf, Scale, shortDay, spanOf } from "../ui/scale";
import { CoverBar, type BarKind } from "./bar";
import { lanesOf, NARROW, placeLabels, WIDE, type LineLabel } from "./labels";
import { RulerLines } from "./lines";
import { RulerLoupe } from "./loupe";
import { decides, loupeFor } from "./near";

export type RulerRow = {
  clause: string;
  label: string;
  kind: BarKind;
  from: string;
  to: string;
  words: string;
  claimed?: boolean;
  /** Which window it is, where the fill no longer says so: a DOA window that has ended. */
  window?: "doa" | "cover";
};

/**
 * Time as a steel rule: a bar for each clause, and three lines across them all, shipped, claim and
 * today. Readers get it as a table of two columns: what is covered, and its last day in words. Where
 * the lines nearly touch, a loupe below shows those weeks day by day, and says them.
 */
export function Ruler({
  rows,
  shippedOn,
  claimOn,
  todayOn,
  todayWord = "today",
  mini,
  caption = "Clause and part",
}: {
  rows: readonly RulerRow[];
  shippedOn: string;
  claimOn?: string | null;
  todayOn: string;
  /** On a stored decision the gold line marks the day it was counted on: say which. */
  todayWord?: string;
  mini?: boolean;
  caption?: string;
}) {
  const days = [shippedOn, todayOn, ...(claimOn ? [claimOn] : []), ...rows.flatMap((r) => [r.from, r.to])];
  const span = spanOf(days);
  const one = claimOn === todayOn;
  const claimDay = claimOn && shortDay(claimOn, todayOn);

  const lines: LineLabel[] = [
    {
      id: "today",
      at: percentOf(todayOn, span),
      text: one ? `claim, ${todayWord}` : todayWord,
      prefer: "right",
    },
  ];
  if (claimDay && !one) {
    lines.push({ id: "claim", at: percentOf(claimOn, span), text: `claim ${claimDay}`, prefer: "left" });
  }
  lines.push({
    id: "ship",
    at: percentOf(shippedOn, span),
    text: `shipped ${shortDay(shippedOn)}`,
    prefer: "right",
  });

  const wide = placeLabels(lines, WIDE);
  const narrow = placeLabels(lines, NARROW);
  const height = { "--lanes": lanesOf(wide), "--lanes-n": lanesOf(narrow) } as CSSProperties;
  const said = [
    `shipped ${shortDay(shippedOn)}`,
    claimOn ? `claim ${shortDay(claimOn)}` : "",
    `${todayWord} ${shortDay(todayOn)}`,
  ].filter(Boolean);

  const near = { shippedOn, claimOn, todayOn, todayWord };
  const loupe = mini ? null : loupeFor(rows, near);

  return (
    <div className="rulerbox">
      <div className={mini ? "ruler mini" : "ruler"}>
        <div className="years" role="table" aria-label={`Cover: ${said.join(", ")}`}>
          <div className="head" role="row">
            <div className="cap" role="columnheader">
              {caption}
            </div>
            <Scale span={span} months={!mini} style={mini ? undefined : height} />
            <div className="cap" role="columnheader">
              Last covered day
            </div>
          </div>
          {rows.map((row) => (
            <div
              key={`${row.clause} ${row.label} ${row.from} ${row.kind}`}
              className={row.claimed && decides(row, near) ? "row hit" : "row"}
              role="row"
            >
              <span role="rowheader">
                {mini ? null : <span className="m">{row.clause}</span>}
                {mini && row.clause ? `${row.label}, clause ${row.clause}` : row.label}
              </span>
              <span aria-hidden="true">
                <CoverBar kind={row.kind} from={row.from} to={row.to} span={span} />
              </span>
              <span role="cell">{row.words}</span>
            </div>
          ))}
          <RulerLines lines={lines} wide={wide} narrow={narrow} bare={mini} />
        </div>
        {loupe ? <RulerLoupe loupe={loupe} rows={rows} span={span} days={near} /> : null}
      </div>
    </div>
  );
}
