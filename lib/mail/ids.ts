/**
 * Message ids and reference headers, read from raw header lines ourselves: libraries take the
 * first of two, keep junk and join two ids into one (RFC 5322 s. 3.6.4).
 */
const ID = /<([^<>\s@]+@[^<>\s@]+)>/g;

/** Valid ids of a header value, in order, with brackets, without repeats. */
export function idsIn(value: string): string[] {
  const found = [...value.matchAll(ID)].map((m) => `<${m[1]}>`);
  // A header line has 998 octets (RFC 5322 s. 2.1.1); what is longer is no id, and fits no index.
  return [...new Set(found.filter((id) => id.length <= 900))];
}

export type HeaderLine = { key: string; line: string };
const valueOf = (line: string) =>
  line
    .slice(line.indexOf(":") + 1)
    .replace(/\r?\n/g, " ")
    .trim();
const valuesOf = (lines: readonly HeaderLine[], key: string) =>
  lines.filter((l) => l.key === key).map((l) => valueOf(l.line));

export type ReferenceHeaders = {
  messageId: string | null;
  inReplyTo: string[];
  references: string[];
  doubled: string[];
};

/** Headers that may stand once at most. Doubled: somebody plays tricks, so a person looks. */
const ONCE = [
  "from",
  "subject",
  "message-id",
  "in-reply-to",
  "references",
  "date",
  "sender",
  "reply-to",
  "to",
];

export function referenceHeaders(lines: readonly HeaderLine[]): ReferenceHeaders {
  return {
    messageId: idsIn(valuesOf(lines, "message-id")[0] ?? "")[0] ?? null,
    inReplyTo: idsIn(valuesOf(lines, "in-reply-to").join(" ")),
    references: idsIn(valuesOf(lines, "references").join(" ")),
    doubled: ONCE.filter((k) => valuesOf(lines, k).length > 1),
  };
}

/**
 * References of a reply (RFC 5322 s. 3.6.4): the parent's references and its id; without references
 * the parent's In-Reply-To when it has exactly one id. Kept under 900 characters: the oldest go first,
 * but the root stays.
 */
export function replyReferences(parent: {
  messageId: string | null;
  references: string[];
  inReplyTo: string[];
}): string[] {
  if (!parent.messageId) return [];
  const before =
    parent.references.length > 0 ? parent.references : parent.inReplyTo.length === 1 ? parent.inReplyTo : [];
  const chain = [...new Set([...before, parent.messageId])];
  while (chain.length > 2 && chain.join(" ").length > 900) chain.splice(1, 1);
  return chain;
}

/** Base subject (RFC 5256 s. 2.1): for hints only, no mail is ever filed by it. */
export function baseSubject(subject: string): string {
  let s = subject.replace(/\s+/g, " ").trim();
  const blob = String.raw`\[[^[\]]*\]`;
  const leader = new RegExp(`^(?:${blob} ?)*(?:re|fwd?) ?(?:${blob} ?)?: ?`, "i");
  const prefix = new RegExp(`^${blob} ?`);
  for (;;) {
    let before: string;
    s = s.replace(/(?: ?\(fwd\))+ ?$/i, "").trim();
    do {
      before = s;
      s = s.replace(leader, "").trim();
      const cut = s.replace(prefix, "");
      if (cut.trim() !== "") s = cut.trim();
    } while (s !== before);
    const wrapped = /^\[fwd: ?(.*)\]$/i.exec(s);
    if (!wrapped) return s;
    s = wrapped[1]!.trim();
  }
}
