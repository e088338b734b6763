import type { Tx } from "@/db/client";

export const ROLES = ["agent", "warehouse", "manager", "admin"] as const;
export type Role = (typeof ROLES)[number];

/** Who acts. A customer is bound to one account, always. */
export type Actor =
  | { kind: "staff"; userId: string; name: string; email: string; roles: Role[] }
  | { kind: "customer"; userId: string; contactId: string; accountId: string; name: string; email: string }
  | { kind: "job"; name: string }
  | { kind: "anonymous" };

/**
 * Everything a query or command may know of its surroundings. The clock, ids and
 * randomness come in here, once, so that rules stay pure and the demo deterministic.
 */
export type Ctx = {
  actor: Actor;
  now: Date;
  requestId: string;
  newId: () => string;
  /** Set inside a transaction: nested commands join it. */
  tx?: Tx;
};

export type TxCtx = Ctx & { tx: Tx };

/** A context for work that no person asked for: a job, a mail, the demo. */
export function jobCtx(name: string, more: Partial<Ctx> = {}): Ctx {
  return {
    actor: { kind: "job", name },
    now: new Date(),
    requestId: crypto.randomUUID(),
    newId: () => crypto.randomUUID(),
    ...more,
  };
}

export function actorName(actor: Actor): string {
  switch (actor.kind) {
    case "staff":
    case "customer":
      return actor.name;
    case "job":
      return "Mendbay";
    case "anonymous":
      return "somebody";
  }
}
