import "server-only";
import { and, asc, eq, gt, isNull, sql } from "drizzle-orm";
import { cookies } from "next/headers";
import { rawDb } from "@/db/client";
import { sessions, userRoles, users } from "@/db/schema/auth";
import { accounts, contacts } from "@/db/schema/ledger";
import type { Actor, Role } from "@/lib/ctx";
import { env } from "@/lib/env";
import { authOptions } from "./session.io";
import type { DemoPerson } from "./schema";

/** Both names next-auth gives its cookie: over TLS it has the secure prefix. */
const COOKIES = ["__Secure-next-auth.session-token", "next-auth.session-token"];

/**
 * Who the request's session belongs to, in one statement. A session that ended, or whose person
 * was ended, is nobody's, at once.
 */
export async function actorFromSession(): Promise<Actor> {
  const jar = await cookies();
  const token = COOKIES.map((name) => jar.get(name)?.value).find(Boolean);
  if (!token) return { kind: "anonymous" };
  const rows = await rawDb()
    .select({
      userId: users.id,
      name: users.name,
      email: users.email,
      roles: sql<
        Role[]
      >`coalesce((select array_agg(r.role::text) from user_role r where r.user_id = ${users.id}), '{}')`,
      contactId: contacts.id,
      accountId: contacts.accountId,
      contactName: contacts.name,
    })
    .from(sessions)
    .innerJoin(users, eq(users.id, sessions.userId))
    .leftJoin(contacts, eq(contacts.userId, users.id))
    .where(and(eq(sessions.sessionToken, token), gt(sessions.expires, new Date()), isNull(users.endedAt)))
    .limit(1);
  const row = rows[0];
  if (!row) return { kind: "anonymous" };
  if (row.roles.length > 0)
    return {
      kind: "staff",
      userId: row.userId,
      name: row.name ?? row.email,
      email: row.email,
      roles: row.roles,
    };
  if (row.contactId && row.accountId)
    return {
      kind: "customer",
      userId: row.userId,
      contactId: row.contactId,
      accountId: row.accountId,
      name: row.contactName ?? row.email,
      email: row.email,
    };
  return { kind: "anonymous" };
}

export type PersonView = { post: string | null; theme: "light" | "dark" | "system" };

/** What the chrome shows beside the name. */
export async function personView(userId: string): Promise<PersonView> {
  const rows = await rawDb()
    .select({ post: users.post, theme: users.theme })
    .from(users)
    .where(eq(users.id, userId))
    .limit(1);
  return rows[0] ?? { post: null, theme: "system" };
}

/** People of the demo by role, for its door. Empty unless this is a demo. */
export async function demoPeople(): Promise<DemoPerson[]> {
  if (env().MENDBAY_DEMO !== "1") return [];
  const staff = await rawDb()
    .select({
      email: users.email,
      name: users.name,
      post: users.post,
      roles: sql<string[]>`array_agg(${userRoles.role}::text order by ${userRoles.role})`,
    })
    .from(users)
    .innerJoin(userRoles, eq(userRoles.userId, users.id))
    .where(isNull(users.endedAt))
    .groupBy(users.id)
    .orderBy(asc(users.name));
  const customers = await rawDb()
    .select({ email: contacts.email, name: contacts.name, account: accounts.name, kind: accounts.buyerKind })
    .from(contacts)
    .innerJoin(accounts, eq(accounts.id, contacts.accountId))
    .orderBy(asc(accounts.name), asc(contacts.name))
    .limit(12);
  return [
    ...staff.map((s) => ({ email: s.email, name: s.name ?? s.email, roles: s.roles, detail: s.post ?? "" })),
    ...customers.map((c) => ({
      email: c.email,
      name: c.name,
      roles: ["customer"],
      detail: c.account === c.name ? "a private buyer" : c.account,
    })),
  ];
}

export { authOptions };
