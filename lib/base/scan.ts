import { bareKey, cleanScan, serialKey } from "./serial";

/** Beyond this no label is that of one unit, and reading it in every way would only cost. */
const SCAN_MOST = 200;
const READINGS_MOST = 80;
/** The shortest piece of two scans run together that is taken for a serial. */
const PIECE_LEAST = 6;

export type Reading = {
  serial: string;
  /** Said by the label's own marks or as it stands; otherwise a guess that is only ever suggested. */
  firm: boolean;
};

/**
 * Characters after an application identifier whose length is given beforehand, and so without a
 * separator behind it; the length of the identifier by its first two digits.
 * Source: GS1 General Specifications, 7.8 (predefined lengths; identifier lengths).
 */
const FIXED: [RegExp, number][] = [
  [/^00/, 18],
  [/^0[12]/, 14],
  [/^1[1-9]/, 6],
  [/^20/, 2],
  [/^3[1-6]/, 6],
  [/^41/, 13],
];
const KEY_LENGTH: [RegExp, number][] = [
  [/^(?:0[012]|1[0-35-7]|2[0-2]|3[07]|9\d)/, 2],
  [/^(?:2[3-5]|4[0-2]|71)/, 3],
  [/^(?:3[1-69]|43|7[02]|8[0-2])/, 4],
];

type Element = { ai: string; value: string; last: boolean };

/** Elements of an element string from its start; null where it stops being one. */
function elements(text: string): Element[] | null {
  const found: Element[] = [];
  let rest = text.replace(/^[\u001d\s]+/, "");
  while (rest !== "") {
    const length = KEY_LENGTH.find(([key]) => key.test(rest))?.[1];
    const ai = rest.slice(0, length);
    if (!length || !/^\d+$/.test(ai) || ai.length < length) return null;
    rest = rest.slice(length);
    const fixed = FIXED.find(([key]) => key.test(ai))?.[1];
    // FNC1 comes as ASCII 29; where a field of a form has made a blank of it, a blank. No serial of GS1 has one.
    const value = fixed ? rest.slice(0, fixed) : (/^[^\u001d\s]*/.exec(rest)?.[0] ?? "");
    if (value === "" || (fixed && !(value.length === fixed && /^\d+$/.test(value)))) return null;
    rest = rest.slice(value.length);
    found.push({ ai, value, last: rest === "" });
    rest = rest.replace(/^[\u001d\s]+/, "");
  }
  return found.length > 0 ? found : null;
}

