import { and, desc, eq, ne } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { clauses, terms, termsPreviews, termsVersions } from "@/db/schema/coverage";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { civilDayIn, laterDay } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Refused, type Result } from "@/lib/base/result";
import { actorName, type Ctx, type TxCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { CONDITIONS } from "@/lib/ledger/schema";
import {
  CLAUSE_KINDS,
  DAY_RULES,
  FREIGHT_RULES,
  REMEDIES,
  REPLACED_RULES,
  START_BASES,
  TRANSFER_RULES,
  type ClauseFact,
} from "./schema";
import { checkEffective, checkTerms, clauseOf, inOrder, onlyItsOwn, type TermsClause } from "./terms";
import { clausesOf, lastPublished } from "./terms.queries";
import { clauseWords, compareTerms, comparisonWords } from "./termwords";

const Code = z
  .string()
  .trim()
  .regex(/^[A-Z0-9][A-Z0-9-]{1,19}$/, "Use 2 to 20 capitals, digits and dashes.");
const Name = z.string().trim().min(1, "Give the terms a name.").max(80, "Keep it within 80 characters.");
const Version = z.object({ versionId: z.uuid(), version: z.coerce.number().int() });
/** What is no number stays as typed: checkTerms tells of it beside everything else that is wrong. */
const number = z
  .union([z.number(), z.string()])
  .nullish()
  .transform((v) => v as number | null | undefined);

export const KeepClause = Version.extend({
  /** None: a new clause. */
  clauseId: z.uuid().nullish(),
  number: z.string({ error: "Number clauses like 3 or 3.1." }).trim(),
  kind: z.enum(CLAUSE_KINDS, { error: "Choose what kind of clause it is." }),
  title: z.string({ error: "Say in a few words what the clause is about." }).trim(),
  families: z.array(z.string()),
  condition: z.enum(CONDITIONS).nullish(),
  period: z.string().trim().toUpperCase().nullish(),
  startBasis: z.enum(START_BASES, { error: "Say which day the period runs from." }).nullish(),
  deliveryGraceDays: number,
  dayRule: z.enum(DAY_RULES).nullish(),
  rolls: z.boolean().nullish(),
  clockStops: z.boolean().nullish(),
  replacedRule: z.enum(REPLACED_RULES).nullish(),
  transferRule: z.enum(TRANSFER_RULES).nullish(),
  remedies: z.array(z.enum(REMEDIES)).nullish(),
  dueBackDays: number,
  holdCents: number,
  freight: z.enum(FREIGHT_RULES).nullish(),
  responseHours: number,
  enduranceHours: number,
  enduranceTb: number,
  exclusion: z.string().nullish(),
  evidence: z.array(z.string().trim()).nullish(),
  feeKind: z.string().nullish(),
  feeCents: number,
  words: z.string().trim().nullish(),
});

const today = (ctx: Ctx) => civilDayIn(ctx.now, env().MENDBAY_ZONE);
const bare = ({ id: _, ...clause }: ClauseFact): TermsClause => clause;
type Draft = typeof termsVersions.$inferSelect;

function stale(draft: Draft, more: Record<string, string> = {}): Refused {
  const by = draft.madeByName || "Somebody";
  return refuse("stale", `${by} changed this draft after you opened it.`, {
    details: { by, version: draft.version, ...more },
  });
}

/** The draft, locked; or why it may not be changed by the one who asks. */
async function draftFor(ctx: TxCtx, at: { versionId: string; version: number }): Promise<Result<Draft>> {
  const [draft] = await ctx.tx
    .select()
    .from(termsVersions)
    .where(eq(termsVersions.id, at.versionId))
    .for("update");
  if (!draft) return refuse("not_found", "This draft is not there. It may have been thrown away.");
  if (draft.publishedAt)
    return refuse("rule", `Issue ${draft.issue} is published: it never changes. Draft the next issue.`);
  if (draft.version !== at.version) return stale(draft);
  return ok(draft);
}

async function bump(ctx: TxCtx, draft: Draft, more: Partial<Draft> = {}): Promise<number> {
  const version = draft.version + 1;
  await ctx.tx
    .update(termsVersions)
    .set({ ...more, version, madeByName: actorName(ctx.actor) })
    .where(eq(termsVersions.id, draft.id));
  return version;
}

const NextIssue = z.object({ termsId: z.uuid() });
const NewTerms = z.object({ code: Code, name: Name });

/** A draft of the next issue of some terms, with the clauses of the last; or of new terms, with none. */
export async function startDraft(ctx: Ctx, raw: unknown): Promise<Result<{ versionId: string }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const next = typeof raw === "object" && raw !== null && "termsId" in raw;
  const input: Result<z.output<typeof NextIssue> | z.output<typeof NewTerms>> = next
    ? parse(NextIssue, raw)
    : parse(NewTerms, raw);
  if (!input.ok) return input;
  const ask = input.value;
  return transact(ctx, async (ctx) => {
    let termsId: string;
    if ("termsId" in ask) {
      termsId = ask.termsId;
      const [of] = await ctx.tx.select().from(terms).where(eq(terms.id, termsId)).for("update");
      if (!of) return refuse("not_found", "These terms are not there.");
    } else {
      termsId = ctx.newId();
      const made = await ctx.tx
        .insert(terms)
        .values({ id: termsId, code: ask.code, name: ask.name })
        .onConflictDoNothing()
        .returning({ id: terms.id });
      if (made.length === 0)
        return refuse("conflict", "One field needs another look.", {
          fields: { code: [`Terms ${ask.code} are there already. Draft their next issue.`] },
        });
    }
    const versions = await ctx.tx
      .select()
      .from(termsVersions)
      .where(eq(termsVersions.termsId, termsId))
      .orderBy(desc(termsVersions.issue));
    const open = versions.find((v) => v.publishedAt === null);
    if (open)
      return refuse(
        "conflict",
        `${open.madeByName || "Somebody"} has begun a draft already. Go on with it.`,
        {
          details: { versionId: open.id },
        },
      );
    const last = await lastPublished(ctx.tx, termsId);
    const versionId = ctx.newId();
    const issue = (versions[0]?.issue ?? 0) + 1;
    const effectiveOn = last ? laterDay(last.effectiveOn, today(ctx)) : today(ctx);
    await ctx.tx.insert(termsVersions).values({
      id: versionId,
      termsId,
      issue,
      effectiveOn,
      madeByName: actorName(ctx.actor),
      createdAt: ctx.now,
    });
    const copied = last ? inOrder(await clausesOf(ctx.tx, last.id)) : [];
    if (copied.length > 0)
      await ctx.tx.insert(clauses).values(
        copied.map(
          (c, sort) =>
            ({
              ...onlyItsOwn(bare(c)),
              id: ctx.newId(),
              termsVersionId: versionId,
              sort,
            }) as typeof clauses.$inferInsert,
        ),
      );
    await audit(ctx, {
      act: "terms.draft.start",
      subject: ["terms_version", versionId],
      after: { termsId, issue, effectiveOn, from: last?.issue ?? null, clauses: copied.length },
    });
    return ok({ versionId });
  });
}

