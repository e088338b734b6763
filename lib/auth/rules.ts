import { ok, refuse, type Result } from "../base/result";
import type { Ctx, Role } from "../ctx";

type Who = Role | "customer" | "job" | "anonymous";

/**
 * Who may do what: one row an act. An act that is missing here does not compile.
 * Jobs may do what the handlers need; customers act only on their own account, which
 * the database's row-level security holds beneath this table.
 */
export const MAY = {
  "ledger.import": ["admin", "job"],
  "ledger.read": ["agent", "warehouse", "manager", "admin", "job", "customer"],
  "ledger.swap": ["warehouse", "agent", "manager", "job"],
  "ledger.give_on": ["agent", "manager", "admin", "job"],
  "ledger.pause": ["agent", "manager", "admin", "job"],
  "ledger.move": ["warehouse", "agent", "manager", "job"],
  "site.write": ["admin", "job"],
  "terms.write": ["admin", "job"],
  "terms.read": ["agent", "warehouse", "manager", "admin", "job", "customer"],
  "cover.refresh": ["admin", "warehouse", "agent", "manager", "job"],
  "cover.read": ["agent", "warehouse", "manager", "admin", "job", "customer"],
  "cover.check": ["agent", "warehouse", "manager", "admin", "customer", "job"],
  "law.write": ["admin", "job"],
  "law.read": ["agent", "warehouse", "manager", "admin", "customer", "job"],
  "goodwill.ask": ["agent", "manager"],
  "goodwill.answer": ["manager"],
  "goodwill.read": ["agent", "manager", "admin"],
  "cover.decide": ["agent", "manager", "job", "customer"],
  "ticket.open": ["agent", "job", "customer"],
  "ticket.read": ["agent", "warehouse", "manager", "admin", "job", "customer"],
  "ticket.record": ["agent", "warehouse", "manager", "job", "customer"],
  "ticket.tie": ["agent", "job"],
  "ticket.reply": ["agent", "manager", "customer", "job"],
  "ticket.note": ["agent", "warehouse", "manager"],
  "ticket.ask": ["agent", "manager"],
  "ticket.close": ["agent", "manager", "job"],
  "mail.enqueue": ["agent", "warehouse", "manager", "admin", "job", "customer", "anonymous"],
  "mail.receive": ["job"],
  "mail.send": ["job"],
  "mail.held": ["agent", "manager", "admin"],
  "mail.retry": ["agent", "manager", "admin"],
  "file.upload": ["agent", "warehouse", "manager", "admin", "customer", "job"],
  "file.read": ["agent", "warehouse", "manager", "admin", "customer", "job"],
  "file.check": ["job"],
  "evidence.add": ["agent", "warehouse", "customer", "job"],
  "report.write": ["customer"],
  "rma.request": ["agent", "customer", "job"],
  "rma.authorize": ["agent", "manager", "customer", "job"],
  "rma.decline": ["agent", "manager"],
  "rma.withdraw": ["agent", "manager", "customer"],
  "rma.read": ["agent", "warehouse", "manager", "admin", "customer", "job"],
  "rma.advance": ["agent", "warehouse", "manager", "job", "customer"],
  "rma.settle": ["agent", "warehouse", "manager", "job"],
  "dock.scan": ["warehouse"],
  "dock.receive": ["warehouse", "job"],
  "dock.photo": ["warehouse", "job"],
  "bench.read": ["warehouse", "agent", "manager"],
  "bench.test": ["warehouse", "job"],
  "bench.restock_second_nff": ["manager"],
  "dock.ship": ["warehouse", "job"],
  "rates.read": ["manager", "admin", "job"],
  "audit.read": ["admin"],
  "people.write": ["admin", "job"],
  "session.end": ["admin"],
  "auth.sign_in": ["anonymous", "customer", "agent", "warehouse", "manager", "admin", "job"],
} as const satisfies Record<string, readonly Who[]>;

export type Act = keyof typeof MAY;

function whoIs(ctx: Pick<Ctx, "actor">): readonly Who[] {
  return ctx.actor.kind === "staff" ? ctx.actor.roles : [ctx.actor.kind];
}

/** True when the actor may do `act`. Use for screens; commands use permit. */
export function may(ctx: Pick<Ctx, "actor">, act: Act): boolean {
  const allowed: readonly Who[] = MAY[act];
  return whoIs(ctx).some((who) => allowed.includes(who));
}

/** Refuses in words when the actor may not do `act`. */
export function permit(ctx: Pick<Ctx, "actor">, act: Act): Result<undefined> {
  if (may(ctx, act)) return ok();
  if (ctx.actor.kind === "anonymous") return refuse("unauthenticated", "Sign in first.");
  return refuse("forbidden", "Your role does not allow this. Ask an admin if it should.");
}
