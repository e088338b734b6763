import type { Refusal, RefusalCode } from "@/lib/base/result";

/** Exhaustive: a new code does not compile until it has its status here. */
function statusOf(code: RefusalCode): [status: number, title: string] {
  switch (code) {
    case "invalid":
      return [400, "The request does not parse"];
    case "unauthenticated":
      return [401, "Sign in first"];
    case "forbidden":
      return [403, "Not allowed"];
    case "not_found":
      return [404, "Not found"];
    case "conflict":
      return [409, "Somebody was first"];
    case "stale":
      return [412, "Changed since you read it"];
    case "version_missing":
      return [428, "The version is missing"];
    case "rule":
      return [422, "A rule refuses this"];
    case "too_large":
      return [413, "Too large"];
    case "unsupported":
      return [415, "Unsupported type"];
    case "too_many":
      return [429, "Too many requests"];
    case "unavailable":
      return [503, "Not available now"];
  }
}

/**
 * A refusal as RFC 9457 problem details. Facts of the refusal stand beside the members of the
 * standard; a fact cannot take a standard member's name.
 */
export function problem(refusal: Refusal, at: { origin: string; requestId: string }): Response {
  const [status, title] = statusOf(refusal.code);
  const headers = new Headers({ "content-type": "application/problem+json", "cache-control": "no-store" });
  headers.set("x-request-id", at.requestId);
  if (status === 401) headers.set("www-authenticate", "Bearer");
  const wait = refusal.details?.retryAfterSeconds;
  if ((status === 429 || status === 503) && typeof wait === "number")
    headers.set("retry-after", String(Math.max(1, Math.ceil(wait))));
  const body = {
    ...refusal.details,
    type: `${at.origin}/problems/${refusal.code}`,
    title,
    status,
    detail: refusal.message,
    instance: `urn:uuid:${at.requestId}`,
    code: refusal.code,
    ...(refusal.fields ? { errors: refusal.fields } : {}),
  };
  return new Response(JSON.stringify(body), { status, headers });
}

/** For a throw: a bug of ours, told without its words. */
export function crashed(at: { origin: string; requestId: string }): Response {
  const body = {
    type: "about:blank",
    title: "Internal Server Error",
    status: 500,
    detail: "Something went wrong here. It has been written down.",
    instance: `urn:uuid:${at.requestId}`,
  };
  const headers = { "content-type": "application/problem+json", "cache-control": "no-store" };
  return new Response(JSON.stringify(body), {
    status: 500,
    headers: { ...headers, "x-request-id": at.requestId },
  });
}

/** RFC 8288: the same list, its other settings kept, from the cursor on. */
export function nextLink(url: URL, cursor: string | null | undefined): string | undefined {
  if (!cursor) return undefined;
  const next = new URL(url);
  next.searchParams.set("cursor", cursor);
  return `<${next.pathname}${next.search}>; rel="next"`;
}

/** The version that `If-Match` names: `"7"` → 7. A list, a weak tag or `*` names none. */
export function versionIn(ifMatch: string | null): number | undefined {
  const found = /^"(\d{1,9})"$/.exec(ifMatch?.trim() ?? "");
  return found ? Number(found[1]) : undefined;
}