/** Adds a clause to a draft, or changes one. Refused, every reason stands at its field. */
export async function keepClause(
  ctx: Ctx,
  raw: unknown,
): Promise<Result<{ clauseId: string; version: number }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(KeepClause, raw);
  if (!input.ok) return input;
  const { versionId, version, clauseId, ...given } = input.value;
  return transact(ctx, async (ctx) => {
    const draft = await draftFor(ctx, { versionId, version });
    const list = await clausesOf(ctx.tx, versionId);
    const before = clauseId ? list.find((c) => c.id === clauseId) : undefined;
    if (!draft.ok) {
      // Who saves over another's change first reads what it is.
      if (draft.refusal.code === "stale" && before)
        draft.refusal.details = { ...draft.refusal.details, theirs: clauseWords(bare(before)) };
      return draft;
    }
    if (clauseId && !before)
      return refuse("not_found", "This clause is not in the draft any more. Add it as a new one.");
    const id = clauseId ?? ctx.newId();
    const clause = onlyItsOwn(clauseOf(given));
    const whole = inOrder([
      ...list.filter((c) => c.id !== id).map((c) => ({ id: c.id, clause: bare(c), number: c.number })),
      { id, clause, number: clause.number },
    ]);
    const mine = whole.findIndex((c) => c.id === id);
    const fields: Record<string, string[]> = {};
    for (const p of checkTerms(whole.map((c) => c.clause)))
      if (p.index === mine || p.other === mine) (fields[p.field] ??= []).push(p.message);
    const count = Object.keys(fields).length;
    if (count > 0)
      return refuse(
        "invalid",
        count === 1 ? "One field needs another look." : `${count} fields need another look.`,
        { fields },
      );
    const values = clause as Omit<typeof clauses.$inferInsert, "termsVersionId" | "sort">;
    if (before) await ctx.tx.update(clauses).set(values).where(eq(clauses.id, id));
    else await ctx.tx.insert(clauses).values({ ...values, id, termsVersionId: versionId, sort: mine });
    for (const [sort, c] of whole.entries())
      await ctx.tx
        .update(clauses)
        .set({ sort })
        .where(and(eq(clauses.id, c.id), ne(clauses.sort, sort)));
    const now = await bump(ctx, draft.value);
    await audit(ctx, {
      act: "terms.clause.keep",
      subject: ["terms_version", versionId],
      before: before ? bare(before) : null,
      after: clause,
    });
    return ok({ clauseId: id, version: now });
  });
}

