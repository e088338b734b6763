import type { CSSProperties } from "react";
import {
  dayNumber,
  dayText,
  dayTicksOf,
  percentOf,
  Scale,
  shortDay,
  weekdayOf,
  type Span,
} from "../ui/scale";
import { CoverBar } from "./bar";
import { lanesOf, NARROW, placeLabels, WIDE, type LineLabel } from "./labels";
import { RulerLines } from "./lines";
import { decides, fromClaim, rowsUnder, type Loupe, type LoupeDays } from "./near";
import type { RulerRow } from "./ruler";

/** The head of the last column says nothing here: a label by the scale's end may run into it. */
const EMPTY_HEAD = 110;

/** Two hairlines that spread from the days on the ruler to the same days enlarged. */
function Beam({ left, right }: { left: number; right: number }) {
  return (
    <svg className="beam" viewBox="0 0 100 20" preserveAspectRatio="none" aria-hidden="true">
      <path className="lit" d={`M${left} 0V4L0 20H100L${right} 4V0Z`} />
      <path className="edge" d={`M${left} 0V4L0 20M${right} 0V4L100 20`} />
    </svg>
  );
}

/**
 * A few weeks of the ruler above, day by day, where its lines nearly touch. A claim is a day and not
 * an instant, so here each line stands in the middle of its day, inside or outside the bar. Only for
 * the eye, but for the caption, which says what is to be seen.
 */
export function RulerLoupe({
  loupe,
  rows,
  span,
  days,
}: {
  loupe: Loupe;
  rows: readonly RulerRow[];
  /** The scale of the ruler it stands under. */
  span: Span;
  days: LoupeDays;
}) {
  const { shippedOn, claimOn, todayOn, todayWord = "today" } = days;
  const near: Span = { from: loupe.from, to: dayText(dayNumber(loupe.to) + 1) };
  const half = 50 / (dayNumber(near.to) - dayNumber(near.from));
  const inside = (day: string | null | undefined): day is string =>
    Boolean(day && day >= loupe.from && day <= loupe.to);

  const lines: LineLabel[] = [];
  const mark = (id: string, day: string, word: string, comma: boolean, prefer: LineLabel["prefer"]) => {
    const dayWords = `${weekdayOf(day)} ${shortDay(day, day)}`;
    const text = `${word}${comma ? "," : ""} ${dayWords}`;
    const short = comma ? word : `${word} ${shortDay(day, day)}`;
    lines.push({ id, at: percentOf(day, near) + half, text, short, prefer });
  };
  const one = claimOn === todayOn;
  if (inside(todayOn)) mark("today", todayOn, one ? `claim, ${todayWord}` : todayWord, true, "right");
  if (inside(claimOn) && !one) mark("claim", claimOn, "claim", false, claimOn < todayOn ? "left" : "right");
  if (inside(shippedOn)) mark("ship", shippedOn, "shipped", false, "left");
  const wide = placeLabels(lines, WIDE, EMPTY_HEAD);
  const narrow = placeLabels(
    lines.map((l) => ({ ...l, text: l.short ?? l.text })),
    NARROW,
  );
  const height = { "--lanes": lanesOf(wide), "--lanes-n": lanesOf(narrow) } as CSSProperties;

  return (
    <figure className="loupe">
      <Beam left={percentOf(near.from, span)} right={percentOf(near.to, span)} />
      <div className="glass" aria-hidden="true">
        <div className="head">
          <div className="cap">
            {shortDay(loupe.from, loupe.to)} to {shortDay(loupe.to)}, day by day
          </div>
          <Scale span={near} ticks={dayTicksOf(near)} style={height} />
          <div className="cap" />
        </div>
        {rowsUnder(rows, loupe).map((row) => (
          <div
            key={`${row.clause} ${row.label} ${row.from} ${row.kind}`}
            className={decides(row, days) ? "row hit" : "row"}
          >
            <span>
              <span className="m">{row.clause}</span>
              {row.label}
            </span>
            <span>
              <CoverBar
                kind={row.kind}
                from={row.from}
                to={row.to}
                span={near}
                open={{ left: row.from < loupe.from, right: row.to > loupe.to }}
              />
            </span>
            <span>{fromClaim(row, days)}</span>
          </div>
        ))}
        <RulerLines lines={lines} wide={wide} narrow={narrow} />
      </div>
      <figcaption>{loupe.why}</figcaption>
    </figure>
  );
}
