import type { RatesView } from "@/lib/reliability/schema";
import { per100 } from "@/lib/reliability/words";
import { grouped, logAxis, logShare, years } from "./axes";

const LEFT = 300;
const RIGHT = 484;
const ROW = 29;
const TOP = 22;

export const rateAxis = ({ rows }: RatesView) =>
  logAxis(
    rows.map((r) => (r.rate ?? 0) * 100),
    rows.flatMap((r) => (r.limits ? [r.limits.lo * 100, r.limits.hi * 100] : [])),
  );

/** True when a lower limit lies below the scale, nothing included: its whisker has no left end. */
export const runsBelow = (view: RatesView): boolean =>
  view.rows.some((r) => r.limits !== null && r.limits.lo * 100 < rateAxis(view).from);

/** Figure 1: dot and whisker on a log scale, with failures and time beside every rate. */
export function RateFigure({ view, by }: { view: RatesView; by: string }) {
  const { rows, all } = view;
  const axis = rateAxis(view);
  const x = (rate: number) => LEFT + logShare(rate * 100, axis) * (RIGHT - LEFT);
  const foot = TOP + 8 + rows.length * ROW + 10;
  const allAt = all.rate ? x(all.rate) : null;
  const labelLeft = allAt !== null && allAt > LEFT + 110;
  return (
    <svg
      className="fig"
      viewBox={`0 0 632 ${foot + 42}`}
      role="img"
      aria-label={`Failure rate by ${by} with exact 95% intervals. The same figures stand in the table below it.`}
    >
      <text x="0" y="14" className="dim">
        {by === "model" ? "Model" : "Part family"}
      </text>
      <text x="222" y="14" className="dim" textAnchor="end">
        failures
      </text>
      <text x="286" y="14" className="dim" textAnchor="end">
        unit-yrs
      </text>
      <text x="632" y="14" className="dim" textAnchor="end">
        rate, 95% interval
      </text>
      <path className="ax" d={`M0 ${TOP}H632`} />
      {axis.ticks.map((t) => (
        <g key={t}>
          <path className="gr" d={`M${x(t / 100)} ${TOP}V${foot}`} />
          <text x={x(t / 100)} y={foot + 18} textAnchor="middle" className="mo">
            {t}
          </text>
        </g>
      ))}
      {allAt !== null ? (
        <g>
          <path className="ref" d={`M${allAt} ${TOP}V${foot}`} />
          <text
            x={labelLeft ? allAt - 5 : allAt + 5}
            y={foot - 5}
            textAnchor={labelLeft ? "end" : "start"}
            style={{ fill: "var(--mask)" }}
          >
            all parts {per100(all.rate!)}
          </text>
        </g>
      ) : null}
      {rows.map((r, i) => {
        const y = TOP + 22 + i * ROW;
        return (
          <g key={r.key}>
            <text x="0" y={y + 4}>
              {r.label}
              {r.small ? " †" : ""}
            </text>
            <text x="222" y={y + 4} textAnchor="end" className="mo">
              {grouped(r.failures)}
            </text>
            <text x="286" y={y + 4} textAnchor="end" className="mo">
              {years(r.unitYears)}
            </text>
            {r.limits ? (
              <Whisker lo={x(r.limits.lo)} hi={x(r.limits.hi)} y={y} open={r.limits.lo * 100 < axis.from} />
            ) : null}
            {r.rate ? <circle className={r.small ? "dot sm" : "dot"} cx={x(r.rate)} cy={y} r="4.2" /> : null}
            <text x="632" y={y + 4} textAnchor="end" className="mo">
              {rateText(r)}
            </text>
          </g>
        );
      })}
      <path className="ax" d={`M${LEFT} ${foot}H${RIGHT}`} />
      <text x={(LEFT + RIGHT) / 2} y={foot + 36} textAnchor="middle">
        failures per 100 unit-years, log scale
      </text>
    </svg>
  );
}

/** A lower limit of nothing, or one off the scale, has no end tick: the line runs out of the figure. */
function Whisker({ lo, hi, y, open }: { lo: number; hi: number; y: number; open: boolean }) {
  const ends = open ? `M${hi} ${y - 4}v8` : `M${lo} ${y - 4}v8M${hi} ${y - 4}v8`;
  return <path className="wh" d={`M${open ? LEFT : lo} ${y}H${hi}${ends}`} />;
}

function rateText(r: RatesView["rows"][number]): string {
  if (r.limits === null || r.rate === null) return "no time yet";
  if (r.failures === 0) return `at most ${per100(r.limits.hi)}`;
  return `${per100(r.rate)}  ${per100(r.limits.lo)} to ${per100(r.limits.hi)}`;
}
