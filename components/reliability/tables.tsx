import { Table, type Column } from "@/components/ui/table";
import { showMonth } from "@/lib/base/show";
import type { RateRow, SurvivalView, TriangleView } from "@/lib/reliability/schema";
import { DAYS_PER_MONTH, type Cohort } from "@/lib/reliability/triangle";
import { per100, percent } from "@/lib/reliability/words";
import { grouped, years } from "./axes";

const share = (x: number, n: number, limits: { lo: number; hi: number } | null) =>
  limits === null ? "–" : `${x} of ${grouped(n)}, ${percent(limits.lo)} to ${percent(limits.hi)}`;

const RATES: Column<RateRow>[] = [
  { key: "name", head: "What", cell: (r) => `${r.name}${r.small && r.key !== "all" ? " †" : ""}` },
  { key: "units", head: "units", num: true, cell: (r) => grouped(r.units) },
  { key: "failures", head: "failures", num: true, cell: (r) => grouped(r.failures) },
  { key: "years", head: "unit-years", num: true, cell: (r) => years(r.unitYears) },
  {
    key: "rate",
    head: "per 100 unit-years",
    num: true,
    cell: (r) =>
      r.limits === null || r.rate === null ? "no time yet" : r.failures === 0 ? "–" : per100(r.rate),
  },
  {
    key: "limits",
    head: "95% interval",
    num: true,
    cell: (r) => (r.limits ? `${per100(r.limits.lo)} to ${per100(r.limits.hi)}` : "–"),
  },
  { key: "open", head: "not judged yet", num: true, cell: (r) => grouped(r.open) },
  {
    key: "highest",
    head: "at most, if all of those fail",
    num: true,
    cell: (r) => (r.highest === null ? "–" : per100(r.highest)),
  },
  {
    key: "nff",
    head: "no fault found, of those judged",
    num: true,
    cell: (r) => share(r.noFaultFound, r.judged, r.noFaultFoundLimits),
  },
  {
    key: "doa",
    head: "dead on arrival, of those past that window",
    num: true,
    cell: (r) => share(r.arrivedDead, r.arrived, r.arrivedDeadLimits),
  },
];

export function RateTable({ rows, all }: { rows: RateRow[]; all: RateRow }) {
  return (
    <Table
      caption="Figure 1 as a table: failures, exposure, rates and shares with exact 95% intervals"
      columns={RATES}
      rows={[...rows, all]}
      rowKey={(r) => r.key}
    />
  );
}

type SurvivalLine = {
  key: string;
  condition: string;
  months: string;
  atRisk: number;
  failed: number;
  share: string;
  limits: string;
};

export function SurvivalTable({ view }: { view: SurvivalView }) {
  const rows = view.groups.flatMap((g) =>
    g.steps.map((s): SurvivalLine => ({
      key: `${g.condition} ${s.time}`,
      condition: g.condition,
      months: (s.time / DAYS_PER_MONTH).toFixed(1),
      atRisk: s.atRisk,
      failed: s.failed,
      share: s.survival.toFixed(4),
      limits: s.lo === null || s.hi === null ? "–" : `${s.lo.toFixed(4)} to ${s.hi.toFixed(4)}`,
    })),
  );
  if (rows.length === 0) return <p className="s">No failure at an age where enough units are at risk.</p>;
  return (
    <Table
      caption="Figure 2 as a table: every age with a failure"
      columns={[
        { key: "condition", head: "Condition", cell: (r) => r.condition },
        { key: "months", head: "months", num: true, cell: (r) => r.months },
        { key: "atRisk", head: "at risk", num: true, cell: (r) => grouped(r.atRisk) },
        { key: "failed", head: "failed", num: true, cell: (r) => r.failed },
        { key: "share", head: "share working", num: true, cell: (r) => r.share },
        { key: "limits", head: "95% interval", num: true, cell: (r) => r.limits },
      ]}
      rows={rows}
      rowKey={(r) => r.key}
    />
  );
}

export function TriangleTable({ view, months }: { view: TriangleView; months: number }) {
  const cell = (row: Cohort, k: number) => {
    const c = row.cells[k];
    return c ? `${c.failed} of ${grouped(c.atRisk)}${c.running ? ", running" : ""}` : "";
  };
  return (
    <Table
      caption="Figure 3 as a table: failures of units at risk, by ship month and month in service"
      columns={[
        { key: "month", head: "Shipped", cell: (r) => showMonth(`${r.month}-01`) },
        { key: "units", head: "units", num: true, cell: (r) => grouped(r.units) },
        ...Array.from({ length: months }, (_, k) => ({
          key: `m${k + 1}`,
          head: `month ${k + 1}`,
          num: true,
          cell: (r: Cohort) => cell(r, k),
        })),
      ]}
      rows={view.cohorts}
      rowKey={(r) => r.month}
      current={(r) => r.month === view.standsOut?.month}
    />
  );
}
