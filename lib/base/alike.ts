import { bareKey, characterWords, cleanScan, foldAlike, place, serialKey, serialLoose } from "./serial";
import { align, COST, WIDE } from "./align";
import { readings } from "./scan";

/** What serialLoose leaves of digits and capitals. */
const LOOSE = [..."0123456789ACEFHJKMNPRTUWXY"];
/** A serial of one item has twenty characters at most by GS1 (21); makers' own may be longer. */
const EDITED_MOST = 40;
const EDITED_LEAST = 5;
/** More than any scan of one label; the rest of a longer text says nothing about a serial. */
const TEXT_MOST = 200;
const KEYS_MOST = 8000;
const BASES_MOST = 12;
/** Readings in which an error is looked for, too; in the rest only what is exact. */
const READINGS_EDITED = 3;

function swappedOnce(key: string): string[] {
  const found: string[] = [];
  for (const [two, one] of WIDE)
    for (const [from, to] of [
      [two, one],
      [one, two],
    ])
      for (let at = key.indexOf(from!); at >= 0; at = key.indexOf(from!, at + 1))
        found.push(key.slice(0, at) + to + key.slice(at + from!.length));
  return found;
}

/** The key with every choice of W for VV and M for RN, fewest swaps first; of many, at least all at once. */
function wideVariants(key: string): string[] {
  const all = new Set([key]);
  for (const k of all) {
    if (all.size >= BASES_MOST - 2) break;
    for (const next of swappedOnce(k)) if (all.size < BASES_MOST - 2) all.add(next);
  }
  all.add(key.replaceAll("UU", "W").replaceAll("RN", "M"));
  all.add(key.replaceAll("W", "UU").replaceAll("M", "RN"));
  return [...all];
}

/** The other layout of a keyboard: Y and Z change places (Z is folded to 2), the dash is the sharp s. */
const otherLayout = (text: string): string =>
  bareKey(cleanScan(text).replace(/ß/g, "-")).replace(/[YZ]/g, (c) => (c === "Y" ? "Z" : "Y"));

/** A stored key lost "SN" or "SER" when they stood in front: what remains of a loose key that begins so. */
function withoutLabel(loose: string): string[] {
  return ["5N", "5ER", "5ER1A1", "5ER1A1N0", "5ER1A1NUM8ER"]
    .filter((label) => loose.startsWith(label))
    .map((label) => loose.slice(label.length))
    .filter((rest) => rest.length >= EDITED_LEAST);
}

/** Every key that one substitution, insertion, deletion or exchange of neighbors makes of this one. */
export function singleEdits(key: string): Set<string> {
  const found = new Set([key]);
  for (let at = 0; at <= key.length; at++) {
    const before = key.slice(0, at);
    const after = key.slice(at + 1);
    for (const c of LOOSE) found.add(before + c + key.slice(at));
    if (at === key.length) break;
    found.add(before + after);
    for (const c of LOOSE) found.add(before + c + after);
    if (after !== "") found.add(before + after[0] + key[at] + after.slice(1));
  }
  return found;
}

/**
 * Loose keys under which the serial meant may stand: any number of look-alikes, and one more error
 * anywhere. About 600 for eleven characters; bounded for any text. Empty where too little was given.
 */
export function alikeKeys(text: string): string[] {
  const query = text.slice(0, TEXT_MOST);
  const read = readings(query).map((r) => ({ ...r, loose: foldAlike(serialKey(r.serial)) }));
  const firm = read.filter((r) => r.firm && r.loose.length >= 4);
  if (firm.length === 0) return [];
  const bases = new Set<string>();
  for (const key of [
    serialLoose(query),
    ...firm.slice(0, READINGS_EDITED).map((r) => r.loose),
    foldAlike(bareKey(query)),
    ...(/[YZß]/i.test(query) ? [foldAlike(otherLayout(query))] : []),
  ])
    if (key.length >= 4) for (const base of wideVariants(key)) bases.add(base);
  const keys = new Set<string>([...bases, ...read.map((r) => r.loose).filter((k) => k.length >= 4)]);
  for (const base of bases) {
    if (base.length < EDITED_LEAST || base.length > EDITED_MOST) continue;
    for (const key of singleEdits(base)) {
      keys.add(key);
      for (const rest of withoutLabel(key)) keys.add(rest);
    }
    if (keys.size >= KEYS_MOST) break;
  }
  return [...keys].slice(0, KEYS_MOST);
}

