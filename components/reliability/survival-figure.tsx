import { FAMILY_WORDS } from "@/lib/ledger/schema";
import type { SurvivalGroup, SurvivalView } from "@/lib/reliability/schema";
import { DAYS_PER_MONTH } from "@/lib/reliability/triangle";
import { apart, grouped, monthAxis, shareAxis } from "./axes";

const [LEFT, RIGHT, TOP, FOOT] = [84, 600, 12, 188];

/** Figure 2: share still working by age, with bands and the numbers at risk beneath the axis. */
export function SurvivalFigure({ view }: { view: SurvivalView }) {
  const { groups, family } = view;
  const least = Math.min(1, ...groups.flatMap((g) => g.steps.map((s) => s.lo ?? 0)));
  const months = monthAxis(Math.max(...groups.map((g) => g.shownTo)) / DAYS_PER_MONTH);
  const share = shareAxis(least);
  const x = (days: number) => LEFT + (days / DAYS_PER_MONTH / months.to) * (RIGHT - LEFT);
  const y = (s: number) => FOOT - ((Math.max(s, share.from) - share.from) / (1 - share.from)) * (FOOT - TOP);
  // A curve is named where it ends; one that ends early keeps its name with it, inside the figure.
  const early = groups.map((g) => x(g.shownTo) < LEFT + (RIGHT - LEFT) * 0.7);
  const heights = groups.map((g) => y(g.steps.at(-1)?.survival ?? 1) + 4);
  // Names side by side need no room between them; those above each other do.
  const ends = early.every((e) => e === early[0]) ? apart(heights, 15) : heights;
  const fresh = groups.find((g) => g.condition === "new");
  const coverAt =
    fresh?.coverDays && fresh.coverDays / DAYS_PER_MONTH < months.to ? x(fresh.coverDays) : null;
  return (
    <svg
      className="fig"
      viewBox={`0 0 706 ${234 + groups.length * 18}`}
      role="img"
      aria-label={`Share of ${FAMILY_WORDS[family].toLowerCase()} units still working by months in service. The same figures stand in the table below it.`}
    >
      {share.ticks.map((t) => (
        <g key={t}>
          <path className="gr" d={`M${LEFT} ${y(t)}H${RIGHT}`} />
          <text x={LEFT - 8} y={y(t) + 4} textAnchor="end" className="mo">
            {t.toFixed(2)}
          </text>
        </g>
      ))}
      {months.ticks.map((m) => (
        <g key={m}>
          <path className="ax" d={`M${x(m * DAYS_PER_MONTH)} ${FOOT}v5`} />
          <text x={x(m * DAYS_PER_MONTH)} y="207" textAnchor="middle" className="mo">
            {m}
          </text>
        </g>
      ))}
      {groups.map((g, i) => (
        <Curve key={g.condition} group={g} second={i > 0} x={x} y={y} floor={share.from} />
      ))}
      {/* A cut axis is drawn broken. */}
      <path
        className="ax"
        d={
          share.from > 0
            ? `M${LEFT} ${TOP}V174l-4 4 8 4-4 4V${FOOT}H${RIGHT}`
            : `M${LEFT} ${TOP}V${FOOT}H${RIGHT}`
        }
      />
      {groups.map((g, i) => (
        <text
          key={g.condition}
          x={early[i] ? x(g.shownTo) + 8 : RIGHT + 8}
          y={ends[i]}
          style={{
            fontWeight: 650,
            fill: i > 0 ? "var(--mask)" : undefined,
            // Over a band the name keeps a rim of paper, so that no line runs through its letters.
            paintOrder: "stroke",
            stroke: "var(--paper)",
            strokeWidth: early[i] ? 4 : 0,
          }}
        >
          {g.condition}
        </text>
      ))}
      {coverAt !== null ? (
        <g>
          <path className="ax" style={{ strokeDasharray: "2 3" }} d={`M${coverAt} ${TOP}V${FOOT}`} />
          <text
            x={coverAt + (coverAt > 480 ? -5 : 5)}
            y={FOOT - 8}
            textAnchor={coverAt > 480 ? "end" : "start"}
            className="dim"
          >
            new: cover ends
          </text>
        </g>
      ) : null}
      <text x="0" y="16" className="dim">
        share
      </text>
      <text x="0" y="31" className="dim">
        working
      </text>
      <text x="0" y="207" className="dim">
        months
      </text>
      <path className="gr" d={`M0 215H${RIGHT}`} />
      <text x="0" y="228" className="dim">
        Still at risk
      </text>
      {groups.map((g, i) => (
        <g key={g.condition}>
          <text x="0" y={246 + i * 18}>
            {g.condition === "refurbished" ? "refurb." : g.condition}
          </text>
          {g.atRisk
            .filter((n) => months.ticks.includes(n.month))
            .map((n) => (
              <text
                key={n.month}
                x={x(n.month * DAYS_PER_MONTH)}
                y={246 + i * 18}
                textAnchor="middle"
                className="mo"
              >
                {grouped(n.units)}
              </text>
            ))}
        </g>
      ))}
    </svg>
  );
}

type Place = (v: number) => number;

function Curve({
  group,
  second,
  x,
  y,
  floor,
}: {
  group: SurvivalGroup;
  second: boolean;
  x: Place;
  y: Place;
  floor: number;
}) {
  const end = x(group.shownTo);
  const line = (of: (s: SurvivalGroup["steps"][number]) => number, from = `M${x(0)} ${y(1)}`) =>
    group.steps.reduce((d, s) => `${d}H${x(s.time).toFixed(1)}V${y(of(s)).toFixed(1)}`, from) +
    `H${end.toFixed(1)}`;
  const main = line((s) => s.survival);
  const lo = line((s) => s.lo ?? floor);
  const hi = line((s) => s.hi ?? s.survival);
  if (second)
    return (
      <>
        <path className="b2" d={`${hi}${lo}`} />
        <path className="c2" d={main} />
      </>
    );
  // The band is the way out along the upper limit and back along the lower one.
  const back = [...group.steps].reverse().reduce(
    (d, s, i, all) => {
      const before = all[i + 1];
      const level = before ? (before.lo ?? floor) : 1;
      return `${d}H${x(s.time).toFixed(1)}V${y(level).toFixed(1)}`;
    },
    `V${y(group.steps.at(-1)?.lo ?? 1).toFixed(1)}`,
  );
  return (
    <>
      <path className="b1" d={`${hi}${back}H${x(0)}Z`} />
      <path className="c1" d={main} />
    </>
  );
}