/** Takes a clause out of a draft. */
export async function dropClause(ctx: Ctx, raw: unknown): Promise<Result<{ version: number }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(Version.extend({ clauseId: z.uuid() }), raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const draft = await draftFor(ctx, v);
    if (!draft.ok) return draft;
    const before = (await clausesOf(ctx.tx, v.versionId)).find((c) => c.id === v.clauseId);
    if (!before) return refuse("not_found", "This clause is not in the draft any more.");
    await ctx.tx.delete(clauses).where(eq(clauses.id, v.clauseId));
    const version = await bump(ctx, draft.value);
    await audit(ctx, {
      act: "terms.clause.drop",
      subject: ["terms_version", v.versionId],
      before: bare(before),
    });
    return ok({ version });
  });
}

const KeepHead = Version.extend({
  effectiveOn: z.string({ error: "Give a day as year-month-day, such as 2026-03-04." }).trim(),
  note: z.string().trim().max(600, "Keep it within 600 characters.").default(""),
});

/** The day a draft shall come in force, and the note that goes with it. */
export async function keepDraftHead(ctx: Ctx, raw: unknown): Promise<Result<{ version: number }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(KeepHead, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const draft = await draftFor(ctx, v);
    if (!draft.ok) return draft;
    const last = await lastPublished(ctx.tx, draft.value.termsId);
    const no = checkEffective(v.effectiveOn, { last, today: today(ctx) });
    if (no) return refuse("invalid", "One field needs another look.", { fields: { effectiveOn: [no] } });
    const { effectiveOn, note } = draft.value;
    const version = await bump(ctx, draft.value, { effectiveOn: v.effectiveOn, note: v.note });
    await audit(ctx, {
      act: "terms.draft.head",
      subject: ["terms_version", v.versionId],
      before: { effectiveOn, note },
      after: { effectiveOn: v.effectiveOn, note: v.note },
    });
    return ok({ version });
  });
}

