import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { rawDb, read, transact } from "@/db/client";
import { ok } from "@/lib/base/result";
import { must } from "@/lib/base/result";
import type { Ctx } from "@/lib/ctx";
import { closeBench, sendBack, shipReplacement } from "@/lib/dock/bench.commands";
import { startReport } from "@/lib/evidence/commands";
import { promiseFiles } from "@/lib/files/commands";
import { addNote, attachEvidence, reply } from "@/lib/tickets/commands";
import { tested } from "../../factories/returns";
import { noteGivenOn } from "@/lib/coverage/holding.commands";
import { as, job, rows, sell, seller, stock, unitId, type Seller } from "../../factories/seller";
import { system } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;

/** Everything a customer can have: a return gone through, a portal answer, evidence, a report, a fee told before. */
async function life(who: Seller["sam"], serial: string, systemSerial: string) {
  const t = await tested(s, serial, undefined, who);
  must(await addNote(as(s.agent), { ticketId: t.ticketId, text: `Inner words about ${serial}.` }));
  must(await reply(as(who), { ticketId: t.ticketId, text: `Words of ${serial}.` }));
  const { fileIds } = must(
    await promiseFiles(as(who), {
      purpose: "evidence",
      accountId: who.accountId,
      files: [{ name: `${serial}.log`, size: 10, type: "text/plain" }],
    }),
  );
  const { evidenceIds } = must(
    await attachEvidence(as(who), { ticketId: t.ticketId, fileIds, source: "portal", fromName: who.name }),
  );
  await rows(sql`insert into reading (id, evidence_id, account_id, field, value, lines)
    values (gen_random_uuid(), ${evidenceIds[0]}, ${who.accountId}, 'serial', ${serial}, '[]') returning id`);
  await rows(sql`insert into cover_pause (id, sale_line_id, from_on, to_on, reason)
    select gen_random_uuid(), id, '2026-03-01', '2026-03-10', ${serial} from sale_line where account_id = ${who.accountId} limit 1 returning id`);
  must(await startReport(as(who), { unitId: await unitId(systemSerial), words: `Report of ${serial}.` }));
  must(
    await closeBench(as(s.bench), {
      testId: t.testId,
      scan: serial,
      outcome: "fault_confirmed",
      disposition: "repair",
      finding: `Finding of ${serial}.`,
    }),
  );
  const out = `OUT-${serial}`;
  await stock(out);
  must(await shipReplacement(as(s.bench), { lineId: t.lineId, serial: out, carrier: "Parcel Line" }));
  return t;
}

let ofDana: Awaited<ReturnType<typeof life>>;
beforeAll(async () => {
  s = await seller();
  await life(s.sam, "VS19-PIN0A", "OW2210-PIN01");
  ofDana = await life(s.dana, "VS19-LOW0A", "OW2210-LOW01");
  // Each has something that was another's once.
  for (const [serial, order, code] of [
    ["OW2210-GIV01", "ORD-7901", "LOWMERE"],
    ["OW2210-GIV02", "ORD-7902", "PINNOCK"],
  ] as const) {
    await sell([
      system(serial, {
        order,
        "account code": "TALLOW",
        "account name": "Wren Tallow",
        "contact name": "Wren Tallow",
        "contact e-mail": "wren@tallow.example",
      }),
    ]);
    must(await noteGivenOn(job(), { unitId: await unitId(serial), accountCode: code, onDay: "2026-05-04" }));
  }
});

const asked = async (ctx: Ctx, query: ReturnType<typeof sql>) =>
  (await read(ctx, (tx) => tx.execute(query))).rows as Record<string, unknown>[];
const granted = async () =>
  (
    await rows<{ t: string }>(
      sql`select table_name as t from information_schema.role_table_grants where grantee = 'mendbay_portal' and privilege_type = 'SELECT' order by 1`,
    )
  ).map((r) => r.t);
const denied = (thrown: unknown): string => {
  for (let at = thrown; at instanceof Error; at = at.cause) if ("code" in at) return String(at.code);
  return "none";
};

/** What every customer may read alike: our own site, models, and the terms things are sold under. */
const COMMON = ["clause", "holiday", "law_notice", "model", "site", "terms", "terms_version"];

