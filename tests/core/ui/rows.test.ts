import { describe, expect, it } from "vitest";
import { coverNodes, rulerRows } from "@/components/coverage/rows";
import type { CoverNode } from "@/components/coverage/tree";
import type { CoverRow, CoverView, TreePart } from "@/lib/coverage/schema";

const part = (n: number, more: Partial<TreePart> = {}): TreePart => ({
  unitId: `u${n}`,
  installationId: `i${n}`,
  parentUnitId: "system",
  serial: `OM-64R-${n}`,
  slot: `A${n}`,
  family: "memory",
  modelCode: "OM-64R",
  modelName: "64 GB module",
  depth: 1,
  fromOn: "2024-03-04",
  source: "as_built",
  swaps: [],
  coverSaleLineId: null,
  givenOn: null,
  noticedOn: null,
  was: [],
  ...more,
});

const row = (unitId: string, more: Partial<CoverRow> = {}): CoverRow => ({
  unitId,
  serial: unitId,
  slot: null,
  family: "memory",
  modelName: "64 GB module",
  depth: 1,
  clauseNumber: "3.2",
  clauseTitle: "Memory",
  kind: "cover",
  firstOn: "2024-03-05",
  lastOn: "2029-03-04",
  state: "covered",
  words: "to 4 Mar 2029",
  claimed: false,
  ...more,
});

const view = (tree: TreePart[], rows: CoverRow[], claimedUnitId = "none"): CoverView => ({
  unit: {
    id: "system",
    serial: "OW4420-7K3QX",
    modelCode: "OW-4420",
    modelName: "four-socket",
    condition: "new",
    family: "system",
  },
  claimedUnitId,
  saleLineId: "s",
  accountId: "a",
  accountName: "Bramblegate University",
  orderNumber: "OS-20871",
  buyerKind: "business",
  country: "GB",
  shippedOn: "2024-03-04",
  deliveredOn: null,
  siteNote: null,
  termsVersionId: "t",
  termsName: "Terms 2024",
  termsIssue: 2,
  onDay: "2026-11-12",
  rows,
  pauses: [],
  transfers: [],
  unread: [],
  tree,
});

const serials = (nodes: readonly CoverNode[]): string[] =>
  nodes.flatMap((n) => [...(n.serial ? [n.serial] : []), ...serials(n.folded ?? [])]);

describe("ruler rows", () => {
  it("share a row where clause and days are the same; the claimed part stands alone", () => {
    const rows = rulerRows(
      view([], [row("u1"), row("u2"), row("u3", { claimed: true, slot: "A3" }), row("u4")]),
    );
    expect(rows.map((r) => [r.label, r.claimed])).toEqual([
      ["Memory, A3", true],
      ["Memory, 3 parts", false],
    ]);
  });

  it("know a DOA window that has ended, which its fill no longer shows", () => {
    const rows = rulerRows(
      view([], [row("u1", { kind: "doa", state: "ended", lastOn: "2024-04-03" }), row("u1")]),
    );
    expect(rows.map((r) => [r.kind, r.window])).toEqual([
      ["ended", "doa"],
      ["covered", "cover"],
    ]);
  });

  it("come in the order of the clauses, by number", () => {
    const rows = rulerRows(
      view(
        [],
        [
          row("a", { clauseNumber: "3.10" }),
          row("b", { clauseNumber: "3.2" }),
          row("c", { clauseNumber: "2.1" }),
        ],
      ),
    );
    expect(rows.map((r) => r.clause)).toEqual(["2.1", "3.2", "3.10"]);
  });
});

