import "server-only";
import { headers } from "next/headers";
import { notFound, redirect } from "next/navigation";
import { cache } from "react";
import { actorFromSession } from "@/lib/auth/queries";
import type { Actor, Ctx, Role } from "@/lib/ctx";

export type StaffCtx = Ctx & { actor: Extract<Actor, { kind: "staff" }> };
export type CustomerCtx = Ctx & { actor: Extract<Actor, { kind: "customer" }> };

const UUID = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/;

/** Who asks, when, and the request's id: read once a request, here and nowhere else. */
export const currentCtx = cache(async (): Promise<Ctx> => {
  const given = (await headers()).get("x-request-id") ?? "";
  return {
    actor: await actorFromSession(),
    now: new Date(),
    requestId: UUID.test(given) ? given : crypto.randomUUID(),
    newId: () => crypto.randomUUID(),
  };
});

/** Where the sign-in page shall lead back to. Only a path of ours: proxy.ts writes the header anew. */
async function signInFirst(): Promise<never> {
  const path = (await headers()).get("x-mendbay-path") ?? "";
  const back = /^\/(?![/\\])/.test(path) && path !== "/" ? `?next=${encodeURIComponent(path)}` : "";
  redirect(`/sign-in${back}`);
}

/**
 * For staff pages. Nobody signed in goes to the sign-in page; everybody else whose role does not
 * fit sees "not found", as if the page were not there.
 */
export async function requireStaff(...roles: Role[]): Promise<StaffCtx> {
  const ctx = await currentCtx();
  if (ctx.actor.kind === "anonymous") return signInFirst();
  if (ctx.actor.kind !== "staff") notFound();
  const held = ctx.actor.roles;
  if (roles.length > 0 && !roles.some((role) => held.includes(role))) notFound();
  return ctx as StaffCtx;
}

/** For portal pages: their account is in the actor, and beneath it in the database's role. */
export async function requireCustomer(): Promise<CustomerCtx> {
  const ctx = await currentCtx();
  if (ctx.actor.kind === "anonymous") return signInFirst();
  if (ctx.actor.kind !== "customer") notFound();
  return ctx as CustomerCtx;
}
