import type { HeaderLine } from "./ids";
import type { ParsedMail } from "./parsed";

/** What a mail says of itself, before anything is looked up. Pure: the lookups are queries. */

/** Makes a person look first. Each in words that stand after "because". */
export function suspicionsOf(mail: {
  from: readonly { email: string }[];
  doubled: readonly string[];
  hops: number;
  ourAddress: boolean;
  ourMessageId: boolean;
}): string[] {
  const found: string[] = [];
  if (mail.from.length === 0) found.push("it names no sender");
  if (mail.from.length > 1) found.push(`it names ${mail.from.length} senders (RFC 5322 s. 3.6.2)`);
  if (mail.doubled.length > 0) found.push(`it has ${mail.doubled.join(" and ")} twice (RFC 5322 s. 3.6)`);
  if (mail.hops > 100) found.push("it has gone round in a circle (RFC 5321 s. 6.3)");
  if (mail.ourAddress) found.push("it comes in the name of our own address");
  if (mail.ourMessageId) found.push("it carries the message id of a mail of ours");
  return found;
}

/** A number that a subject names, to be shown to people: "ticket 1042", "(ticket 1042)", "#1042". */
export function numberInSubject(subject: string): number | null {
  const m = /(?:ticket\s{0,3}#?|#)(\d{3,9})\b/i.exec(subject);
  return m ? Number(m[1]) : null;
}

/** One line for the record: the first that is the sender's own. */
export function recordLine(text: string, folds: readonly [number, number][], subject: string): string {
  const lines = text.split("\n");
  const own = lines.find((l, i) => l.trim() !== "" && !folds.some(([from, to]) => i >= from && i < to));
  const line = (own ?? subject).replace(/\s+/g, " ").trim() || "No text";
  return line.length > 90 ? `${line.slice(0, 88)}…` : line;
}

/** The text without what it repeats: where serials are looked for and the fault's words are. */
export function ownText(text: string, folds: readonly [number, number][]): string {
  return text
    .split("\n")
    .filter((_, i) => !folds.some(([from, to]) => i >= from && i < to))
    .join("\n")
    .trim();
}

/** What makes two arrivals the same mail, beside their message id. Hops and routes do not count. */
export function contentKey(mail: ParsedMail): string {
  return [
    mail.from.map((f) => f.email).join(","),
    mail.subject,
    mail.text,
    ...mail.attachments.map((a) => `${a.name}:${a.size}`),
  ].join("\n");
}

export const replyToOf = (headers: readonly HeaderLine[]): string | null =>
  /<?([^<>\s,;:]+@[^<>\s,;]+)>?\s*$/
    .exec(headers.find((h) => h.key === "reply-to")?.line ?? "")?.[1]
    ?.toLowerCase() ?? null;
