/** Dashes of every kind, spaces of every kind, and marks that no eye sees. */
const NOISE = /[\s\u0000\u00A0\u00AD\u200B-\u200F\u2010-\u2015\u202A-\u202E\u2060\u2212\uFEFF\-_./*]/g;

/** What a scanner or a pasted label brings beside the serial itself. */
const LABELS = /^\s*(?:s\/?n|serial(?:\s*(?:no|number))?|ser)\s*[.:#=]?\s*/i;

/** A scan or a typed line as the person meant it: label words, Code 39 stars and line ends gone. */
export function cleanScan(text: string): string {
  return text
    .normalize("NFKC")
    .replace(/[\r\n\t\u001d]+/g, " ")
    .replace(LABELS, "")
    .replace(/^\*|\*$/g, "")
    .trim()
    .slice(0, 80);
}

/** Key by which a serial is found: upper case, without dashes and blanks. Never shown, never stored as the serial. */
export function serialKey(text: string): string {
  return cleanScan(text).toUpperCase().replace(NOISE, "");
}

/** The same key with nothing taken for a label: what stands on the paper, letter for letter. */
export function bareKey(text: string): string {
  return text
    .normalize("NFKC")
    .toUpperCase()
    .replace(/[\u0000-\u001f]/g, "")
    .replace(NOISE, "");
}

const ALIKE: Record<string, string> = {
  O: "0",
  Q: "0",
  D: "0",
  I: "1",
  L: "1",
  B: "8",
  S: "5",
  Z: "2",
  G: "6",
  V: "U",
};

/** A key in which characters that people mix up are one. */
export function foldAlike(key: string): string {
  return key.replace(/[OQDILBSZGV]/g, (c) => ALIKE[c] ?? c);
}

/** Looser key in which characters that people mix up are one. For suggestions only. */
export function serialLoose(text: string): string {
  return foldAlike(serialKey(text));
}

const ORDINALS = [
  "first",
  "second",
  "third",
  "fourth",
  "fifth",
  "sixth",
  "seventh",
  "eighth",
  "ninth",
  "tenth",
];
const ordinal = (n: number) =>
  ORDINALS[n - 1] ??
  `${n}${n % 100 > 10 && n % 100 < 14 ? "th" : (["th", "st", "nd", "rd"][n % 10] ?? "th")}`;

// Spelled so that two people on a noisy floor mean one character. Common practice, no source.
const AS_IN: Record<string, string> = {
  A: "apple",
  B: "box",
  C: "cart",
  D: "door",
  E: "east",
  F: "fan",
  G: "gate",
  H: "hand",
  I: "iron",
  J: "jar",
  K: "key",
  L: "lamp",
  M: "moon",
  N: "north",
  O: "oak",
  P: "pin",
  Q: "quay",
  R: "rail",
  S: "south",
  T: "tin",
  U: "unit",
  V: "van",
  W: "west",
  X: "x-ray",
  Y: "yard",
  Z: "zip",
};
const DIGITS = ["zero", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine"];

/** "the digit zero", "the letter Q, as in quay". */
export function characterWords(c: string | null): string {
  if (c === null) return "nothing";
  if (/\d/.test(c)) return `the digit ${DIGITS[Number(c)]}`;
  const upper = c.toUpperCase();
  if (AS_IN[upper]) return `the letter ${upper}, as in ${AS_IN[upper]}`;
  return c === "-" ? "a dash" : `the sign ${c}`;
}

export type Difference = {
  /** Index in the aligned pair. */
  at: number;
  scanned: string | null;
  expected: string | null;
  /** Where it is and what each shows, in words. */
  words: string;
};

/** "the fourth after the dash", "the second": where in a serial an index is, for the ear. */
export function place(text: string, at: number): string {
  const dash = text.lastIndexOf("-", at);
  return dash >= 0 && at > dash ? `the ${ordinal(at - dash)} after the dash` : `the ${ordinal(at + 1)}`;
}

/**
 * Characters in which two serials differ, compared place by place in upper case.
 * A longer one differs in its rest.
 */
export function differences(scanned: string, expected: string): Difference[] {
  const a = cleanScan(scanned).toUpperCase();
  const b = cleanScan(expected).toUpperCase();
  const found: Difference[] = [];
  for (let at = 0; at < Math.max(a.length, b.length); at++) {
    const s = a[at] ?? null;
    const e = b[at] ?? null;
    if (s === e) continue;
    found.push({
      at,
      scanned: s,
      expected: e,
      words: `${place(e === null ? a : b, at)} reads ${characterWords(s)}, and we expect ${characterWords(e)}`,
    });
  }
  return found;
}

/** Serials that a text may name: tokens with letters and digits, long enough to be no word. At most `limit`. */
export function serialCandidates(text: string, limit = 20): string[] {
  const found = new Set<string>();
  for (const m of text
    .slice(0, 64_000)
    .matchAll(/[A-Za-z0-9]{2,12}(?:[-\u2010-\u2015][A-Za-z0-9]{2,12}){1,3}|[A-Za-z0-9]{8,24}/g)) {
    const token = m[0];
    if (/\d/.test(token) && /[A-Za-z]/.test(token)) found.add(token);
    if (found.size >= limit) break;
  }
  return [...found];
}

/** A serial out of a path: decoded once, and as it is where its percent signs mean nothing. */
export function serialInPath(text: string): string {
  try {
    return decodeURIComponent(text);
  } catch {
    return text;
  }
}
