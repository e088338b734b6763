import { NextResponse, type NextRequest } from "next/server";
import { countCodeTry, issueCode } from "@/lib/auth/commands";
import { safeNext, SignInCode } from "@/lib/auth/schema";
import { readCrockford } from "@/lib/base/checkchar";
import { parse } from "@/lib/base/parse";
import { jobCtx } from "@/lib/ctx";
import { env } from "@/lib/env";

/** On to the one place that consumes a token. 307 keeps the POST. */
function consume(email: string, code: string, next: string): Response {
  const query = new URLSearchParams({
    token: code,
    email,
    callbackUrl: `${env().MENDBAY_URL}${safeNext(next)}`,
  });
  return NextResponse.redirect(`${env().MENDBAY_URL}/api/auth/callback/email?${query}`, 307);
}

/** A typed code, or the demo's door: both end at the same token path as the mailed link. */
export async function POST(request: NextRequest): Promise<Response> {
  if (request.headers.get("sec-fetch-site") === "cross-site") return new NextResponse(null, { status: 403 });
  const form = await request.formData();
  const text = (name: string) => String(form.get(name) ?? "");
  const ctx = jobCtx("sign-in");
  if (form.has("demo")) {
    if (env().MENDBAY_DEMO !== "1") return new NextResponse(null, { status: 404 });
    const issued = await issueCode(ctx, text("email").toLowerCase(), { unlimited: true });
    if (!issued.ok || !issued.value) return NextResponse.redirect(`${env().MENDBAY_URL}/door`, 303);
    return consume(issued.value.email, issued.value.code, "/");
  }
  const input = parse(SignInCode, { email: text("email"), code: text("code"), next: text("next") });
  const back = (error: string) =>
    NextResponse.redirect(
      `${env().MENDBAY_URL}/sign-in/sent?${new URLSearchParams({ email: text("email"), next: safeNext(text("next")), error })}`,
      303,
    );
  if (!input.ok) return back("code");
  const counted = await countCodeTry(ctx, input.value.email);
  if (!counted.ok) return back("often");
  return consume(input.value.email, readCrockford(input.value.code), input.value.next);
}
