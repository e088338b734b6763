// Scales of the figures: plain numbers in, places in the drawing out.

const STEPS = [1, 3];

export type LogAxis = { from: number; to: number; ticks: number[] };

/**
 * Ticks 1, 3, 10, 30 … for rates and their limits. Every rate and upper limit is inside; a lower limit
 * far below the least rate is not, or one failure in a small group would squeeze all the others.
 */
export function logAxis(rates: readonly number[], limits: readonly number[]): LogAxis {
  const whole = (list: readonly number[]) => list.filter((v) => v > 0 && Number.isFinite(v));
  const positive = whole([...rates, ...limits]);
  if (positive.length === 0) return { from: 0.1, to: 10, ticks: [0.1, 0.3, 1, 3, 10] };
  const all: number[] = [];
  for (let e = -4; e <= 6; e++) for (const s of STEPS) all.push(Number((s * 10 ** e).toPrecision(1)));
  const [least, most] = [Math.min(...positive), Math.max(...positive)];
  const to = all.find((t) => t >= most) ?? all.at(-1)!;
  const lowest = whole(rates).length > 0 ? Math.min(...whole(rates)) * 0.3 : most / 100;
  const from = all.findLast((t) => t <= Math.max(least, lowest) && t < to) ?? all[0]!;
  const ticks = all.filter((t) => t >= from && t <= to);
  // More than seven labels run into each other: then whole decades only.
  return { from, to, ticks: ticks.length > 7 ? ticks.filter((t) => Math.log10(t) % 1 === 0) : ticks };
}

/** Where a value lies on a log axis, from 0 to 1, kept inside. */
export function logShare(value: number, axis: { from: number; to: number }): number {
  const at = (Math.log10(value) - Math.log10(axis.from)) / (Math.log10(axis.to) - Math.log10(axis.from));
  return Math.min(1, Math.max(0, at));
}

/** Ticks of a share axis that ends at 1 and begins no higher than `least`. */
export function shareAxis(least: number): { from: number; ticks: number[] } {
  const room = 1 - Math.max(0, least);
  const step = room <= 0.05 ? 0.01 : room <= 0.1 ? 0.02 : room <= 0.25 ? 0.05 : room <= 0.5 ? 0.1 : 0.2;
  const count = Math.max(2, Math.ceil((room - 1e-9) / step));
  const from = Math.max(0, 1 - count * step);
  return {
    from,
    ticks: Array.from({ length: count + 1 }, (_, i) => Math.round((from + i * step) * 100) / 100),
  };
}

/** Months every 6, or every 12 on a long axis, up to the first that holds `most`. */
export function monthAxis(most: number): { to: number; ticks: number[] } {
  const every = most > 60 ? 12 : most > 12 ? 6 : 2;
  const to = Math.max(every, Math.ceil(most / every) * every);
  return { to, ticks: Array.from({ length: to / every + 1 }, (_, i) => i * every) };
}

/** Labels at heights of their own, moved apart downward where they would meet. */
export function apart(heights: readonly number[], gap: number): number[] {
  const order = heights.map((_, i) => i).sort((a, b) => heights[a]! - heights[b]!);
  const placed = [...heights];
  for (let i = 1; i < order.length; i++) {
    const above = placed[order[i - 1]!]!;
    if (placed[order[i]!]! < above + gap) placed[order[i]!] = above + gap;
  }
  return placed;
}

/** "47 796": groups of three, with a space that does not break. */
export const grouped = (n: number): string => Math.round(n).toLocaleString("en-US").replace(/,/g, "\u00a0");

/** Unit-years: one digit after the point where there are few. */
export const years = (n: number): string => (n < 10 ? n.toFixed(1) : grouped(n));