describe("two customers", () => {
  it("see no row of each other in any table that the portal may read, and rows of their own in each", async () => {
    const tables = (await granted()).filter((t) => !COMMON.includes(t));
    expect(tables.length).toBeGreaterThan(20);
    for (const t of tables) {
      const ids = async (ctx: Ctx) =>
        new Set((await asked(ctx, sql`select * from ${sql.identifier(t)}`)).map((r) => String(r.id)));
      const [a, b, all] = [await ids(as(s.sam)), await ids(as(s.dana)), await ids(as(s.agent))];
      expect(
        [...a].filter((id) => b.has(id)),
        t,
      ).toEqual([]);
      expect(a.size, `${t} of one`).toBeGreaterThan(0);
      expect(b.size, `${t} of the other`).toBeGreaterThan(0);
      for (const id of [...a, ...b]) expect(all.has(id)).toBe(true);
    }
  });

  it("read no word of each other anywhere", async () => {
    let bytes = "";
    for (const t of await granted())
      bytes += JSON.stringify(await asked(as(s.sam), sql`select * from ${sql.identifier(t)}`));
    expect(bytes).toContain("PIN0A");
    for (const word of ["LOW0A", "LOW01", "Lowmere", "dana@", "Dana Voss", s.dana.accountId, ofDana.ticketId])
      expect(bytes.includes(word), word).toBe(false);
  });

  it("see nothing as somebody who is not signed in", async () => {
    const nobody: Ctx = { ...job(), actor: { kind: "anonymous" } };
    for (const t of (await granted()).filter((x) => !COMMON.includes(x)))
      expect(await asked(nobody, sql`select * from ${sql.identifier(t)}`), t).toEqual([]);
  });

  it("never read inner notes or the steps of our own hands", async () => {
    const kinds = async (ctx: Ctx) =>
      (await asked(ctx, sql`select distinct kind::text as kind from entry`)).map((r) => r.kind);
    expect(await kinds(as(s.agent))).toEqual(expect.arrayContaining(["note", "unit_tied", "bench_started"]));
    const seen = await kinds(as(s.sam));
    expect(seen).toEqual(expect.arrayContaining(["decision", "dock_received", "rma_settled"]));
    for (const inner of ["note", "unit_tied", "bench_started", "dock_stopped", "mail_noted"])
      expect(seen).not.toContain(inner);
  });

  it("cannot reach any other table: outbox, audit, sessions, jobs", async () => {
    const may = await granted();
    const all = (
      await rows<{ t: string }>(
        sql`select tablename as t from pg_tables where schemaname = 'public' order by 1`,
      )
    ).map((r) => r.t);
    const rest = all.filter((t) => !may.includes(t));
    expect(rest).toEqual(
      expect.arrayContaining(["outbox", "audit_row", "session", "verification_token", "raw_mail"]),
    );
    for (const t of rest) {
      const thrown = await asked(as(s.sam), sql`select 1 from ${sql.identifier(t)} limit 1`).catch(
        (e: unknown) => e,
      );
      expect(denied(thrown), t).toBe("42501");
    }
  });

  it("write nothing into each other's account", async () => {
    const write = (query: ReturnType<typeof sql>) =>
      transact(as(s.sam), async (ctx) => ok((await ctx.tx.execute(query)).rowCount ?? 0));
    expect(await write(sql`update ticket set subject = 'mine' where id = ${ofDana.ticketId}`)).toEqual(ok(0));
    expect(await write(sql`update rma set state = 'withdrawn' where id = ${ofDana.rmaId}`)).toEqual(ok(0));
    const moved = await write(
      sql`update ticket set account_id = ${s.dana.accountId} where account_id = ${s.sam.accountId}`,
    ).catch((e: unknown) => e);
    expect(denied(moved)).toBe("42501");
    const entry = await write(
      sql`insert into entry (id, ticket_id, account_id, letter, number, kind, at, actor_kind, actor_name, customer_sees, line, data, seq)
        values (gen_random_uuid(), ${ofDana.ticketId}, ${s.sam.accountId}, 'M', 99, 'mail_in', now(), 'customer', 'x', true, 'x', '{}', 99)`,
    ).catch((e: unknown) => e);
    expect(denied(entry)).toBe("42501");
    expect(await reply(as(s.sam), { ticketId: ofDana.ticketId, text: "Hello there" })).toMatchObject({
      ok: false,
      refusal: { code: "not_found" },
    });
    expect(await sendBack(as(s.sam), { lineId: ofDana.lineId, carrier: "Parcel Line" })).toMatchObject({
      ok: false,
      refusal: { code: "forbidden" },
    });
  });

  it("leave no role or account behind on the connection", async () => {
    await Promise.all([as(s.sam), as(s.dana), as(s.agent), as(s.sam)].map((c) => asked(c, sql`select 1`)));
    for (let i = 0; i < 8; i++) {
      const [left] = await rows<{ role: string; account: string | null; me: boolean }>(
        sql`select current_setting('role') as role, nullif(current_setting('mendbay.account', true), '') as account, current_user = session_user as me`,
      );
      expect(left).toEqual({ role: "none", account: null, me: true });
    }
  });
});

describe("what is never rewritten", () => {
  const as_ = (ctx: Ctx, query: ReturnType<typeof sql>) =>
    transact(ctx, async (c) => ok(await c.tx.execute(query))).catch((e: unknown) => e);

  it.each([
    ["an entry", sql`update entry set line = 'x'`, sql`delete from entry`],
    ["a decision", sql`update coverage_decision set outcome = 'covered'`, sql`delete from coverage_decision`],
  ])("%s, not even by the owner of the database", async (_what, change, remove) => {
    for (const query of [change, remove]) {
      expect(denied(await as_(as(s.agent), query))).toBe("42501");
      const thrown = await rawDb()
        .execute(query)
        .catch((e: unknown) => e);
      expect(denied(thrown)).toBe("23001");
    }
  });

  it.each([
    ["an issue's day", sql`update terms_version set effective_on = '2019-01-01'`],
    ["an issue", sql`delete from terms_version`],
    ["a clause", sql`update clause set period = 'P99Y'`],
    ["a clause's end", sql`delete from clause`],
    [
      "a clause added",
      sql`insert into clause (id, terms_version_id, number, kind, title, sort)
        select gen_random_uuid(), id, '9.9', 'cover', 'More', 99 from terms_version limit 1`,
    ],
  ])("published terms: %s", async (_what, query) => {
    expect(denied(await as_(as(s.admin), query))).toBe("23001");
    expect(
      denied(
        await rawDb()
          .execute(query)
          .catch((e: unknown) => e),
      ),
    ).toBe("23001");
  });

  it.each([sql`update audit_row set act = 'x'`, sql`delete from audit_row`, sql`truncate audit_row`])(
    "the audit by staff or customers (%#)",
    async (query) => {
      expect(denied(await as_(as(s.admin), query))).toBe("42501");
      expect(denied(await as_(as(s.sam), query))).toBe("42501");
    },
  );
});
