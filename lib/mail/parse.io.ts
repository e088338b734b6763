import { simpleParser, type AddressObject, type ParsedMail as Parsed } from "mailparser";
import sanitizeHtml from "sanitize-html";
import type { HeaderLine } from "./ids";
import { asUtf8, attachmentName, contentTypeOf, partsOf, plainText, type ParsedMail } from "./parsed";

/** Parts that say something about the mail and are no file of the customer's. */
const NO_FILES = [
  "application/pkcs7-signature",
  "application/x-pkcs7-signature",
  "application/pgp-signature",
  "application/applefile",
  "message/delivery-status",
  "text/rfc822-headers",
];
const MAX_TEXT = 200_000;
const MAX_FILES = 40;

/**
 * Mail markup, made harmless: no style sheets, scripts, forms or frames, nothing loaded from
 * outside. Pictures that come with the mail are among its files; here they leave their words.
 */
export function cleanHtml(html: string): string {
  return sanitizeHtml(html, {
    allowedTags: [
      ...[
        "p",
        "br",
        "div",
        "span",
        "b",
        "strong",
        "i",
        "em",
        "u",
        "s",
        "sub",
        "sup",
        "small",
        "hr",
        "pre",
        "code",
      ],
      ...["h1", "h2", "h3", "h4", "h5", "h6", "ul", "ol", "li", "dl", "dt", "dd", "blockquote", "a"],
      ...["table", "thead", "tbody", "tfoot", "tr", "td", "th", "caption"],
    ],
    allowedAttributes: {
      a: ["href", "title", "rel", "target"],
      td: ["colspan", "rowspan"],
      th: ["colspan", "rowspan"],
    },
    allowedSchemes: ["http", "https", "mailto"],
    allowProtocolRelative: false,
    nestingLimit: 100,
    transformTags: {
      a: (tagName, attribs) => ({
        tagName,
        attribs: { ...attribs, rel: "noopener noreferrer", target: "_blank" },
      }),
      img: (_tag, attribs) => ({
        tagName: "span",
        attribs: {},
        text: attribs.alt ? `[picture: ${attribs.alt}]` : "[picture]",
      }),
    },
  }).slice(0, MAX_TEXT);
}

const addresses = (field: AddressObject | AddressObject[] | undefined) =>
  [field ?? []]
    .flat()
    .flatMap((f) => f.value)
    .flatMap((a) => (a.group ? a.group : [a]))
    .filter((a) => a.address)
    .map((a) => ({
      email: addressKey(a.address!),
      name: plainText(a.name ?? "")
        .replace(/\s+/g, " ")
        .trim()
        .slice(0, 200),
    }));

/** One form of an address for comparing: NFC, lower case; an international domain in its ASCII form. */
export function addressKey(address: string): string {
  const trimmed = plainText(address).normalize("NFC").trim().toLowerCase().slice(0, 320);
  const at = trimmed.lastIndexOf("@");
  if (at < 1) return trimmed;
  const domain = trimmed.slice(at + 1);
  try {
    return `${trimmed.slice(0, at)}@${new URL(`http://${domain}`).hostname}`;
  } catch {
    return trimmed;
  }
}

/** Reads a raw mail. Runs in a process of its own (parser.io.ts): a bomb ends that one alone. */
export async function parseMail(raw: Buffer): Promise<ParsedMail> {
  const { bytes, guessed } = asUtf8(raw);
  const notes = guessed ? [`No charset was declared; read as ${guessed}.`] : [];
  const mail: Parsed = await simpleParser(bytes, {
    skipTextToHtml: true,
    skipImageLinks: true,
    maxHtmlLengthToParse: 2_000_000,
  });
  const headers: HeaderLine[] = mail.headerLines.map((h) => ({
    key: h.key,
    line: h.line.replace(/\u0000/g, ""),
  }));
  const type = contentTypeOf(headers);
  const report = type.type === "multipart/report" ? partsOf(bytes.toString("latin1"), type.boundary) : [];
  const partOf = (...types: string[]) =>
    report.find((p) => types.includes(p.type))?.body.slice(0, 64_000) ?? "";

  const encrypted =
    (type.type === "multipart/encrypted" && type.protocol !== "") ||
    (/^application\/(?:x-)?pkcs7-mime$/.test(type.type) && type.smime !== "signed-data");
  const html = typeof mail.html === "string" && mail.html.trim() !== "" ? cleanHtml(mail.html) : null;
  let text = plainText(mail.text ?? "");
  if (text.trim() === "" && html) {
    text = plainText(
      sanitizeHtml(html.replace(/<(?:br|\/p|\/div|\/tr|\/li)[^>]*>/gi, "\n$&"), { allowedTags: [] }),
    );
    if (text.trim() !== "") notes.push("The text was taken from its markup.");
  }
  // The parser appends the machine part of a report to the text; it is kept apart.
  if (report.length > 0) text = plainText(report[0]?.body ?? text);
  if (encrypted) text = "This mail is encrypted. It is kept, and cannot be read here.";
  if (text.length > MAX_TEXT) notes.push("The text is cut here; the whole is kept.");
  if (/multipart\/signed|pkcs7-mime/.test(type.type) && !encrypted)
    notes.push("It is signed; the signature was not checked.");

  const files = mail.attachments.filter((a) => !NO_FILES.includes(a.contentType) && a.content.length > 0);
  if (files.length > MAX_FILES) notes.push(`${files.length - MAX_FILES} more files are in the raw mail.`);
  if (files.some((a) => a.contentType === "application/ms-tnef"))
    notes.push("winmail.dat cannot be opened here; it is kept.");

  return {
    headers,
    from: addresses(mail.from),
    to: [...addresses(mail.to), ...addresses(mail.cc)].map((a) => a.email).slice(0, 100),
    subject: plainText(mail.subject ?? "")
      .replace(/\s+/g, " ")
      .trim()
      .slice(0, 500),
    sentAt: mail.date ?? null,
    text: text.slice(0, MAX_TEXT),
    html: encrypted ? null : html,
    attachments: (encrypted ? [] : files).slice(0, MAX_FILES).map((a, i) => ({
      name: attachmentName(a.filename, a.contentType, i + 1),
      type: plainText(a.contentType).slice(0, 120),
      size: a.content.length,
      inline: a.related === true,
      content: new Uint8Array(a.content),
    })),
    contentType: type.type,
    reportType: type.reportType,
    calendar:
      mail.attachments.some((a) => a.contentType === "text/calendar") || type.type === "text/calendar",
    report: partOf("message/delivery-status"),
    returned: partOf("message/rfc822", "text/rfc822-headers", "message/global-headers"),
    notes,
    encrypted,
  };
}