/** Serials of a GS1 element string, (21) in brackets or bare; further ones where the separator was lost. */
function elementSerials(text: string, marked: boolean): Reading[] {
  const bracketed = [...text.matchAll(/\(21\)\s*([^(\u001d\s]+)/g)].map((m) => m[1]!);
  if (bracketed.length > 0) return bracketed.map((serial) => ({ serial, firm: true }));
  const list = marked || /^[\u001d\s]*01\d{14}/.test(text) ? elements(text) : null;
  return (list ?? [])
    .filter((e) => e.ai === "21")
    .flatMap(({ value, last }) => {
      const whole = { serial: value, firm: true };
      if (!last) return [whole];
      // Keyboard scanners drop ASCII 29 and run the next element into the serial. Common practice, no source.
      const cuts = Array.from({ length: Math.max(0, value.length - 6) }, (_, i) => value.slice(0, i + 4));
      const cut = cuts
        .filter((c) => elements(value.slice(c.length)) !== null)
        .map((serial) => ({ serial, firm: true }));
      // Application identifier 21 holds twenty characters at most: a longer one cannot be the whole.
      return value.length > 20 ? cut : [whole, ...cut];
    });
}

/**
 * A data identifier (ANSI MH10.8.2): up to three digits and a letter; S for a serial, P for a part number, T for
 * a trace number. The letters on labels of parts are common practice, no source.
 */
const IDENTIFIER = /^(?:\d{0,3}[SPT]|\(\d{0,3}[SPT]\))[\s:]*(?=[A-Z0-9])/i;

function withoutIdentifier(text: string): string[] {
  const bare = text.replace(IDENTIFIER, "");
  return bare === text || bare.length < 4 ? [] : [bare];
}

/** Several data identifiers in one symbol (ISO/IEC 15434, format 06): the one with S is the serial. */
function envelopeSerials(text: string): Reading[] {
  if (!/^\s*\[\)>/.test(text)) return [];
  const fields = text.split(/[\s\u001c-\u001e\u0004]+/).slice(1);
  return fields
    .filter((f) => /^\d{0,3}S/i.test(f))
    .flatMap((f) => [...withoutIdentifier(f), f].map((serial) => ({ serial, firm: true })));
}

/** Two scans run together: the same twice, parted by a blank or line end, or cut anywhere, likely places first. */
function glued(text: string): string[] {
  const pieces = text.split(/[\s\u0000-\u001f]+/).filter((p) => bareKey(p).length >= PIECE_LEAST);
  const key = serialKey(text);
  const half = key.length / 2;
  const twice = half >= 4 && key.slice(0, half) === key.slice(half) ? [key.slice(0, half)] : [];
  const cuts = Array.from(
    { length: Math.max(0, key.length - 2 * PIECE_LEAST + 1) },
    (_, i) => i + PIECE_LEAST,
  )
    .filter(() => key.length <= 48)
    .sort((a, b) => Math.abs(a - half) - Math.abs(b - half));
  return [
    ...twice,
    ...(pieces.length > 1 ? pieces.flatMap((p) => [p, ...withoutIdentifier(p)]) : []),
    ...cuts.flatMap((at) => [key.slice(0, at), key.slice(at)]),
  ];
}

/** 12E45 opened in a spreadsheet is saved as 1.2E+46; zeros in front of a number are gone. Common practice, no source. */
function spreadsheet(text: string): string[] {
  const number = /^(\d)(?:[.,](\d{1,14}))?E\+?(\d{1,3})$/i.exec(text);
  if (number) {
    const digits = (number[1]! + (number[2] ?? "")).replace(/0+$/, "") || "0";
    const power = Number(number[3]) - digits.length + 1;
    return power >= 0 ? [`${digits}E${power}`, `${digits}E${String(power).padStart(2, "0")}`] : [];
  }
  if (!/^[1-9]\d{3,14}$/.test(text)) return [];
  return Array.from({ length: 6 }, (_, i) => "0".repeat(i + 1) + text);
}

/** Every way to read a scan or a typed line as one serial, the likeliest first; the keys of no two are the same. */
export function readings(text: string): Reading[] {
  const raw = text.normalize("NFKC").slice(0, SCAN_MOST);
  // ISO/IEC 15424: a scanner may say first which symbology it read; no serial begins with that bracket.
  const plain = raw.replace(/^\s*\](?=[A-Za-z]\d)../, "").replace(/^\s+/, "");
  const marked = /^\s*\](?:C1|d2|Q3|e0|J1)/.test(raw);
  const given = cleanScan(plain);
  const all: Reading[] = [
    ...envelopeSerials(plain),
    ...elementSerials(plain, marked),
    { serial: given, firm: true },
    ...withoutIdentifier(given).map((serial) => ({ serial, firm: true })),
    ...spreadsheet(given).map((serial) => ({ serial, firm: false })),
    ...glued(plain).map((serial) => ({ serial, firm: false })),
  ];
  const seen = new Set<string>([""]);
  const kept = all.filter(({ serial }) => {
    const key = serialKey(serial);
    return seen.has(key) ? false : Boolean(seen.add(key));
  });
  return kept.slice(0, READINGS_MOST);
}

/** The same without the reasons. Where the ledger knows more than one, a person chooses. */
export const serialReadings = (text: string): string[] => readings(text).map((r) => r.serial);