type Compared = { text: string; bare: string; extra: number; exactOnly: boolean };

/** Readings worth comparing, each with what it costs to believe in it. */
function compared(query: string): Compared[] {
  const all = readings(query);
  const given = [cleanScan(query), query.slice(0, 80)].map((text) => ({ text, extra: 0, exactOnly: false }));
  const firm = all.filter((r) => r.firm).slice(0, READINGS_EDITED);
  const guesses = all.filter((r) => !r.firm);
  return [
    ...given,
    ...firm.map((r) => ({ text: r.serial, extra: COST.reading, exactOnly: false })),
    ...guesses.map((r) => ({ text: r.serial, extra: 2 * COST.reading, exactOnly: true })),
  ].map((c) => ({ ...c, bare: bareKey(c.text) }));
}

function nearest(ways: readonly Compared[], serial: string): { cost: number; text: string } {
  const known = bareKey(serial).slice(0, 80);
  const loose = foldAlike(known);
  let best = { cost: Infinity, text: ways[0]!.text };
  for (const { text, bare, extra, exactOnly } of ways) {
    if (extra >= best.cost || (exactOnly && foldAlike(bare) !== loose)) continue;
    const cost = extra + align(bare, known).cost;
    if (cost < best.cost) best = { cost, text };
  }
  return best;
}

/** How far a serial of the ledger is from what was given: 0 is the same, and less is likelier. */
export const alikeness = (query: string, serial: string): number => nearest(compared(query), serial).cost;

/** The nearest first; the same serial for the same question always, whatever the order they come in. */
export function rankAlike<T extends { serial: string }>(query: string, units: readonly T[]): T[] {
  const ways = compared(query);
  return units
    .map((unit) => ({ unit, cost: nearest(ways, unit.serial).cost }))
    .sort((a, b) => a.cost - b.cost || (a.unit.serial < b.unit.serial ? -1 : 1))
    .map((r) => r.unit);
}

/** Characters of a key with where each stands in the serial as printed. */
function cells(printed: string): { key: string; at: number[] } {
  const list = [...printed].flatMap((c, at) => [...bareKey(c)].map((k) => ({ k, at })));
  return { key: list.map((c) => c.k).join(""), at: list.map((c) => c.at) };
}

/** In words, for the ear too: what in a suggested serial differs from what was given. At most `limit`. */
export function alikeWords(query: string, serial: string, limit = 3): string[] {
  const printed = serial.normalize("NFKC").toUpperCase();
  const known = cells(printed);
  const { text } = nearest(compared(query), serial);
  const given = bareKey(text);
  const where = (j: number) => place(printed, known.at[j] ?? printed.length);
  const words = align(given, known.key)
    .steps()
    .flatMap(({ kind, given: taken, known: used, i, j }) => {
      const g = given.slice(i, i + taken);
      const k = known.key.slice(j, j + used);
      if (g === k) return [];
      if (kind === "swap") return [`${where(j)} and the next change places`];
      if (kind === "missing") return [`${where(j)}, ${characterWords(k)}, was left out`];
      if (kind === "extra")
        return [`one too many: ${characterWords(g)}, ${j === 0 ? "in front" : `following ${where(j - 1)}`}`];
      const [is, not] = [k, g].map((c) => (c.length === 2 ? c : characterWords(c)));
      return [`${where(j)} ${used === 2 ? "and the next are" : "is"} ${is}, not ${not}`];
    });
  const within = given !== bareKey(cleanScan(query)) && given !== bareKey(query) ? [`read as ${text}`] : [];
  const shown = [...within, ...words];
  return shown.length > limit ? [...shown.slice(0, limit), `${shown.length - limit} more`] : shown;
}
