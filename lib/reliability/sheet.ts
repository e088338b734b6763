import { stringify } from "csv-stringify/sync";
import type { RateRow, RatesView, SurvivalView, TriangleView } from "./schema";

export const SHEETS = ["rates", "survival", "triangle"] as const;
export type Sheet = (typeof SHEETS)[number];

type Line = Record<string, string | number | boolean | null>;

/** Numbers keep all their digits here: a sheet is for computing on. Text that a table program would run is escaped. */
const write = (lines: Line[], columns: string[]) =>
  stringify(lines, {
    header: true,
    columns,
    escape_formulas: true,
    record_delimiter: "windows",
    cast: { boolean: String },
  });

const RATE_COLUMNS = (r: RateRow, asOf: string): Line => ({
  as_of: asOf,
  what: r.name,
  units: r.units,
  failures: r.failures,
  unit_years: r.unitYears,
  rate_per_unit_year: r.rate,
  rate_low_95: r.limits?.lo ?? null,
  rate_high_95: r.limits?.hi ?? null,
  small_sample: r.small,
  not_judged_yet: r.open,
  rate_high_if_all_fail: r.highest,
  judged: r.judged,
  no_fault_found: r.noFaultFound,
  no_fault_found_low_95: r.noFaultFoundLimits?.lo ?? null,
  no_fault_found_high_95: r.noFaultFoundLimits?.hi ?? null,
  past_doa_window: r.arrived,
  dead_on_arrival: r.arrivedDead,
  dead_on_arrival_low_95: r.arrivedDeadLimits?.lo ?? null,
  dead_on_arrival_high_95: r.arrivedDeadLimits?.hi ?? null,
});

export function ratesSheet(view: RatesView): string {
  const lines = [...view.rows, view.all].map((r) => RATE_COLUMNS(r, view.asOf));
  return write(lines, Object.keys(lines[0]!));
}

export function survivalSheet(view: SurvivalView): string {
  const lines = view.groups.flatMap((g) =>
    g.steps.map((s) => ({
      as_of: view.asOf,
      family: view.family,
      condition: g.condition,
      age_days: s.time,
      at_risk: s.atRisk,
      failed: s.failed,
      share_working: s.survival,
      greenwood_se: s.se,
      low_95: s.lo,
      high_95: s.hi,
      cumulative_hazard: s.hazard,
    })),
  );
  return write(
    lines,
    "as_of family condition age_days at_risk failed share_working greenwood_se low_95 high_95 cumulative_hazard".split(
      " ",
    ),
  );
}

export function triangleSheet(view: TriangleView): string {
  const lines = view.cohorts.flatMap((c) =>
    c.cells.map((cell) => ({
      as_of: view.asOf,
      family: view.family,
      ship_month: c.month,
      units: c.units,
      month_in_service: cell.month,
      at_risk: cell.atRisk,
      failed: cell.failed,
      still_running: cell.running,
    })),
  );
  return write(
    lines,
    "as_of family ship_month units month_in_service at_risk failed still_running".split(" "),
  );
}
