import type { EvidenceKind } from "./schema";

/** What kind of evidence a file is, by its declared type and, for logs, its ending. The check decides what it really is. */
export function kindOf(type: string, name: string): EvidenceKind {
  if (type.startsWith("image/")) return "photo";
  if (type.startsWith("video/") || type.startsWith("audio/")) return "video";
  if (type.startsWith("text/") || /\.(log|txt|json|csv)$/i.test(name)) return "log";
  return "document";
}
