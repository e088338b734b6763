import { showDayShort } from "@/lib/base/show";
import { FAMILY_WORDS } from "@/lib/ledger/schema";
import type { TriangleView } from "@/lib/reliability/schema";
import type { Cell, Cohort } from "@/lib/reliability/triangle";
import { grouped } from "./axes";

const STEPS = [
  { below: 0.5, fill: 0.07, word: "none" },
  { below: 12, fill: 0.2, word: "under 12" },
  { below: 24.5, fill: 0.38, word: "12 to 24" },
  { below: 44.5, fill: 0.82, word: "25 to 44" },
  { below: Infinity, fill: 1, word: "45 and over" },
] as const;
/** Of fewer units than this one failure alone would colour a cell deep: such a row stays pale. */
export const SMALL_COHORT = 50;

const step = (per1000: number, small: boolean) => {
  const found = per1000 > 0 && per1000 < 0.5 ? STEPS[1] : STEPS.find((s) => per1000 < s.below)!;
  return small && found.fill > 0.2 ? STEPS[1] : found;
};

/** "Mar 26". */
const shortMonth = (month: string) => showDayShort(`${month}-01`).replace(/^1 (\w+) \d\d(\d\d)$/, "$1 $2");

/** Figure 3: a number in every cell, five steps of one hue, months still running dashed. */
export function TriangleFigure({ view, months }: { view: TriangleView; months: readonly string[] }) {
  const rows = months.map(
    (month): Cohort => view.cohorts.find((c) => c.month === month) ?? { month, units: 0, cells: [] },
  );
  const height = 35 + rows.length * 19;
  return (
    <svg
      className="fig"
      viewBox={`-5 0 706 ${height + 3}`}
      role="img"
      aria-label={`${FAMILY_WORDS[view.family]} failures by ship month and months in service. The same figures stand in the table below it.`}
    >
      <text x="0" y="12" className="dim">
        Shipped
      </text>
      <text x="104" y="12" className="dim" textAnchor="end">
        units
      </text>
      <text x="118" y="12" className="dim">
        months in service
      </text>
      {months.map((month, k) => (
        <text key={month} x={141 + k * 46} y="28" textAnchor="middle" className="mo">
          {k + 1}
        </text>
      ))}
      {rows.map((row, i) => (
        <Row key={row.month} row={row} y={34.5 + i * 19} marked={row.month === view.standsOut?.month} />
      ))}
      <text x="536" y="137" className="dim">
        failures per 1000
      </text>
      {STEPS.map((s, i) => (
        <g key={s.word}>
          <rect
            className="cell"
            style={{ fillOpacity: s.fill }}
            x="536"
            y={144 + i * 17}
            width="26"
            height="14"
          />
          <text x="570" y={155 + i * 17}>
            {s.word}
          </text>
        </g>
      ))}
      <rect className="run" x="537" y="230" width="24" height="13" />
      <text x="570" y="241">
        month still running
      </text>
    </svg>
  );
}

function Row({ row, y, marked }: { row: Cohort; y: number; marked: boolean }) {
  const small = row.units > 0 && row.units < SMALL_COHORT;
  return (
    <g>
      <text x="12" y={y + 13.5} style={marked ? { fontWeight: 650 } : undefined}>
        {shortMonth(row.month)}
        {small ? " †" : ""}
      </text>
      <text x="104" y={y + 13.5} textAnchor="end" className="mo">
        {grouped(row.units)}
      </text>
      {row.units > 0 ? row.cells.map((c) => <CellBox key={c.month} cell={c} y={y} small={small} />) : null}
      {marked ? (
        <>
          <path className="pinm" d={`M-4 ${y - 1}h10l-10 10Z`} />
          <rect className="frame" x="-5" y={y - 1} width={123.5 + row.cells.length * 46} height="20" />
        </>
      ) : null}
    </g>
  );
}

/** Failures per 1000 in whole numbers; what is there is never shown as nothing. */
export function cellText(cell: Cell): string {
  if (cell.per1000 === null) return "–";
  return cell.failed > 0 && cell.per1000 < 0.5 ? "<1" : Math.round(cell.per1000).toString();
}

function CellBox({ cell, y, small }: { cell: Cell; y: number; small: boolean }) {
  const x = 118.5 + (cell.month - 1) * 46;
  const text = cellText(cell);
  const shade = step(cell.per1000 ?? 0, small);
  const tone = cell.running ? "mo dim" : shade.fill > 0.8 ? "mo onm" : "mo";
  return (
    <g>
      {cell.running ? (
        <rect className="run" x={x + 1} y={y + 1} width="43" height="16" />
      ) : (
        <rect className="cell" style={{ fillOpacity: shade.fill }} x={x} y={y} width="45" height="18" />
      )}
      <text x={x + 22.5} y={y + 13.5} textAnchor="middle" className={tone}>
        {text}
      </text>
    </g>
  );
}
