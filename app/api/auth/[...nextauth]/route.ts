import NextAuth from "next-auth";
import { NextResponse, type NextRequest } from "next/server";
import { authOptions } from "@/lib/auth/queries";
import { env } from "@/lib/env";

type At = { params: Promise<{ nextauth: string[] }> };

const handler = (request: NextRequest, at: At): Promise<Response> =>
  NextAuth(request, at, authOptions()) as Promise<Response>;

/** What a GET may ask for. Nothing here changes anything. */
const READS = ["csrf", "session", "providers", "error", "verify-request"];

/**
 * The link's GET consumes nothing: mail scanners follow links. It leads to a page whose button
 * posts. Signing in by next-auth's own form is closed: codes are issued through our outbox.
 * Paths are compared whole: the library looks at the first two steps alone.
 */
export async function GET(request: NextRequest, at: At): Promise<Response> {
  const path = (await at.params).nextauth.join("/");
  if (path === "callback/email") {
    return NextResponse.redirect(`${env().MENDBAY_URL}/sign-in/confirm${request.nextUrl.search}`, 303);
  }
  return READS.includes(path) ? handler(request, at) : new NextResponse(null, { status: 404 });
}

export async function POST(request: NextRequest, at: At): Promise<Response> {
  const path = (await at.params).nextauth.join("/");
  if (path !== "callback/email") return new NextResponse(null, { status: 404 });
  // Another site could sign a visitor in as somebody else.
  if (request.headers.get("sec-fetch-site") === "cross-site") return new NextResponse(null, { status: 403 });
  return handler(request, at);
}