/** Throws a draft away; new terms of which no issue was published go with it. */
export async function discardDraft(ctx: Ctx, raw: unknown): Promise<Result<{ termsGone: boolean }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(Version, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const draft = await draftFor(ctx, v);
    if (!draft.ok) return draft;
    const { termsId, issue, effectiveOn, note } = draft.value;
    const before = {
      termsId,
      issue,
      effectiveOn,
      note,
      clauses: (await clausesOf(ctx.tx, v.versionId)).map(bare),
    };
    await ctx.tx.delete(termsPreviews).where(eq(termsPreviews.termsVersionId, v.versionId));
    await ctx.tx.delete(clauses).where(eq(clauses.termsVersionId, v.versionId));
    await ctx.tx.delete(termsVersions).where(eq(termsVersions.id, v.versionId));
    const left = await ctx.tx
      .select({ id: termsVersions.id })
      .from(termsVersions)
      .where(eq(termsVersions.termsId, termsId))
      .limit(1);
    if (left.length === 0) await ctx.tx.delete(terms).where(eq(terms.id, termsId));
    await audit(ctx, { act: "terms.draft.discard", subject: ["terms_version", v.versionId], before });
    return ok({ termsGone: left.length === 0 });
  });
}

/**
 * Publishes a draft: everything is checked again under the lock. From then on the database refuses
 * every change of it; sales shipped from its day on are made under it, and no sale made before moves.
 */
export async function publishDraft(
  ctx: Ctx,
  raw: unknown,
): Promise<Result<{ versionId: string; issue: number }>> {
  const may = permit(ctx, "terms.write");
  if (!may.ok) return may;
  const input = parse(Version, raw);
  if (!input.ok) return input;
  const v = input.value;
  return transact(ctx, async (ctx) => {
    const [of] = await ctx.tx
      .select({ id: terms.id, code: terms.code })
      .from(terms)
      .innerJoin(termsVersions, eq(termsVersions.termsId, terms.id))
      .where(eq(termsVersions.id, v.versionId))
      .for("update", { of: terms });
    if (!of) return refuse("not_found", "This draft is not there. It may have been thrown away.");
    const draft = await draftFor(ctx, v);
    if (!draft.ok) return draft;
    const { issue, effectiveOn, note } = draft.value;
    const list = inOrder((await clausesOf(ctx.tx, v.versionId)).map(bare));
    const problems = checkTerms(list);
    if (problems.length > 0)
      return refuse(
        "rule",
        `Not published: ${problems[0]!.number ? `clause ${problems[0]!.number}: ` : ""}${problems[0]!.message}`,
        {
          fields: {
            clauses: problems.map((p) => (p.number ? `Clause ${p.number}: ${p.message}` : p.message)),
          },
        },
      );
    const last = await lastPublished(ctx.tx, of.id);
    const no = checkEffective(effectiveOn, { last, today: today(ctx) });
    if (no) return refuse("rule", `Not published: ${no}`, { fields: { effectiveOn: [no] } });
    const before = last ? (await clausesOf(ctx.tx, last.id)).map(bare) : [];
    const change = comparisonWords(compareTerms(before, list));
    if (last && change === null)
      return refuse("rule", `Nothing differs from issue ${last.issue}: there is nothing to publish.`);
    await ctx.tx
      .update(termsPreviews)
      .set({ state: "cancelled", error: "The draft was published.", finishedAt: ctx.now })
      .where(and(eq(termsPreviews.termsVersionId, v.versionId), eq(termsPreviews.state, "running")));
    await bump(ctx, draft.value, { publishedAt: ctx.now });
    await audit(ctx, {
      act: "terms.publish",
      subject: ["terms_version", v.versionId],
      before: last ? { issue: last.issue, effectiveOn: last.effectiveOn } : null,
      after: { code: of.code, issue, effectiveOn, note, change },
    });
    return ok({ versionId: v.versionId, issue });
  });
}
