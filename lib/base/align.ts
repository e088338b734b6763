import { foldAlike } from "./serial";

/** Two characters read as one, in the loose key: VV and W, RN and M. */
export const WIDE = [
  ["UU", "W"],
  ["RN", "M"],
] as const;

/** What an error costs: the likelier, the less. The order is common practice, no source. */
export const COST = {
  alike: 1,
  wide: 2,
  near: 3,
  swap: 4,
  repeat: 5,
  missing: 6,
  other: 8,
  reading: 1,
} as const;

/** Mixed up by some hands, but not folded: 1 and 7, 8 and 3, V and Y, and the keyboard's Y and Z. */
const NEAR = new Set(["17", "38", "UY", "2Y"]);

function pair(a: string, b: string): number {
  if (a === b) return 0;
  const x = foldAlike(a);
  const y = foldAlike(b);
  if (x === y) return COST.alike;
  return NEAR.has(x < y ? x + y : y + x) ? COST.near : COST.other;
}

function wide(two: string, one: string): number {
  const match = WIDE.find(([t, o]) => t === foldAlike(two) && o === one);
  return match ? COST.wide : Infinity;
}

type Step = { kind: "pair" | "missing" | "extra" | "swap" | "wide"; given: number; known: number };

const PAIR: Step = { kind: "pair", given: 1, known: 1 };
const MISSING: Step = { kind: "missing", given: 0, known: 1 };
const EXTRA: Step = { kind: "extra", given: 1, known: 0 };
const SWAP: Step = { kind: "swap", given: 2, known: 2 };
const ONE_FOR_TWO: Step = { kind: "wide", given: 1, known: 2 };
const TWO_FOR_ONE: Step = { kind: "wide", given: 2, known: 1 };

/** Cheapest way from the key given to one known, and its steps from the front. */
export function align(
  given: string,
  known: string,
): { cost: number; steps: () => (Step & { i: number; j: number })[] } {
  const width = known.length + 1;
  const costs = new Float64Array((given.length + 1) * width).fill(Infinity);
  const moves: Step[] = new Array(costs.length);
  const cost = (i: number, j: number) => (i < 0 || j < 0 ? Infinity : costs[i * width + j]!);
  const lone = (text: string, at: number) => {
    const c = foldAlike(text[at]!);
    const twin = [text[at - 1], text[at + 1]].some((n) => n !== undefined && foldAlike(n) === c);
    return twin ? COST.repeat : COST.missing;
  };
  costs[0] = 0;
  for (let i = 0; i <= given.length; i++)
    for (let j = 0; j <= known.length; j++) {
      if (i + j === 0) continue;
      let best = Infinity;
      let move: Step = PAIR;
      const offer = (step: Step, extra: number) => {
        const sum = cost(i - step.given, j - step.known) + extra;
        if (sum < best) [best, move] = [sum, step];
      };
      if (i > 0 && j > 0) offer(PAIR, pair(given[i - 1]!, known[j - 1]!));
      if (j > 0) offer(MISSING, lone(known, j - 1));
      if (i > 0) offer(EXTRA, lone(given, i - 1));
      if (i > 1 && j > 1) {
        const cross = [pair(given[i - 1]!, known[j - 2]!), pair(given[i - 2]!, known[j - 1]!)];
        if (cross.every((c) => c <= COST.alike)) offer(SWAP, COST.swap + cross[0]! + cross[1]!);
      }
      if (i > 0 && j > 1) offer(ONE_FOR_TWO, wide(known.slice(j - 2, j), given[i - 1]!));
      if (i > 1 && j > 0) offer(TWO_FOR_ONE, wide(given.slice(i - 2, i), known[j - 1]!));
      costs[i * width + j] = best;
      moves[i * width + j] = move;
    }
  return {
    cost: cost(given.length, known.length),
    steps: () => {
      const found = [];
      for (let i = given.length, j = known.length; i + j > 0;) {
        const step = moves[i * width + j]!;
        i -= step.given;
        j -= step.known;
        found.push({ ...step, i, j });
      }
      return found.reverse();
    },
  };
}
