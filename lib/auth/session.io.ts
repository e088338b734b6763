import "server-only";
import { createHash, randomBytes } from "node:crypto";
import { DrizzleAdapter } from "@auth/drizzle-adapter";
import type { NextAuthOptions } from "next-auth";
import type { Adapter } from "next-auth/adapters";
import EmailProvider from "next-auth/providers/email";
import { rawDb } from "@/db/client";
import { authAccounts, sessions, users, verificationTokens } from "@/db/schema/auth";
import { crockford } from "@/lib/base/checkchar";
import { env } from "@/lib/env";
import { CODE_MINUTES, SESSION_DAYS } from "./schema";

/** The token of a link is also the typed code: ten characters, fifty bits, ten minutes, once. */
export const newCode = (): string => crockford(randomBytes(8), 10);

/** As next-auth hashes it: what is kept cannot be used to sign in. */
export const hashCode = (code: string): string =>
  createHash("sha256").update(`${code}${env().MENDBAY_SECRET}`).digest("hex");

let made: NextAuthOptions | undefined;

/**
 * next-auth with e-mail alone and sessions in the database. No credentials provider: beside it,
 * database sessions fail without a word. Issuing the token is auth/commands.askForLink.
 */
export function authOptions(): NextAuthOptions {
  process.env.NEXTAUTH_URL ??= env().MENDBAY_URL;
  made ??= {
    secret: env().MENDBAY_SECRET,
    adapter: DrizzleAdapter(rawDb(), {
      usersTable: users,
      accountsTable: authAccounts as never,
      sessionsTable: sessions,
      verificationTokensTable: verificationTokens,
    }) as Adapter,
    session: { strategy: "database", maxAge: SESSION_DAYS * 86_400, updateAge: 3600 },
    pages: { signIn: "/sign-in", error: "/sign-in", verifyRequest: "/sign-in/sent" },
    providers: [
      EmailProvider({
        maxAge: CODE_MINUTES * 60,
        from: env().MENDBAY_MAIL_FROM,
        // Never reached: links are issued through the outbox, so that none is lost.
        sendVerificationRequest: async () => undefined,
      }),
    ],
    callbacks: {
      signIn: ({ user }) => (user as { endedAt?: Date | null }).endedAt == null,
      redirect: ({ url, baseUrl }) =>
        url.startsWith("/")
          ? `${baseUrl}${url}`
          : url.startsWith(`${baseUrl}/`) || url === baseUrl
            ? url
            : baseUrl,
    },
    logger: { error: () => undefined, warn: () => undefined, debug: () => undefined },
  };
  return made;
}
