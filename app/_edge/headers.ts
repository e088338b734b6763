/** Pages and forms, or the API. Anything else, TRACE among it, is answered 405. */
export function methodsOf(path: string): string[] {
  return path.startsWith("/api/")
    ? ["GET", "HEAD", "POST", "PUT", "PATCH", "DELETE", "OPTIONS"]
    : ["GET", "HEAD", "POST"];
}

/**
 * The content security policy of a page. Style attributes are allowed because a measured length
 * (a bar, a virtual list) is data; style elements and scripts need the nonce.
 */
export function contentPolicy(at: { nonce: string; uploadUrl?: string; development: boolean }): string {
  const upload = originOf(at.uploadUrl) ?? "https://*.ingest.uploadthing.com";
  const rules = {
    "default-src": "'self'",
    "script-src": `'self' 'nonce-${at.nonce}' 'strict-dynamic'${at.development ? " 'unsafe-eval'" : ""}`,
    "style-src": "'self'",
    // The development server puts its styles in by script, without a nonce.
    "style-src-elem": at.development ? "'self' 'unsafe-inline'" : `'self' 'nonce-${at.nonce}'`,
    "style-src-attr": "'unsafe-inline'",
    "img-src": "'self' data: blob:",
    "font-src": "'self'",
    "media-src": "'self' blob:",
    "connect-src": `'self' ${upload}${at.development ? " ws:" : ""}`,
    "frame-src": "'self'",
    "worker-src": "'self' blob:",
    "object-src": "'none'",
    "base-uri": "'none'",
    "form-action": "'self'",
    "frame-ancestors": "'none'",
  };
  return Object.entries(rules)
    .map(([name, value]) => `${name} ${value}`)
    .join("; ");
}

function originOf(url: string | undefined): string | undefined {
  try {
    return url ? new URL(url).origin : undefined;
  } catch {
    return undefined;
  }
}
