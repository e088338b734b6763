import { createHmac, timingSafeEqual } from "node:crypto";

/** HMAC-SHA-256 over the text, in the form the upload protocol carries it. */
export function sign(text: string, apiKey: string): string {
  return `hmac-sha256=${createHmac("sha256", apiKey).update(text, "utf8").digest("hex")}`;
}

function same(a: string, b: string): boolean {
  const x = Buffer.from(a);
  const y = Buffer.from(b);
  return x.length === y.length && timingSafeEqual(x, y);
}

export type Signed = { ok: true; query: URLSearchParams } | { ok: false; status: 401 | 403; words: string };

/**
 * Checks a signed URL. What was signed is the absolute URL before `&signature=`, byte for byte: it
 * is cut from the raw target and never rebuilt, since values are encoded twice.
 */
export function checkSigned(base: string, rawTarget: string, apiKey: string, now: number): Signed {
  const cut = /[?&]signature=/.exec(rawTarget);
  if (!cut) return { ok: false, status: 401, words: "not signed" };
  const signature = decodeURIComponent(rawTarget.slice(cut.index + cut[0].length));
  const text = base + rawTarget.slice(0, cut.index);
  if (!same(signature, sign(text, apiKey)))
    return { ok: false, status: 403, words: "signature does not fit" };
  const query = new URL(text).searchParams;
  const expires = Number(query.get("expires"));
  if (!Number.isFinite(expires) || expires <= now) return { ok: false, status: 403, words: "expired" };
  return { ok: true, query };
}

/** Values of a presigned upload URL are encoded once more inside the query. */
export function twice(query: URLSearchParams, name: string): string | undefined {
  const once = query.get(name);
  if (once === null) return undefined;
  try {
    return decodeURIComponent(once);
  } catch {
    return once;
  }
}