describe("tree of a view", () => {
  it("folds a run of alike parts and loses none", () => {
    const parts = Array.from({ length: 8 }, (_, i) => part(i + 1));
    const nodes = coverNodes(
      view(
        parts,
        parts.map((p) => row(p.unitId)),
      ),
    );
    expect(nodes).toHaveLength(2);
    expect(nodes[1]?.label).toBe("Memory, A1 to A8 (8)");
    expect(serials(nodes)).toEqual(parts.map((p) => p.serial));
  });

  it("says what slots have in common once", () => {
    const label = (...slots: string[]) => {
      const parts = slots.map((slot, i) => part(i, { slot }));
      const rows = parts.map((p) => row(p.unitId));
      return coverNodes(view(parts, rows))[1]?.label;
    };
    expect(label("Memory A1", "Memory A2", "Memory A3")).toBe("Memory A1 to A3 (3)");
    expect(label("Module 1", "Module 2", "Module 3")).toBe("Memory, Module 1 to 3 (3)");
    expect(label("A1", "A2", "B1")).toBe("Memory, A1 to B1 (3)");
  });

  it("leaves the claimed, the swapped and the differently covered part in the open", () => {
    const parts = [
      part(1),
      part(2),
      part(3),
      part(4, { was: [{ serial: "OM-64R-9", toOn: "2025-06-11", reason: "RMA-0877" }] }),
      part(5),
      part(6),
      part(7),
      part(8),
      part(9),
    ];
    const rows = parts.map((p) => row(p.unitId, p.unitId === "u8" ? { state: "person" } : {}));
    const nodes = coverNodes(view(parts, rows, "u9"));
    expect(nodes.slice(1).map((n) => n.label)).toEqual([
      "Memory, A1 to A3 (3)",
      "Memory, A4",
      "Memory, A5 to A7 (3)",
      "Memory, A8",
      "Memory, A9",
    ]);
    expect(nodes[2]?.was).toEqual([{ serial: "OM-64R-9", words: "to 11 Jun 2025, RMA-0877" }]);
    expect(nodes[5]).toMatchObject({ hit: true, current: true });
  });

  // Thirty-two modules, twenty-four drives, four supplies: a full four-socket server.
  const full = () => {
    const bank = (names: string[], family: string) =>
      names.map((slot) => part(0, { unitId: slot, installationId: slot, serial: slot, slot, family }));
    const numbers = (n: number) => Array.from({ length: n }, (_, i) => i + 1);
    return [
      ...bank(
        ["A", "B", "C", "D"].flatMap((b) => numbers(8).map((n) => `${b}${n}`)),
        "memory",
      ),
      ...bank(
        numbers(24).map((n) => `Bay ${n}`),
        "drive",
      ),
      ...bank(
        numbers(4).map((n) => `Supply ${n}`),
        "psu",
      ),
    ];
  };

  it("shows sixty parts in a handful of lines, each part once, whichever is claimed", () => {
    const parts = full();
    expect(parts).toHaveLength(60);
    for (const claimed of parts) {
      const nodes = coverNodes(
        view(
          parts,
          parts.map((p) => row(p.unitId, { family: p.family, claimed: p === claimed })),
          claimed.unitId,
        ),
      );
      expect(nodes.length).toBeLessThanOrEqual(8);
      expect(serials(nodes)).toEqual(parts.map((p) => p.serial));
      const open = nodes.find((n) => n.hit);
      expect(open?.serial).toBe(claimed.serial);
      expect(nodes.flatMap((n) => n.folded ?? []).some((n) => n.hit)).toBe(false);
    }
  });

  it("keeps a claimed part's parent and children where they can be seen", () => {
    const board = part(1, { slot: "Board", family: "board" });
    const sockets = [2, 3, 4, 5].map((n) =>
      part(n, { parentUnitId: "u1", depth: 2, slot: `Socket ${n}`, family: "cpu" }),
    );
    const nodes = coverNodes(
      view(
        [board, ...sockets],
        [board, ...sockets].map((p) => row(p.unitId)),
        "u1",
      ),
    );
    expect(nodes.map((n) => [n.depth, n.hit, n.folded?.length])).toEqual([
      [0, false, undefined],
      [1, true, undefined],
      [2, undefined, 4],
    ]);
  });
});
