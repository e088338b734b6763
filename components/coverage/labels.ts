/**
 * Where the labels of a ruler's lines stand. Claim and today are often a day apart, so each label is
 * put on a side of its line and, where that is not enough, on a lane of its own.
 */
export type LineLabel = {
  id: string;
  at: number;
  text: string;
  /** What it says where the scale is narrow. */
  short?: string;
  prefer: "left" | "right";
};
export type Placed = { side: "left" | "right"; lane: number };

/** Widths to reckon for: the scale at its narrowest beside its columns, and folded. */
export const WIDE = 420;
export const NARROW = 256;

const PER_CHARACTER = 6.6;
const PADDING = 10;
const LANES = 4;

type Box = { from: number; to: number; lane: number };

/**
 * Labels by id for a scale of this many pixels. Earlier labels choose first. `beyond` is free room to
 * the right of the scale that a label may run into.
 */
export function placeLabels(labels: readonly LineLabel[], width: number, beyond = 0): Map<string, Placed> {
  const lines = labels.map((l) => (l.at / 100) * width);
  const taken: Box[] = [];
  const placed = new Map<string, Placed>();

  labels.forEach((label, index) => {
    const x = lines[index] ?? 0;
    const w = label.text.length * PER_CHARACTER + PADDING;
    const boxOn = (side: "left" | "right", lane: number): Box =>
      side === "right" ? { from: x, to: x + w, lane } : { from: x - w, to: x, lane };
    const fits = (b: Box) => b.from >= 0 && b.to <= width + beyond;
    const free = (b: Box) => taken.every((t) => t.lane !== b.lane || b.to <= t.from || b.from >= t.to);
    const clear = (b: Box) => lines.every((line, i) => i === index || line <= b.from || line >= b.to);
    const sides = label.prefer === "left" ? (["left", "right"] as const) : (["right", "left"] as const);

    const options: { side: "left" | "right"; box: Box }[] = [];
    for (let lane = 0; lane < LANES; lane++) {
      for (const side of sides) options.push({ side, box: boxOn(side, lane) });
    }
    const usable = options.filter((o) => fits(o.box) && free(o.box));
    const best =
      // A label that covers no other line, on the first lane, is worth more than its wished-for side.
      usable.find((o) => o.box.lane === 0 && clear(o.box)) ??
        usable.find((o) => clear(o.box)) ??
        usable[0] ?? {
          side: x > width / 2 ? ("left" as const) : ("right" as const),
          box: boxOn("right", LANES - 1),
        };
    taken.push(best.box);
    placed.set(label.id, { side: best.side, lane: best.box.lane });
  });
  return placed;
}

export const lanesOf = (placed: Map<string, Placed>): number =>
  Math.max(0, ...[...placed.values()].map((p) => p.lane)) + 1;
