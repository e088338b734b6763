import betaQuantile from "@stdlib/stats-base-dists-beta-quantile";
import jstat from "jstat";

export type Limits = { lo: number; hi: number };

/**
 * Chi-square quantile. jstat holds its accuracy at the large degrees of freedom of big fleets, where
 * other packages drift from about a thousand on; tests pin it up to two million.
 */
export function chiSquareQuantile(p: number, df: number): number {
  return jstat.chisquare.inv(p, df);
}

/** The normal quantile z with a two-sided probability `confidence` within ±z. */
export function normalTwoSided(confidence: number): number {
  // The everyday value to full precision; others through the square of a normal.
  return confidence === 0.95 ? 1.959963984540054 : Math.sqrt(chiSquareQuantile(confidence, 1));
}

/** Exact two-sided Poisson limits of a count (chi-square form; Garwood 1936, Biometrika 28:437). */
export function poissonLimits(count: number, confidence = 0.95): Limits {
  const a = 1 - confidence;
  return {
    lo: count === 0 ? 0 : chiSquareQuantile(a / 2, 2 * count) / 2,
    hi: chiSquareQuantile(1 - a / 2, 2 * count + 2) / 2,
  };
}

export type Rate = { failures: number; exposure: number; rate: number; lo: number; hi: number };

/**
 * Failures over exposure with exact Poisson limits, per unit of exposure. No exposure, no rate:
 * null, never infinity. It is no probability: at 0.5 a year fewer than half fail in one.
 */
export function rateOf(failures: number, exposure: number, confidence = 0.95): Rate | null {
  if (!(exposure > 0)) return null;
  const { lo, hi } = poissonLimits(failures, confidence);
  return { failures, exposure, rate: failures / exposure, lo: lo / exposure, hi: hi / exposure };
}

/** Exposure per failure with limits. With no failure only a one-sided lower bound exists. */
export function exposurePerFailure(
  failures: number,
  exposure: number,
  confidence = 0.95,
): { mean: number | null; lo: number; hi: number | null } | null {
  if (!(exposure > 0)) return null;
  if (failures === 0) return { mean: null, lo: exposure / -Math.log(1 - confidence), hi: null };
  const { lo, hi } = poissonLimits(failures, confidence);
  return { mean: exposure / failures, lo: exposure / hi, hi: exposure / lo };
}

/** Wilson limits of a share: for charts. Null without trials. */
export function wilson(x: number, n: number, confidence = 0.95): Limits | null {
  if (n === 0) return null;
  const z = normalTwoSided(confidence);
  const p = x / n;
  const mid = p + (z * z) / (2 * n);
  const half = z * Math.sqrt((p * (1 - p)) / n + (z * z) / (4 * n * n));
  const by = 1 + (z * z) / n;
  return { lo: x === 0 ? 0 : (mid - half) / by, hi: x === n ? 1 : (mid + half) / by };
}

/** Exact (Clopper-Pearson) limits of a share: for tables and claims. Null without trials. */
export function exactShare(x: number, n: number, confidence = 0.95): Limits | null {
  if (n === 0) return null;
  const a = 1 - confidence;
  return {
    lo: x === 0 ? 0 : betaQuantile(a / 2, x, n - x + 1),
    hi: x === n ? 1 : betaQuantile(1 - a / 2, x + 1, n - x),
  };
}
