import type { UnitHit } from "@/lib/ledger/schema";

const WORDS: Record<UnitHit["whereabouts"], string> = {
  customer: "with the customer",
  transit: "on its way",
  dock: "at the dock",
  bench: "at the bench",
  stock: "in stock",
  set_aside: "set aside",
  supplier: "with the supplier",
  scrapped: "scrapped",
};

/** Where a unit is, with its bay when it is with us. */
export function placeWords(u: Pick<UnitHit, "whereabouts" | "place">): string {
  return u.place ? `${WORDS[u.whereabouts]}, ${u.place}` : WORDS[u.whereabouts];
}
