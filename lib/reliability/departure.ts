/**
 * Groups that fail more than the rest of them explains. Given the total of failures, a group's share
 * follows a binomial with its share of the expected ones: exact when the expectation comes from the same
 * groups. All groups tested are adjusted for together (Benjamini and Hochberg 1995, JRSS B 57:289).
 */
export function departing(
  expected: readonly number[],
  failed: readonly number[],
  q = 0.05,
): { p: number; adjusted: number; flagged: boolean }[] {
  const total = failed.reduce((a, b) => a + b, 0);
  const sum = expected.reduce((a, b) => a + b, 0);
  const p = failed.map((d, i) => (sum > 0 ? binomialTail(d, total, expected[i]! / sum) : 1));
  const adjusted = falseDiscovery(p);
  // A single failure flags nothing: one is no pattern.
  return p.map((value, i) => ({
    p: value,
    adjusted: adjusted[i]!,
    flagged: adjusted[i]! <= q && failed[i]! >= 2,
  }));
}

/** Adjusted p-values, in the order given. */
export function falseDiscovery(p: readonly number[]): number[] {
  const order = p.map((_, i) => i).sort((a, b) => p[b]! - p[a]!);
  const adjusted: number[] = new Array(p.length);
  let least = 1;
  order.forEach((i, back) => {
    least = Math.min(least, (p[i]! * p.length) / (p.length - back));
    adjusted[i] = least;
  });
  return adjusted;
}

/** P(X >= d) for X binomial(n, p), summed from its smaller end in logarithms. */
export function binomialTail(d: number, n: number, p: number): number {
  if (d <= 0) return 1;
  if (d > n || p <= 0) return 0;
  if (p >= 1) return 1;
  const [lp, lq] = [Math.log(p), Math.log1p(-p)];
  let logChoose = 0;
  let below = 0;
  let above = 0;
  for (let k = 0; k <= n; k++) {
    if (k > 0) logChoose += Math.log(n - k + 1) - Math.log(k);
    const mass = Math.exp(logChoose + k * lp + (n - k) * lq);
    if (k < d) below += mass;
    else above += mass;
  }
  return d > n * p ? above : Math.max(0, 1 - below);
}
