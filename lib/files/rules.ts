import { refuse, ok, type Result } from "../base/result";

export const MAX_FILE_BYTES = 25_000_000;
export const MAX_PIXELS = 40_000_000;

const IMAGES = ["image/jpeg", "image/png", "image/webp", "image/avif", "image/tiff", "image/gif"];
const VIDEOS = [
  "video/mp4",
  "video/quicktime",
  "video/webm",
  "audio/mpeg",
  "audio/wav",
  "audio/vnd.wave",
  "audio/x-m4a",
  "audio/mp4",
  "audio/ogg",
];

export type Sniffed = { mime: string } | undefined;
export type FileVerdict = { family: "image" | "video" | "text" | "pdf"; type: string };

/**
 * What a file really is, by its bytes; the name and the declared type count for nothing.
 * Unknown bytes may only become text, and only when they are text.
 */
export function judgeFile(f: {
  declaredSize: number;
  size: number;
  sniffed: Sniffed;
  isText: boolean;
  head: string;
}): Result<FileVerdict> {
  if (f.size === 0) return refuse("invalid", "The file is empty. Choose it again.");
  if (f.size > MAX_FILE_BYTES) return refuse("too_large", "The file is over 25 MB. Send a smaller one.");
  if (f.size !== f.declaredSize) return refuse("invalid", "Not all of the file arrived. Send it again.");
  const mime = f.sniffed?.mime;
  if (mime === "image/heic" || mime === "image/heif") {
    return refuse(
      "unsupported",
      "We cannot open HEIC pictures. Set the camera to the most compatible format, or send a JPEG or a screenshot of it.",
    );
  }
  if (mime && IMAGES.includes(mime)) return ok<FileVerdict>({ family: "image", type: mime });
  if (mime && VIDEOS.includes(mime)) return ok<FileVerdict>({ family: "video", type: mime });
  if (mime === "application/pdf") return ok<FileVerdict>({ family: "pdf", type: mime });
  if (mime)
    return refuse(
      "unsupported",
      "We take photos, video, sound, PDF and plain text logs. This is something else; unpack an archive and send what is in it.",
    );
  if (!f.isText)
    return refuse(
      "unsupported",
      "This is neither a picture nor plain text. Send a JPEG or PNG photo, a video, or the log as text.",
    );
  if (isMarkup(f.head)) {
    return refuse(
      "unsupported",
      "Web pages and drawings are not opened here. Send a photo, or the log as plain text.",
    );
  }
  return ok<FileVerdict>({ family: "text", type: "text/plain" });
}

/** A web page or a drawing, also behind comments and processing instructions that hide its first tag. */
function isMarkup(head: string): boolean {
  const hidden = /^(?:[\s\ufeff]|<!--[\s\S]*?(?:-->|$)|<\?[\s\S]*?(?:\?>|$))+/.exec(head)?.[0] ?? "";
  const rest = head.slice(hidden.length);
  return (
    /^<(?:!doctype|html|svg|script|head|body|iframe)\b/i.test(rest) || (rest === "" && hidden.includes("<"))
  );
}

/** A name to show and to offer for saving: no path, no marks that turn text around, no trailing dots. */
export function safeName(name: string): string {
  const cleaned = name
    .normalize("NFC")
    .replace(/[\u0000-\u001f\u007f\u200b-\u200f\u202a-\u202e\u2060-\u2069\ufeff]/g, "")
    .replace(/^.*[\\/]/, "")
    .replace(/[<>:"|?*]/g, "_")
    .replace(/[. ]+$/g, "")
    .trim();
  const short = cleaned.length > 120 ? `${cleaned.slice(0, 100)}…${cleaned.slice(-16)}` : cleaned;
  if (short === "" || /^(con|prn|aux|nul|com\d|lpt\d)(\.|$)/i.test(short)) return `file ${short}`.trim();
  return short;
}
