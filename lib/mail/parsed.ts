import type { HeaderLine } from "./ids";

/** A mail taken apart: plain data, so that it may cross from the process that reads it. */
export type ParsedAttachment = {
  name: string;
  type: string;
  size: number;
  /** A picture shown inside the text; it is a file all the same, once. */
  inline: boolean;
  content: Uint8Array;
};

export type ParsedMail = {
  headers: HeaderLine[];
  from: { email: string; name: string }[];
  to: string[];
  subject: string;
  sentAt: Date | null;
  text: string;
  /** Sanitized. */
  html: string | null;
  attachments: ParsedAttachment[];
  contentType: string;
  reportType: string;
  calendar: boolean;
  /** The machine part of a delivery report, and the headers it returns. */
  report: string;
  returned: string;
  /** What was guessed or could not be done, in words for staff. */
  notes: string[];
  encrypted: boolean;
};

/** A mail read, or why it could not be; then with what its first headers say, when even that. */
export type ReadMail = { ok: true; mail: ParsedMail } | { ok: false; why: string; head: ParsedMail | null };

/** Where the header block ends. Bytes, not text: the charset is not known yet. */
export function headerEnd(raw: Buffer): number {
  for (let i = 0; i < raw.length - 1; i++) {
    if (raw[i] !== 10) continue;
    if (raw[i + 1] === 10) return i + 1;
    if (raw[i + 1] === 13 && raw[i + 2] === 10) return i + 1;
  }
  return raw.length;
}

function isUtf8(bytes: Uint8Array): boolean {
  try {
    new TextDecoder("utf-8", { fatal: true }).decode(bytes);
    return true;
  } catch {
    return false;
  }
}

// What windows-1252 has where Latin-1 has control characters (WHATWG Encoding, index windows-1252).
// The decoder of some runtimes takes the two for one, so it is written out.
const W1252 = "€\u0081‚ƒ„…†‡ˆ‰Š‹Œ\u008dŽ\u008f\u0090‘’“”•–—˜™š›œ\u009džŸ";
const windows1252 = (bytes: Uint8Array) =>
  Buffer.from(bytes)
    .toString("latin1")
    .replace(/[\u0080-\u009f]/g, (c) => W1252[c.charCodeAt(0) - 0x80]!);

function decodeAs(bytes: Uint8Array, charset: string): string | null {
  // By the same standard these names mean windows-1252.
  if (/^(?:windows-1252|cp1252|iso-8859-1|latin1)$/.test(charset)) return windows1252(bytes);
  try {
    return new TextDecoder(charset, { fatal: true }).decode(bytes);
  } catch {
    return null;
  }
}

/**
 * Raw 8-bit bytes without a declared charset: UTF-8 if they are that, else the charset declared
 * somewhere, else windows-1252 (real mail does so; RFC 2046 s. 4.1.2 would have them be ASCII).
 */
export function asUtf8(raw: Buffer): { bytes: Buffer; guessed: string | null } {
  if (isUtf8(raw)) return { bytes: raw, guessed: null };
  const end = headerEnd(raw);
  const head = raw.subarray(0, end);
  const declared = /charset\s*=\s*"?([\w.:-]+)/i.exec(raw.toString("latin1"))?.[1]?.toLowerCase();
  const named = declared && !["us-ascii", "ascii", "utf-8", "utf8"].includes(declared) ? declared : null;
  // A declared body charset is the parser's to read; only what no charset was declared for is ours.
  const headIsFine = isUtf8(head);
  const body = raw.subarray(end);
  const bodyIsOurs =
    !named && !isUtf8(body) && !/content-transfer-encoding:\s*binary/i.test(head.toString("latin1"));
  if (headIsFine && !bodyIsOurs) return { bytes: raw, guessed: null };
  const guess = (bytes: Uint8Array): [string, string] => {
    const byName = named ? decodeAs(bytes, named) : null;
    return byName !== null && named ? [byName, named] : [windows1252(bytes), "windows-1252"];
  };
  const [headText, headSet] = headIsFine ? [head.toString("utf8"), ""] : guess(head);
  const [bodyText, bodySet] = bodyIsOurs ? guess(body) : ["", ""];
  const newHead = bodyIsOurs ? headText.replace(/charset\s*=\s*"?us-ascii"?/i, "charset=utf-8") : headText;
  return {
    bytes: Buffer.concat([Buffer.from(newHead, "utf8"), bodyIsOurs ? Buffer.from(bodyText, "utf8") : body]),
    guessed: headSet || bodySet,
  };
}

