import { sql } from "drizzle-orm";
import { z } from "zod";
import { transact } from "@/db/client";
import { audit } from "@/lib/audit/commands";
import { permit } from "@/lib/auth/rules";
import { civilDayIn } from "@/lib/base/civil";
import { parse } from "@/lib/base/parse";
import { ok, refuse, type Result } from "@/lib/base/result";
import { capital, countWord } from "@/lib/base/show";
import { MAX_CHOSEN } from "@/lib/coverage/check";
import { accountContact, coverOfUnits, type UnitCover } from "@/lib/coverage/check.queries";
import { freshInputs } from "@/lib/coverage/queries";
import { decide } from "@/lib/coverage/rules";
import { FAULT_CLASSES, FAULT_WORDS, type FaultClass, type Outcome } from "@/lib/coverage/schema";
import type { Ctx, TxCtx } from "@/lib/ctx";
import { env } from "@/lib/env";
import { contactByEmail } from "@/lib/ledger/queries";
import { addTicketUnit, openTicket, recordEntry, takeDecision } from "./commands";

const StartFromCheck = z.object({
  /** Of the form, so that one sent twice starts one ticket. */
  formId: z.uuid(),
  unitIds: z
    .array(z.uuid())
    .min(1, "Choose at least one unit.")
    .max(MAX_CHOSEN, `Choose ${MAX_CHOSEN} units at most: one RMA has no more lines.`),
  faultClass: z.enum(FAULT_CLASSES, { error: "Choose what comes closest." }),
  words: z
    .string({ error: "Tell us in a few words what you see." })
    .trim()
    .min(3, "Tell us in a few words what you see.")
    .max(4000, "Keep it under 4 000 characters."),
  battery: z.enum(["none", "inside", "damaged"], { error: "Say whether a battery is damaged." }),
  data: z.enum(["cleared", "sanitize"], { error: "Say who clears the data: nobody may assume it." }),
  personName: z.string().trim().max(200).default(""),
  personEmail: z
    .union([
      z.literal(""),
      z.email({ error: "This is not an e-mail address.", pattern: z.regexes.unicodeEmail }),
    ])
    .default(""),
});

const DAMAGED =
  "A damaged battery must not be shipped. Isolate the unit, keep away from it and call the desk; a person arranges what follows. Leave that unit out here and report it by itself.";

export type Started = {
  ticketId: string;
  number: number;
  /** The same form had been sent before: this is what it started. */
  again: boolean;
  leftOut: { serial: string; why: string }[];
};

/**
 * One ticket for many units: all tied, one entry that tells the fault, a decision for each. What cannot
 * go along (it is on an RMA by now, its sale has ended) is left out and said; the others go on.
 */
export async function startFromCheck(
  ctx: Ctx,
  raw: z.input<typeof StartFromCheck>,
): Promise<Result<Started>> {
  const may = permit(ctx, "ticket.open");
  if (!may.ok) return may;
  const input = parse(StartFromCheck, raw);
  if (!input.ok) return input;
  const v = input.value;
  if (v.battery === "damaged") return refuse("rule", DAMAGED, { fields: { battery: [DAMAGED] } });
  const ids = [...new Set(v.unitIds)];
  return transact(ctx, async (ctx) => {
    const before = await startedBefore(ctx, v.formId, ids);
    if (before) return ok(before);
    const today = civilDayIn(ctx.now, env().MENDBAY_ZONE);
    const found = await coverOfUnits(ctx, ids, today);
    // In the order they were chosen, which is the order of the list.
    const seen = ids.flatMap((id) => found.find((f) => f.unit.unitId === id) ?? []);
    const good = seen.filter((f) => f.hindered === null);
    const leftOut = seen.flatMap((f) => (f.hindered ? [{ serial: f.unit.serial, why: f.hindered }] : []));
    const [first] = good;
    if (!first)
      return refuse(
        seen.length === 0 ? "not_found" : "conflict",
        seen.length === 0
          ? "None of the chosen units is there any more. Check the list again."
          : `Nothing was started: ${leftWords(leftOut)}.`,
        {
          fields: { units: [seen.length === 0 ? "Choose units again." : `${capital(leftWords(leftOut))}.`] },
        },
      );
    const accountId = first.unit.accountId!;
    const other = good.find((f) => f.unit.accountId !== accountId);
    if (other) {
      const why = `${first.unit.serial} was bought by ${first.unit.accountName}, ${other.unit.serial} by ${other.unit.accountName}. One ticket is about one customer's units.`;
      return refuse("rule", why, { fields: { units: [why] } });
    }
    const person = await whoAsks(ctx, accountId, v);
    if (!person.ok) return person;
    const what =
      good.length === 1
        ? first.unit.serial
        : `${capital(countWord(good.length))} units, ${first.unit.serial} first`;
    const opened = await openTicket(ctx, {
      ...person.value,
      accountId,
      channel: ctx.actor.kind === "customer" ? "portal" : "staff",
      subject: `${what}: ${FAULT_WORDS[v.faultClass]}`,
      faultWords: v.words,
      receivedAt: ctx.now,
    });
    if (!opened.ok) return opened;
    const { ticketId, number } = opened.value;
    const tied = new Map<string, string>();
    for (const { unit } of good) {
      const added = await addTicketUnit(ctx, {
        ticketId,
        unitId: unit.unitId,
        state: "tied",
        faultClass: v.faultClass,
        faultWords: v.words,
        answers: { battery: v.battery, data: v.data },
      });
      if (!added.ok) return added;
      tied.set(unit.unitId, added.value.ticketUnitId);
    }
    const left = leftOut.length > 0 ? `Left out: ${leftWords(leftOut)}.` : "";
    const said = await recordEntry(ctx, {
      ticketId,
      kind: "fault_reported",
      line: [`${what}. ${FAULT_WORDS[v.faultClass]}: ${v.words.slice(0, 160)}`, left.slice(0, 240)]
        .filter(Boolean)
        .join(" "),
      data: {
        formId: v.formId,
        chosen: ids,
        units: good.map(({ unit: u }) => ({ unitId: u.unitId, serial: u.serial, slot: u.slot })),
        leftOut,
        faultClass: v.faultClass,
        words: v.words,
        answers: {
          units: good.map(({ unit }) => unit.serial).join(", "),
          ...(leftOut.length > 0 ? { leftOut: leftWords(leftOut) } : {}),
          battery: v.battery,
          data: v.data,
        },
      },
    });
    if (!said.ok) return said;
    for (const { unit } of await mostOpenLast(ctx, good, v.faultClass, today)) {
      const decided = await takeDecision(ctx, {
        ticketId,
        ticketUnitId: tied.get(unit.unitId)!,
        faultClass: v.faultClass,
      });
      if (!decided.ok) return decided;
    }
    await audit(ctx, {
      act: "check.started",
      subject: ["ticket", ticketId],
      after: { number, units: good.map((f) => f.unit.serial), leftOut: leftOut.map((l) => l.serial) },
    });
    return ok({ ticketId, number, again: false, leftOut });
  });
}

