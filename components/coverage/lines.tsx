import type { CSSProperties } from "react";
import type { LineLabel, Placed } from "./labels";

const shift = (p: Placed | undefined, flag: number) =>
  p?.side === "left" ? "calc(-100% - 3px)" : `${p?.lane === 0 ? flag : 3}px`;

/** The lines that cross all rows of a ruler: today with its flag, the claim, the day of shipping. */
export function RulerLines({
  lines,
  wide,
  narrow,
  bare,
}: {
  lines: readonly LineLabel[];
  wide: Map<string, Placed>;
  narrow: Map<string, Placed>;
  bare?: boolean;
}) {
  return (
    <div className="vl" aria-hidden="true">
      {lines.map((line) => (
        <i key={line.id} className={`vline ${line.id}`} style={{ left: `${line.at}%` }}>
          {line.id === "today" ? <i className="flag" /> : null}
          {bare ? null : (
            <span
              className="vlab"
              style={
                {
                  "--lane": wide.get(line.id)?.lane,
                  "--lane-n": narrow.get(line.id)?.lane,
                  "--x": shift(wide.get(line.id), line.id === "today" ? 12 : 3),
                  "--x-n": shift(narrow.get(line.id), line.id === "today" ? 12 : 3),
                } as CSSProperties
              }
            >
              {line.short ? (
                <>
                  <span className="long">{line.text}</span>
                  <span className="short">{line.short}</span>
                </>
              ) : (
                line.text
              )}
            </span>
          )}
        </i>
      ))}
    </div>
  );
}
