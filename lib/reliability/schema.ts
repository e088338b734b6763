import { z } from "zod";
import { CONDITIONS, FAMILIES, type Condition, type Family } from "../ledger/schema";
import type { Limits } from "./intervals";
import type { SurvivalStep } from "./survival";
import type { Cohort } from "./triangle";

export const GROUPS = ["family", "model"] as const;
export type GroupBy = (typeof GROUPS)[number];

const Month = z.string().regex(/^\d{4}-(0[1-9]|1[0-2])$/);

/**
 * The filter as it stands in the address. A value that is none of ours falls back to "all": an old
 * link still opens, and the sentence on the page says what is shown.
 */
export const RatesFilter = z.object({
  by: z.enum(GROUPS).catch("family"),
  system: z.string().max(80).catch(""),
  condition: z.enum(CONDITIONS).nullable().catch(null),
  family: z.enum(FAMILIES).catch("drive"),
  from: Month.nullable().catch(null),
  to: Month.nullable().catch(null),
});
export type RatesFilter = z.output<typeof RatesFilter>;

/** Sums over the lives of one model in one condition: all that the figures of figure 1 need. */
export type LifeSums = {
  family: Family;
  modelCode: string;
  modelName: string;
  condition: Condition;
  units: number;
  days: number;
  failures: number;
  /** Still under observation on the as-of day. */
  inView: number;
  /** Returned, and not judged yet. */
  open: number;
  judged: number;
  noFaultFound: number;
  /** Lives whose DOA window has passed, and how many of them were dead on arrival. */
  arrived: number;
  arrivedDead: number;
  /** Days of cover that most of them have. */
  coverDays: number | null;
};

export type RateRow = {
  key: string;
  /** Short, as it stands in the figure. */
  label: string;
  /** With the model's name, for tables and exports. */
  name: string;
  /** As it stands in a sentence: "refurbished drive", "VD-8". */
  prose: string;
  family: Family | null;
  condition: Condition | null;
  units: number;
  unitYears: number;
  failures: number;
  /** Failures per unit-year, with exact Poisson 95% limits. None without exposure. */
  rate: number | null;
  limits: Limits | null;
  /** Upper limit if every return that is not judged yet were confirmed. */
  highest: number | null;
  /** Under 5 failures or 200 unit-years: the whisker says more than the dot. */
  small: boolean;
  inView: number;
  open: number;
  judged: number;
  noFaultFound: number;
  noFaultFoundLimits: Limits | null;
  arrived: number;
  arrivedDead: number;
  arrivedDeadLimits: Limits | null;
};

export type RatesView = {
  asOf: string;
  filter: RatesFilter;
  rows: RateRow[];
  /** All parts together; whole systems stand apart, as their parts' time is theirs. */
  all: RateRow;
  firm: string[];
  notYet: string[];
};

export type SurvivalGroup = {
  condition: Condition;
  units: number;
  failures: number;
  steps: SurvivalStep[];
  /** Oldest age in days at which at least ten are at risk: the curve is drawn no further. */
  shownTo: number;
  atRisk: { month: number; units: number }[];
  coverDays: number | null;
};
export type SurvivalView = { family: Family; asOf: string; groups: SurvivalGroup[] };

export type StandsOut = {
  month: string;
  failures: number;
  expected: number;
  lot: { code: string; units: number; of: number } | null;
};
export type TriangleView = { family: Family; asOf: string; cohorts: Cohort[]; standsOut: StandsOut | null };

export type RatesChoices = {
  systems: { code: string; name: string }[];
  families: Family[];
  months: { first: string; last: string } | null;
};
