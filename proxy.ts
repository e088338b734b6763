import { NextResponse, type NextRequest } from "next/server";
import { contentPolicy, methodsOf } from "./app/_edge/headers";

/**
 * Sets headers and refuses odd methods; it authorizes nothing. Every page, action and route asks
 * for itself who may: taking this file away opens no door.
 */
export function proxy(request: NextRequest): NextResponse {
  const allowed = methodsOf(request.nextUrl.pathname);
  if (!allowed.includes(request.method))
    return new NextResponse(null, { status: 405, headers: { allow: allowed.join(", ") } });

  const nonce = Buffer.from(crypto.getRandomValues(new Uint8Array(18))).toString("base64");
  const policy = contentPolicy({
    nonce,
    uploadUrl: process.env.UPLOADTHING_INGEST_URL,
    development: process.env.NODE_ENV === "development",
  });
  const headers = new Headers(request.headers);
  // Written anew on every request: what the browser sends under these names counts for nothing.
  headers.set("x-nonce", nonce);
  headers.set("content-security-policy", policy);
  headers.set("x-request-id", crypto.randomUUID());
  headers.set("x-mendbay-path", request.nextUrl.pathname + request.nextUrl.search);
  const response = NextResponse.next({ request: { headers } });
  response.headers.set("content-security-policy", policy);
  return response;
}

export const config = {
  // Uploads are left out: a proxied body is held in memory. Files of the build need no policy.
  matcher: ["/((?!api/uploadthing|_next/static|_next/image|favicon.ico).*)"],
};
