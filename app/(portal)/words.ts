import { showDay } from "@/lib/base/show";
import type { CoverSummary } from "@/lib/coverage/queries";
import type { CoverView } from "@/lib/coverage/schema";

/** Cover in one sentence, for a list. */
export function sentence(cover: CoverSummary | undefined): string {
  if (!cover || cover.lastOn === null) return "A person is checking your cover.";
  if (cover.state === "doa") return `In its first days, until ${showDay(cover.doaUntil!)}.`;
  if (cover.state === "ended") return `Cover ended on ${showDay(cover.lastOn)}.`;
  return `Covered until ${showDay(cover.lastOn)}.`;
}

/** What stands beside it: parts whose cover runs longer or has ended. */
export function besides(view: CoverView): string[] {
  const own = view.rows.find((r) => r.unitId === view.unit.id && r.kind === "cover");
  const groups = new Map<string, Set<string>>();
  for (const r of view.rows) {
    if (r.kind !== "cover" || r.unitId === view.unit.id) continue;
    if (own && r.lastOn === own.lastOn) continue;
    const key = r.state === "ended" ? "cover ended" : `until ${showDay(r.lastOn)}`;
    (groups.get(key) ?? groups.set(key, new Set()).get(key)!).add(r.clauseTitle);
  }
  return [...groups].map(([when, what]) => {
    const list = [...what].join(" and ");
    return when === "cover ended" ? `${list}: cover ended.` : `${list} ${when}.`;
  });
}