const paramOf = (value: string, name: string) =>
  new RegExp(`${name}\\s*=\\s*"?([^";\\s]+)`, "i").exec(value)?.[1] ?? "";

export function contentTypeOf(headers: readonly HeaderLine[]): {
  type: string;
  reportType: string;
  boundary: string;
  protocol: string;
  smime: string;
} {
  const line = headers.find((h) => h.key === "content-type")?.line ?? "";
  const value = line.slice(line.indexOf(":") + 1).replace(/\r?\n\s*/g, " ");
  return {
    type: value.split(";")[0]!.trim().toLowerCase() || "text/plain",
    reportType: paramOf(value, "report-type").toLowerCase(),
    boundary: /boundary\s*=\s*"([^"]{1,70})"/i.exec(value)?.[1] ?? paramOf(value, "boundary"),
    protocol: paramOf(value, "protocol").toLowerCase(),
    smime: paramOf(value, "smime-type").toLowerCase(),
  };
}

/** The parts of a multipart by its boundary (RFC 2046 s. 5.1.1), first level only. */
export function partsOf(raw: string, boundary: string): { type: string; body: string }[] {
  if (boundary === "") return [];
  const chunks = `\n${raw.replace(/\r\n?/g, "\n")}`.split(`\n--${boundary}`).slice(1, 12);
  return chunks
    .filter((c) => !c.startsWith("--"))
    .map((c) => {
      const at = c.indexOf("\n\n");
      const head = at < 0 ? c : c.slice(0, at);
      return {
        type: /content-type:\s*([\w.+/-]+)/i.exec(head)?.[1]?.toLowerCase() ?? "text/plain",
        body: at < 0 ? "" : c.slice(at + 2),
      };
    });
}

/** Text that a screen and a database take: no NUL, no marks that turn letters round, one kind of line end. */
export function plainText(text: string): string {
  return text
    .replace(/^\uFEFF/, "")
    .replace(/\r\n?/g, "\n")
    .replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f\u007f\u202a-\u202e\u2066-\u2069]/g, "")
    .replace(/\n{4,}/g, "\n\n\n")
    .trimEnd();
}

const RESERVED = /^(?:con|prn|aux|nul|com\d|lpt\d)(?:\.|$)/i;

/** A file name is a hint, never a path (RFC 2183 s. 2.3). */
export function attachmentName(given: string | null | undefined, type: string, n: number): string {
  const flat = (given ?? "")
    .normalize("NFC")
    .replace(/[\u0000-\u001f\u007f\u200b-\u200f\u202a-\u202e\u2060-\u2069\ufeff]/g, "");
  const last = flat
    .split(/[\\/]/)
    .at(-1)!
    .replace(/[<>:"|?*]/g, "_")
    .replace(/^\.+/, "")
    .replace(/[. ]+$/, "");
  const safe = RESERVED.test(last) ? `_${last}` : last;
  if (safe === "") {
    if (type === "message/rfc822") return `forwarded-mail-${n}.eml`;
    if (type === "text/calendar") return `invitation-${n}.ics`;
    return `attachment-${n}`;
  }
  if (safe.length <= 120) return safe;
  const dot = safe.lastIndexOf(".");
  const end = dot > 0 && safe.length - dot <= 12 ? safe.slice(dot) : "";
  return safe.slice(0, 120 - end.length) + end;
}
