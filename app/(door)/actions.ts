"use server";
import { cookies } from "next/headers";
import { redirect } from "next/navigation";
import { action } from "@/app/_edge/action";
import { currentCtx } from "@/app/_edge/ctx";
import { issueCode, keepTheme, signOut } from "@/lib/auth/commands";
import { CODE_MINUTES, safeNext, showCode, SignInAsk } from "@/lib/auth/schema";
import { parse } from "@/lib/base/parse";
import { ok } from "@/lib/base/result";
import { jobCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { enqueueMail } from "@/lib/mail/commands";

/** Asks for a link. Known or not, the answer is the same. */
export const askForLink = action(
  async (_ctx, raw) => {
    const input = parse(SignInAsk, raw);
    if (!input.ok) return input;
    const { email, next } = input.value;
    const ctx = jobCtx("sign-in");
    const issued = await issueCode(ctx, email);
    if (!issued.ok) return issued;
    if (issued.value) {
      const { code } = issued.value;
      const query = new URLSearchParams({ token: code, email, callbackUrl: safeNext(next) });
      const sent = await enqueueMail(ctx, {
        to: email,
        template: "sign_in",
        props: {
          link: `${env().MENDBAY_URL}/sign-in/confirm?${query}`,
          code: showCode(code),
          minutes: CODE_MINUTES,
        },
        automatic: true,
      });
      if (!sent.ok) return sent;
    }
    return ok({ email, next: safeNext(next) });
  },
  ({ email, next }) => `/sign-in/sent?${new URLSearchParams({ email, next })}`,
);

const SESSION_COOKIES = ["__Secure-next-auth.session-token", "next-auth.session-token"];

export async function leave(): Promise<void> {
  const jar = await cookies();
  const ctx = await currentCtx();
  for (const name of SESSION_COOKIES) {
    const token = jar.get(name)?.value;
    if (!token) continue;
    await signOut(ctx, token);
    jar.delete(name);
  }
  redirect("/sign-in");
}

export async function chooseTheme(form: FormData): Promise<void> {
  const theme = form.get("theme");
  if (theme !== "light" && theme !== "dark" && theme !== "system") return;
  await keepTheme(await currentCtx(), theme);
  (await cookies()).set("theme", theme, { maxAge: 365 * 86_400, sameSite: "lax", path: "/" });
  const back = form.get("back");
  redirect(typeof back === "string" ? safeNext(back) : "/");
}
