import { auditRows } from "@/db/schema/audit";
import { actorName, type TxCtx } from "@/lib/ctx";

export type AuditFact = {
  act: string;
  /** Kind of thing and its id. */
  subject: [type: string, id: string];
  before?: unknown;
  after?: unknown;
};

/** One row in the caller's transaction. The database chains it by hash at commit. */
export async function audit(ctx: TxCtx, fact: AuditFact): Promise<void> {
  const { actor } = ctx;
  await ctx.tx.insert(auditRows).values({
    id: ctx.newId(),
    at: ctx.now,
    actorKind: actor.kind,
    actorId: actor.kind === "staff" || actor.kind === "customer" ? actor.userId : null,
    actorName: actor.kind === "job" ? `job ${actor.name}` : actorName(actor),
    act: fact.act,
    subjectType: fact.subject[0],
    subjectId: fact.subject[1],
    before: fact.before ?? null,
    after: fact.after ?? null,
    requestId: ctx.requestId,
  });
}