const leftWords = (list: Started["leftOut"]): string => list.map((l) => `${l.serial}, ${l.why}`).join("; ");

/** What the same form started before. The lock lets the second wait until the first can be seen. */
async function startedBefore(ctx: TxCtx, formId: string, ids: string[]): Promise<Started | null> {
  await ctx.tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${formId}, 3))`);
  const since = new Date(ctx.now.getTime() - 2 * 86_400_000);
  const result = await ctx.tx.execute(sql`
    select t.id as "ticketId", t.number, e.data -> 'chosen' as chosen, e.data -> 'leftOut' as "leftOut"
    from ticket t join entry e on e.ticket_id = t.id and e.kind = 'fault_reported' and e.data ->> 'formId' = ${formId}
    where t.last_entry_at >= ${since.toISOString()}::timestamptz
      ${ctx.actor.kind === "customer" ? sql`and t.account_id = ${ctx.actor.accountId}` : sql``}`);
  const rows = result.rows as (Omit<Started, "again"> & { chosen: string[] })[];
  // Another choice in the same form is another report.
  const same = rows.find((r) => r.chosen.length === ids.length && ids.every((id) => r.chosen.includes(id)));
  return same ? { ticketId: same.ticketId, number: same.number, leftOut: same.leftOut, again: true } : null;
}

/** Whom the ticket answers to: the customer themselves, or whom the agent names; else the account's first contact. */
async function whoAsks(
  ctx: TxCtx,
  accountId: string,
  v: { personName: string; personEmail: string },
): Promise<Result<{ contactId: string | null; personName: string; personEmail: string }>> {
  const { actor } = ctx;
  if (actor.kind === "customer")
    return ok({ contactId: actor.contactId, personName: actor.name, personEmail: actor.email });
  if (v.personEmail === "") {
    const contact = await accountContact(ctx, accountId);
    return contact
      ? ok({ contactId: contact.contactId, personName: contact.name, personEmail: contact.email })
      : refuse("invalid", "This customer has no contact yet.", {
          fields: { personEmail: ["This customer has no contact yet: say whom the answer goes to."] },
        });
  }
  const known = await contactByEmail(ctx, v.personEmail);
  if (known && known.accountId !== accountId)
    return refuse("rule", "This person belongs to another customer.", {
      fields: {
        personEmail: [`${v.personEmail} is a contact of ${known.accountName}, who did not buy these.`],
      },
    });
  return ok({
    contactId: known?.contactId ?? null,
    personName: v.personName || known?.name || "",
    personEmail: v.personEmail,
  });
}

/**
 * In which order the decisions enter the record: the last one says whose move it is, so what a person
 * must decide comes last, and nothing waits unseen behind a remedy that can be chosen at once.
 */
async function mostOpenLast(ctx: TxCtx, good: UnitCover[], faultClass: FaultClass, claimOn: string) {
  const rank: Record<Outcome, number> = { not_covered: 0, covered: 1, covered_doa: 1, needs_person: 2 };
  const ranked: { cover: UnitCover; rank: number }[] = [];
  for (const cover of good) {
    const facts = await freshInputs(ctx, cover.unit.unitId, { what: cover.unit.serial, claimOn, faultClass });
    ranked.push({ cover, rank: facts ? rank[decide(facts).outcome] : 2 });
  }
  return ranked.sort((a, b) => a.rank - b.rank).map((r) => r.cover);
}
