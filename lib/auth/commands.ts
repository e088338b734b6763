import { and, eq, lt, sql } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { attempts, sessions, userRoles, users, verificationTokens } from "@/db/schema/auth";
import { contacts } from "@/db/schema/ledger";
import { audit } from "@/lib/audit/commands";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { ROLES, type Ctx, type TxCtx } from "@/lib/ctx";
import { permit } from "./rules";
import { CODE_MINUTES } from "./schema";
import { hashCode, newCode } from "./session.io";

const WINDOW_MS = 15 * 60_000;

/** Counts a try under a key; false when the window's limit is reached. */
async function countTry(ctx: TxCtx, key: string, limit: number): Promise<boolean> {
  const windowStart = new Date(Math.floor(ctx.now.getTime() / WINDOW_MS) * WINDOW_MS);
  const [row] = await ctx.tx
    .insert(attempts)
    .values({ key, windowStart, count: 1 })
    .onConflictDoUpdate({
      target: [attempts.key, attempts.windowStart],
      set: { count: sql`${attempts.count} + 1` },
    })
    .returning({ count: attempts.count });
  return row!.count <= limit;
}

/** Staff with a role, or a contact of a customer; a contact gets their user on the way. */
async function knownUser(ctx: TxCtx, email: string): Promise<{ id: string; ended: boolean } | null> {
  const [user] = await ctx.tx
    .select({ id: users.id, endedAt: users.endedAt })
    .from(users)
    .where(eq(users.email, email));
  const [contact] = await ctx.tx
    .select({ id: contacts.id, name: contacts.name, userId: contacts.userId })
    .from(contacts)
    .where(eq(contacts.email, email));
  if (!user && !contact) return null;
  if (user) {
    if (contact && !contact.userId)
      await ctx.tx.update(contacts).set({ userId: user.id }).where(eq(contacts.id, contact.id));
    return { id: user.id, ended: user.endedAt !== null };
  }
  const id = ctx.newId();
  await ctx.tx.insert(users).values({ id, email, name: contact!.name });
  await ctx.tx.update(contacts).set({ userId: id }).where(eq(contacts.id, contact!.id));
  return { id, ended: false };
}

export type Issued = { code: string; email: string } | null;

/**
 * Issues a sign-in code for a known address; an unknown one gives null and costs the same.
 * The caller puts the mail in and answers alike in both cases. Run under a job's context:
 * nobody is signed in yet.
 */
export async function issueCode(
  ctx: Ctx,
  email: string,
  more: { unlimited?: boolean } = {},
): Promise<Result<Issued>> {
  const may = permit(ctx, "auth.sign_in");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    if (!more.unlimited && !(await countTry(ctx, `ask:${email}`, 6))) {
      return refuse("too_many", "You have asked several times. Wait a quarter of an hour, then ask again.", {
        details: { retryAfterSeconds: 900 },
      });
    }
    const user = await knownUser(ctx, email);
    const code = newCode();
    if (!user || user.ended) return ok<Issued>(null);
    await ctx.tx.delete(verificationTokens).where(lt(verificationTokens.expires, ctx.now));
    await ctx.tx.insert(verificationTokens).values({
      identifier: email,
      token: hashCode(code),
      expires: new Date(ctx.now.getTime() + CODE_MINUTES * 60_000),
    });
    await audit(ctx, { act: "auth.issue_code", subject: ["user", user.id] });
    return ok<Issued>({ code, email });
  });
}

/** Slows down guessing of typed codes. */
export async function countCodeTry(ctx: Ctx, email: string): Promise<Result<undefined>> {
  const may = permit(ctx, "auth.sign_in");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    if (!(await countTry(ctx, `code:${email}`, 12)))
      return refuse("too_many", "Too many tries. Ask for a new code in a quarter of an hour.", {
        details: { retryAfterSeconds: 900 },
      });
    await audit(ctx, { act: "auth.code_try", subject: ["address", "typed code"] });
    return ok();
  });
}

const KeepPerson = z.object({
  email: z.email().transform((e) => e.toLowerCase()),
  name: z.string().min(1),
  post: z.string().default(""),
  roles: z.array(z.enum(ROLES)).min(1),
});

/** A member of staff with their roles. */
export async function keepPerson(
  ctx: Ctx,
  raw: z.input<typeof KeepPerson>,
): Promise<Result<{ userId: string }>> {
  const may = permit(ctx, "people.write");
  if (!may.ok) return may;
  const input = parse(KeepPerson, raw);
  if (!input.ok) return input;
  const { email, name, post, roles } = input.value;
  return transact(ctx, async (ctx) => {
    await ctx.tx
      .insert(users)
      .values({ id: ctx.newId(), email, name, post })
      .onConflictDoUpdate({ target: users.email, set: { name, post, endedAt: null } });
    const [user] = await ctx.tx.select({ id: users.id }).from(users).where(eq(users.email, email));
    await ctx.tx.delete(userRoles).where(eq(userRoles.userId, user!.id));
    await ctx.tx.insert(userRoles).values(roles.map((role) => ({ userId: user!.id, role })));
    await audit(ctx, { act: "people.keep", subject: ["user", user!.id], after: { email, roles } });
    return ok({ userId: user!.id });
  });
}

/** Ends every session of a person, at once. */
export async function endSessions(ctx: Ctx, userId: string): Promise<Result<{ ended: number }>> {
  const may = permit(ctx, "session.end");
  if (!may.ok) return may;
  return transact(ctx, async (ctx) => {
    const gone = await ctx.tx
      .delete(sessions)
      .where(eq(sessions.userId, userId))
      .returning({ t: sessions.userId });
    await audit(ctx, { act: "session.end", subject: ["user", userId], after: { ended: gone.length } });
    return ok({ ended: gone.length });
  });
}

/** A person signs out, or chooses light or dark. */
export async function signOut(ctx: Ctx, token: string): Promise<Result<undefined>> {
  const may = permit(ctx, "auth.sign_in");
  if (!may.ok) return may;
  return transact({ ...ctx, actor: { kind: "job", name: "sign-out" } }, async (ctx) => {
    await ctx.tx.delete(sessions).where(eq(sessions.sessionToken, token));
    await audit(ctx, { act: "auth.sign_out", subject: ["session", "own"] });
    return ok();
  });
}

export async function keepTheme(ctx: Ctx, theme: "light" | "dark" | "system"): Promise<Result<undefined>> {
  const may = permit(ctx, "auth.sign_in");
  if (!may.ok) return may;
  const { actor } = ctx;
  if (actor.kind !== "staff" && actor.kind !== "customer") return refuse("unauthenticated", "Sign in first.");
  return transact({ ...ctx, actor: { kind: "job", name: "theme" } }, async (ctx) => {
    await ctx.tx
      .update(users)
      .set({ theme })
      .where(and(eq(users.id, actor.userId)));
    await audit(ctx, { act: "auth.theme", subject: ["user", actor.userId], after: { theme } });
    return ok();
  });
}
