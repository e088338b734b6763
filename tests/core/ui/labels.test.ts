import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { lanesOf, placeLabels, type LineLabel } from "@/components/coverage/labels";

const three = (ship: number, claim: number, today: number): LineLabel[] => [
  { id: "today", at: today, text: "today", prefer: "right" },
  { id: "claim", at: claim, text: "claim 2 Nov", prefer: "left" },
  { id: "ship", at: ship, text: "shipped 4 Mar 2024", prefer: "right" },
];

describe("labels of the ruler's lines", () => {
  it("stand on either side of lines a day apart", () => {
    const placed = placeLabels(three(0.2, 52.6, 53.1), 600);
    expect(placed.get("claim")).toEqual({ side: "left", lane: 0 });
    expect(placed.get("today")).toEqual({ side: "right", lane: 0 });
    expect(placed.get("ship")).toEqual({ side: "right", lane: 0 });
  });

  it("turn inward at the rule's end", () => {
    expect(placeLabels(three(0, 20, 99.5), 600).get("today")?.side).toBe("left");
  });

  it("run on past the end where there is free room, sooner than over a line", () => {
    const lines: LineLabel[] = [
      { id: "today", at: 88, text: "today, Tue 1 Dec", prefer: "right" },
      { id: "claim", at: 85, text: "claim Mon 30 Nov", prefer: "left" },
    ];
    expect(placeLabels(lines, 420).get("today")?.side).toBe("left");
    const placed = placeLabels(lines, 420, 110);
    expect(placed.get("today")).toEqual({ side: "right", lane: 0 });
    expect(placed.get("claim")).toEqual({ side: "left", lane: 0 });
  });

  it("never overlap, whatever the days", () => {
    const at = fc.double({ min: 0, max: 100, noNaN: true });
    fc.assert(
      fc.property(at, at, at, fc.integer({ min: 260, max: 1200 }), (ship, claim, today, width) => {
        const labels = three(ship, claim, today);
        const placed = placeLabels(labels, width);
        const boxes = labels.map((l) => {
          const p = placed.get(l.id);
          if (!p) throw new Error("not placed");
          const x = (l.at / 100) * width;
          const w = l.text.length * 6.6 + 10;
          return p.side === "right"
            ? { from: x, to: x + w, lane: p.lane }
            : { from: x - w, to: x, lane: p.lane };
        });
        for (const a of boxes) {
          expect(a.from).toBeGreaterThanOrEqual(0);
          expect(a.to).toBeLessThanOrEqual(width);
          for (const b of boxes) {
            if (a !== b && a.lane === b.lane) expect(a.to <= b.from || b.to <= a.from).toBe(true);
          }
        }
        expect(lanesOf(placed)).toBeLessThanOrEqual(3);
      }),
    );
  });
});
