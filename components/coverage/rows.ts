import { FAMILY_WORDS, type Family } from "@/lib/ledger/schema";
import type { CoverRow, CoverView, TreePart } from "@/lib/coverage/schema";
import { shortDay } from "../ui/scale";
import type { RulerRow } from "./ruler";
import type { CoverNode } from "./tree";

const familyWord = (family: string) => FAMILY_WORDS[family as Family] ?? family;
const byNumber = new Intl.Collator("en", { numeric: true });

/** "Drive, bay 5" unless the slot names the part already. */
function partLabel(slot: string | null, family: string): string {
  const word = familyWord(family);
  if (!slot) return word;
  // "Supply 1" says power supply well enough; "Socket 1" does not say processor.
  const named = word
    .toLowerCase()
    .split(/[ ,]+/)
    .some((w) => slot.toLowerCase().includes(w));
  return named ? slot : `${word}, ${slot}`;
}

/** "Drive bay 1 to 8": what the last slot's name has in common with the first's is not said twice. */
function slotsWords(first: TreePart, last: TreePart): string {
  const a = first.slot.split(" ");
  const b = last.slot.split(" ");
  const same = b.findIndex((word, i) => word !== a[i]);
  return `${partLabel(first.slot, first.family)} to ${b.slice(Math.max(0, same)).join(" ")}`;
}

/**
 * A unit's cover as ruler rows: parts with the same clause and the same days share a row. The row
 * that decides a claim stands alone, so that its last day can be read.
 */
export function rulerRows(view: CoverView): RulerRow[] {
  const groups = new Map<string, CoverRow[]>();
  for (const row of view.rows) {
    // The first days are one window for all that was shipped: the claimed part shares their row.
    const own = row.kind === "cover" && row.claimed;
    const key = [row.clauseNumber, row.kind, row.firstOn, row.lastOn, row.state, own].join("|");
    groups.set(key, [...(groups.get(key) ?? []), row]);
  }
  const clauses = new Map<string, number>();
  for (const rows of groups.values()) {
    const clause = `${rows[0]?.clauseNumber} ${rows[0]?.kind}`;
    clauses.set(clause, (clauses.get(clause) ?? 0) + 1);
  }
  return [...groups.values()]
    .flatMap((rows) => {
      const first = rows[0];
      if (!first) return [];
      const alone = clauses.get(`${first.clauseNumber} ${first.kind}`) === 1;
      const label =
        alone || first.kind === "doa"
          ? first.clauseTitle
          : rows.length === 1
            ? partLabel(first.slot, first.family)
            : `${first.clauseTitle}, ${rows.length} parts`;
      return [
        {
          clause: first.clauseNumber,
          label,
          kind: first.state,
          from: first.firstOn,
          to: first.lastOn,
          words: first.words,
          claimed: rows.some((r) => r.claimed),
          window: first.kind,
        },
      ];
    })
    .sort((a, b) => byNumber.compare(a.clause, b.clause) || Number(b.claimed) - Number(a.claimed));
}

const FOLD_FROM = 3;

/** Slots that look alike may be folded: same place in the tree, same family, same cover, never swapped. */
function alike(a: TreePart, b: TreePart, bars: Map<string, CoverRow>, hit: string): boolean {
  const x = bars.get(a.unitId);
  const y = bars.get(b.unitId);
  return (
    a.parentUnitId === b.parentUnitId &&
    a.family === b.family &&
    a.was.length === 0 &&
    b.was.length === 0 &&
    a.unitId !== hit &&
    b.unitId !== hit &&
    x?.lastOn === y?.lastOn &&
    x?.firstOn === y?.firstOn &&
    x?.state === y?.state
  );
}

/** The as-built tree of a view, its runs of alike parts folded. `href` leads from a part's tag. */
export function coverNodes(view: CoverView, href?: (serial: string) => string): CoverNode[] {
  const bars = new Map(view.rows.filter((r) => r.kind === "cover").map((r) => [r.unitId, r]));
  const parents = new Set(view.tree.map((p) => p.parentUnitId));
  const bar = (unitId: string): CoverNode["bar"] => {
    const row = bars.get(unitId);
    return row ? { kind: row.state, from: row.firstOn, to: row.lastOn, words: row.words } : null;
  };
  const node = (part: TreePart): CoverNode => ({
    key: part.installationId,
    depth: Math.max(1, part.depth),
    label: partLabel(part.slot, part.family),
    serial: part.serial,
    href: href?.(part.serial),
    bar: bar(part.unitId),
    hit: part.unitId === view.claimedUnitId,
    current: part.unitId === view.claimedUnitId,
    was: part.was.map((w) => ({
      serial: w.serial,
      words: `to ${shortDay(w.toOn)}${w.reason ? `, ${w.reason}` : ""}`,
    })),
  });

  const nodes: CoverNode[] = [
    {
      key: view.unit.id,
      depth: 0,
      label: view.unit.modelCode,
      bar: bar(view.unit.id),
      hit: view.claimedUnitId === view.unit.id,
    },
  ];
  for (let i = 0; i < view.tree.length;) {
    const first = view.tree[i] as TreePart;
    let end = i + 1;
    while (end < view.tree.length) {
      const next = view.tree[end] as TreePart;
      if (parents.has(first.unitId) || parents.has(next.unitId)) break;
      if (!alike(first, next, bars, view.claimedUnitId)) break;
      end += 1;
    }
    const run = view.tree.slice(i, end);
    if (run.length >= FOLD_FROM) {
      const last = run[run.length - 1] as TreePart;
      nodes.push({
        key: `${first.installationId}+`,
        depth: Math.max(1, first.depth),
        label: `${slotsWords(first, last)} (${run.length})`,
        bar: bar(first.unitId),
        folded: run.map((part) => ({ ...node(part), depth: Math.max(1, part.depth) + 1 })),
      });
    } else {
      nodes.push(...run.map(node));
    }
    i = end;
  }
  return nodes;
}
