import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { transact } from "@/db/client";
import { must } from "@/lib/base/result";
import { cancelPreview, startPreview, stepPreview } from "@/lib/coverage/preview.commands";
import {
  discardDraft,
  dropClause,
  keepClause,
  keepDraftHead,
  publishDraft,
  startDraft,
} from "@/lib/coverage/terms.commands";
import { newestPreview, salesUnder, termsBoard, termsIssue } from "@/lib/coverage/terms.queries";
import { keepPerson } from "@/lib/auth/commands";
import type { Actor } from "@/lib/ctx";
import { handle as runPreview } from "@/lib/jobs/handlers/preview";
import { HANDLERS } from "@/lib/jobs/handlers/registry";
import { endSale, swapPart } from "@/lib/ledger/commands";
import { decided } from "../../factories/returns";
import { as, job, NOON, rows, sell, seller, unitId, type Seller } from "../../factories/seller";
import { part, system } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
let other: Actor;
let termsId: string;
beforeAll(async () => {
  s = await seller();
  const person = { email: "ida@ostwick.example", name: "Ida Quill", roles: ["admin" as const] };
  const { userId } = must(await keepPerson(job(), person));
  other = { kind: "staff", userId, ...person };
  termsId = (await termsBoard(as(s.admin)))[0]!.termsId;
});

const tobias = (now?: Date) => as(s.admin, now);
const draftOf = async () => {
  const { versionId } = must(await startDraft(tobias(), { termsId }));
  return versionId;
};
const seen = async (versionId: string) => (await termsIssue(tobias(), versionId))!;
/** A clause of a draft with something put otherwise, as the form sends it. */
async function put(
  versionId: string,
  number: string,
  more: Record<string, unknown>,
  by: Actor = s.admin,
  version?: number,
) {
  const draft = await seen(versionId);
  const { id, ...clause } = draft.clauses.find((c) => c.number === number)!;
  return keepClause(as(by), {
    versionId,
    version: version ?? draft.version,
    clauseId: id,
    ...clause,
    ...more,
  });
}
const throwAway = async (versionId: string) =>
  must(await discardDraft(tobias(), { versionId, version: (await seen(versionId)).version }));
const audits = (versionId: string) =>
  rows<{ act: string; actor: string; before: unknown; after: unknown }>(
    sql`select act, actor_name as actor, before, after from audit_row
      where subject_type = 'terms_version' and subject_id = ${versionId} order by chain_no`,
  );
const issueOfSale = async (serial: string) =>
  (
    await rows<{ issue: number }>(
      sql`select v.issue from sale_line l join unit u on u.id = l.unit_id
        join terms_version v on v.id = l.terms_version_id where u.serial = ${serial} and l.ended_on is null`,
    )
  )[0]?.issue;

describe("a draft", () => {
  it("begins with the clauses of the last issue, and is one at a time", async () => {
    const versionId = await draftOf();
    const draft = await seen(versionId);
    const last = await seen(s.versionId);
    expect(draft).toMatchObject({
      issue: 2,
      publishedAt: null,
      effectiveOn: "2026-06-03",
      madeByName: "Tobias Renn",
    });
    expect(draft.clauses.map(({ id: _, ...c }) => c)).toEqual(last.clauses.map(({ id: _, ...c }) => c));
    expect(await startDraft(as(other), { termsId })).toMatchObject({
      ok: false,
      refusal: {
        code: "conflict",
        message: expect.stringContaining("Tobias Renn") as string,
        details: { versionId },
      },
    });
    await throwAway(versionId);
    expect(await termsIssue(tobias(), versionId)).toBeNull();
  });

  it("is an admin's to begin and change", async () => {
    for (const who of [s.agent, s.manager, s.dock])
      expect(await startDraft(as(who), { termsId })).toMatchObject({
        ok: false,
        refusal: { code: "forbidden" },
      });
    const versionId = await draftOf();
    expect(await put(versionId, "3.2", { period: "P12M" }, s.agent)).toMatchObject({
      ok: false,
      refusal: { code: "forbidden" },
    });
    await throwAway(versionId);
  });

  it("is not seen by customers, and published terms are", async () => {
    const versionId = await draftOf();
    expect(await termsIssue(as(s.sam), versionId)).toBeNull();
    expect(await termsIssue(as(s.sam), s.versionId)).toMatchObject({ issue: 1 });
    await throwAway(versionId);
  });

  it("keeps a clause only as it may stand, with every reason at its field", async () => {
    const versionId = await draftOf();
    for (const [more, fields] of [
      [{ period: "P0D" }, { period: ["A period must be longer than nothing."] }],
      [{ period: "P1.5M" }, { period: ["A period has whole parts only: write P45D, not P1.5M."] }],
      [{ period: "P-3M" }, { period: ["A period cannot be negative."] }],
      [
        { families: ["drive", "board"] },
        {
          families: [
            "Clauses 3.1 and 3.2 overlap: both are about cover for board. Take it out of one of them.",
          ],
        },
      ],
      [
        { period: "P0D", dueBackDays: "soon" },
        {
          period: ["A period must be longer than nothing."],
          dueBackDays: ["Give a whole number from 1 to 120."],
        },
      ],
      [{ number: "3.3" }, { number: ["Clause 3.3 is there already."] }],
      [{ holdCents: "much" }, { holdCents: ["Give an amount from 0.01 to 100,000."] }],
      [{ families: [""] }, { families: ["Tick the parts it is for, or choose every part."] }],
    ] as const)
      expect(await put(versionId, "3.2", more)).toMatchObject({
        ok: false,
        refusal: { code: "invalid", fields },
      });
    expect((await seen(versionId)).version).toBe(1);
    // The other clause of the two is refused as well: what overlaps is nobody's alone.
    expect(await put(versionId, "3.1", { families: ["system", "drive"] })).toMatchObject({
      ok: false,
      refusal: { fields: { families: [expect.stringContaining("Clauses 3.1 and 3.2 overlap")] } },
    });
    await throwAway(versionId);
  });

  it("takes clauses in, stands in the order of their numbers, and lets them go", async () => {
    const versionId = await draftOf();
    const version = (await seen(versionId)).version;
    const added = must(
      await keepClause(tobias(), {
        versionId,
        version,
        number: "3.10",
        kind: "cover",
        title: "Memory",
        families: ["memory"],
        period: "p60m",
        startBasis: "shipped",
        remedies: ["repair"],
        // Of another kind of clause: it has no effect here and is not kept.
        feeKind: "diagnostic",
      }),
    );
    const numbers = async () => (await seen(versionId)).clauses.map((c) => c.number);
    expect(await numbers()).toEqual(["2.1", "3.1", "3.2", "3.3", "3.10", "4.1", "7.1", "7.2", "8.1"]);
    expect((await seen(versionId)).clauses.find((c) => c.number === "3.10")).toMatchObject({
      period: "P60M",
      feeKind: null,
    });
    must(await dropClause(tobias(), { versionId, version: added.version, clauseId: added.clauseId }));
    expect(await numbers()).toEqual(["2.1", "3.1", "3.2", "3.3", "4.1", "7.1", "7.2", "8.1"]);
    expect((await audits(versionId)).map((a) => a.act)).toEqual([
      "terms.draft.start",
      "terms.clause.keep",
      "terms.clause.drop",
    ]);
    await throwAway(versionId);
  });

  it("cannot begin before the last issue, nor far ahead", async () => {
    const versionId = await draftOf();
    const { version } = await seen(versionId);
    for (const [effectiveOn, why] of [
      ["2019-12-31", /Issue 1 is in force from 1 January 2020/],
      ["2206-01-01", /two years ahead/],
      ["soon", /year-month-day/],
    ] as const)
      expect(await keepDraftHead(tobias(), { versionId, version, effectiveOn })).toMatchObject({
        ok: false,
        refusal: { fields: { effectiveOn: [expect.stringMatching(why) as string] } },
      });
    must(await keepDraftHead(tobias(), { versionId, version, effectiveOn: "2026-07-01", note: "Drives." }));
    expect(await seen(versionId)).toMatchObject({ effectiveOn: "2026-07-01", note: "Drives.", version: 2 });
    await throwAway(versionId);
  });

  it("is not changed over the head of who changed it last", async () => {
    const versionId = await draftOf();
    const mine = (await seen(versionId)).version;
    must(await put(versionId, "3.2", { period: "P48M" }, other));
    expect(await put(versionId, "3.2", { period: "P24M" }, s.admin, mine)).toMatchObject({
      ok: false,
      refusal: {
        code: "stale",
        message: "Ida Quill changed this draft after you opened it.",
        details: { by: "Ida Quill", version: 2, theirs: expect.stringContaining("48 months") as string },
      },
    });
    const clauseId = (await seen(versionId)).clauses[0]!.id;
    for (const late of [
      dropClause(tobias(), { versionId, version: mine, clauseId }),
      keepDraftHead(tobias(), { versionId, version: mine, effectiveOn: "2026-07-01" }),
      discardDraft(tobias(), { versionId, version: mine }),
      publishDraft(tobias(), { versionId, version: mine }),
    ])
      expect(await late).toMatchObject({ ok: false, refusal: { code: "stale" } });
    expect((await seen(versionId)).clauses.find((c) => c.number === "3.2")!.period).toBe("P48M");
    // Of two at once with one version, one is kept.
    const both = await Promise.all([
      put(versionId, "3.2", { period: "P30M" }, s.admin, 2),
      put(versionId, "3.3", { period: "P30M" }, other, 2),
    ]);
    expect(both.filter((r) => r.ok)).toHaveLength(1);
    await throwAway(versionId);
  });

  it("of new terms goes with its terms when it is thrown away", async () => {
    expect(await startDraft(tobias(), { code: "osw x", name: "" })).toMatchObject({
      ok: false,
      refusal: { fields: { code: [expect.any(String)], name: [expect.any(String)] } },
    });
    expect(await startDraft(tobias(), { code: "OSW-B", name: "Again" })).toMatchObject({
      ok: false,
      refusal: { code: "conflict", fields: { code: [expect.stringContaining("there already") as string] } },
    });
    const { versionId } = must(await startDraft(tobias(), { code: "OSW-N", name: "New terms" }));
    expect(await publishDraft(tobias(), { versionId, version: 1 })).toMatchObject({
      ok: false,
      refusal: { message: expect.stringContaining("No clause gives cover") as string },
    });
    expect(must(await discardDraft(tobias(), { versionId, version: 1 }))).toEqual({ termsGone: true });
    expect((await termsBoard(tobias())).map((v) => v.code)).toEqual(["OSW-B"]);
  });
});

/** Counts by hand below stand on this ledger: one issue with the seller's clauses, as in its factory. */
describe("the preview of a draft", () => {
  let versionId: string;
  const preview = async () => (await newestPreview(tobias(), versionId))!;
  const figures = async () => {
    const { answer, state, done, total } = await preview();
    const { steppedAt: _, examples, ticketExamples, ...counts } = answer;
    return { state, done, total, ...counts, examples, ticketExamples };
  };
  let minute = 0;
  const start = async () => {
    const now = new Date(NOON.getTime() + ++minute * 60_000);
    return must(await startPreview(tobias(now), { versionId })).previewId;
  };

  beforeAll(async () => {
    const old = system("OW2210-OLD01", {
      order: "ORD-7003",
      "ship date": "2023-07-01",
      "delivery date": "2023-07-03",
    });
    await sell([
      old,
      part("VS19-OLD0A", old, "Drive bay 1", { "ship date": "2023-07-01", "delivery date": "2023-07-03" }),
      part("KP-OLD0A", old, "Supply 1", {
        model: "KP-800",
        "model name": "Keldar 800 W supply",
        family: "power_supply",
        maker: "Keldar Power",
        supplier: "Keldar Power",
        lot: "KP-L01",
      }),
      part("OM-OLD0A", old, "Memory 1", {
        model: "OM-32",
        "model name": "Ostrel 32 GB module",
        family: "memory",
        maker: "Ostrel Memory",
        supplier: "Ostrel Memory",
        lot: "OM-L01",
      }),
    ]);
    // Memory sold by itself: no clause of the seller's names it.
    await sell([
      system("OM-SOLO1", {
        order: "ORD-7005",
        model: "OM-32",
        "model name": "Ostrel 32 GB module",
        kind: "part",
        family: "memory",
        maker: "Ostrel Memory",
      }),
    ]);
    // A sale that has ended has no cover to lose.
    await sell([system("OW2210-OVER1", { order: "ORD-7004" })]);
    must(
      await endSale(job(), { unitId: await unitId("OW2210-OVER1"), onDay: "2026-03-01", reason: "refund" }),
    );
    // Fitted late, the floor decides: 90 days from 20 May 2026.
    must(
      await swapPart(job(), {
        parentUnitId: await unitId("OW2210-PIN01"),
        slot: "Drive bay 2",
        outUnitId: await unitId("VS19-PIN0B"),
        inUnitId: await unitId("VS19-STOCK1"),
        onDay: "2026-05-20",
        reason: "field swap",
      }),
    );
    await decided(s, "VS19-PIN0A");
    await decided(s, "VS19-OLD0A");
    await decided(s, "VS19-LOW0A", { from: s.dana });
    versionId = await draftOf();
    // Drives: 36 months from delivery become 24. Supplies: 24 become 36. Memory: a clause of its own.
    // DOA: 30 days become 14. Systems and boards stay.
    must(await put(versionId, "3.2", { period: "P24M" }));
    must(await put(versionId, "3.3", { period: "P36M" }));
    must(await put(versionId, "2.1", { period: "P14D" }));
    must(
      await keepClause(tobias(), {
        versionId,
        version: (await seen(versionId)).version,
        number: "3.4",
        kind: "cover",
        title: "Memory",
        families: ["memory"],
        period: "P12M",
        startBasis: "shipped",
        remedies: ["repair"],
      }),
    );
  });

  /** Found by hand from the days above; today is 3 June 2026. */
  const BY_HAND = {
    state: "done",
    // Four open sales and three open tickets.
    done: 7,
    total: 7,
    onDay: "2026-06-03",
    sales: 4,
    // Three systems; drives PIN0A, STOCK1, LOW0A, OLD0A; the supply; the module in a system and the one alone.
    units: 10,
    unchanged: 3,
    // The four drives, and the module in a system: 36 months of its system's clause become 12 of its own.
    shorter: 5,
    // The supply: 1 July 2025 becomes 1 July 2026.
    longer: 1,
    // The module alone.
    gained: 1,
    lost: 0,
    // OLD0A, covered to 3 July 2026, and its system's module, to 1 July 2026.
    ended: 2,
    // Everything but the part that was fitted, which has no DOA window.
    doaShorter: 9,
    doaLonger: 0,
    tickets: 3,
    // The claim on OLD0A is covered today.
    ticketsDiffer: 1,
  };

  it("counts as a hand does on a small ledger", async () => {
    const previewId = await start();
    expect(await preview()).toMatchObject({ state: "running", done: 0, total: 7, ofVersion: 5 });
    expect(
      await rows(
        sql`select task_identifier as task from graphile_worker.jobs where key = ${`terms.preview:${previewId}`}`,
      ),
    ).toEqual([{ task: "terms.preview" }]);
    const { handle } = await HANDLERS["terms.preview"]!();
    await handle(job(), { previewId });
    const found = await figures();
    expect(found).toMatchObject(BY_HAND);
    const told = found.examples.map((e) => [
      e.serial,
      e.systemSerial,
      e.change,
      e.was,
      e.now,
      e.nowClause,
      e.days,
    ]);
    expect(told.sort()).toEqual([
      ["KP-OLD0A", "OW2210-OLD01", "longer", "2025-07-01", "2026-07-01", "3.3", 365],
      ["OM-OLD0A", "OW2210-OLD01", "ended", "2026-07-01", "2024-07-01", "3.4", -730],
      ["OM-SOLO1", null, "gained", null, "2027-01-05", "3.4", null],
      ["VS19-LOW0A", "OW2210-LOW01", "shorter", "2029-01-07", "2028-01-07", "3.2", -366],
      ["VS19-OLD0A", "OW2210-OLD01", "ended", "2026-07-03", "2025-07-03", "3.2", -365],
      ["VS19-PIN0A", "OW2210-PIN01", "shorter", "2029-01-07", "2028-01-07", "3.2", -366],
      ["VS19-STOCK1", "OW2210-PIN01", "shorter", "2029-01-07", "2028-01-07", "3.2", -366],
    ]);
    expect(found.ticketExamples).toEqual([
      expect.objectContaining({ serial: "VS19-OLD0A", was: "covered", now: "not_covered" }),
    ]);
  });

  it("moves nothing: what was sold keeps its issue and its cover", async () => {
    expect(
      await rows(sql`select distinct terms_version_id as id from sale_line where ended_on is null`),
    ).toEqual([{ id: s.versionId }]);
    expect(
      await rows(
        sql`select w.last_on::text as last from cover_window w join unit u on u.id = w.unit_id
          where u.serial = 'VS19-OLD0A' and w.kind = 'cover'`,
      ),
    ).toEqual([{ last: "2026-07-03" }]);
  });

  it("gives the same counts after it was broken off between two steps and within one", async () => {
    const previewId = await start();
    for (let i = 0; i < 3; i++) must(await stepPreview(job(), { previewId }, 1));
    expect(await preview()).toMatchObject({ state: "running", done: 3 });
    const broken = transact(job(), async (ctx) => {
      must(await stepPreview(ctx, { previewId }, 1));
      throw new Error("the worker is gone");
    });
    await expect(broken).rejects.toThrow("the worker is gone");
    expect(await preview()).toMatchObject({ state: "running", done: 3 });
    // Asked for again, it goes on as the one it is.
    expect(await start()).toBe(previewId);
    await runPreview(job(), { previewId });
    expect(await figures()).toMatchObject(BY_HAND);
    expect((await preview()).answer.examples).toHaveLength(7);
  });

  it("gives them in any size of step", async () => {
    const previewId = await start();
    while (!must(await stepPreview(job(), { previewId }, 2)).ended);
    expect(await figures()).toMatchObject(BY_HAND);
  });

  it("can be stopped, and counts no further", async () => {
    const previewId = await start();
    must(await stepPreview(job(), { previewId }, 2));
    expect(await cancelPreview(as(s.agent), { previewId })).toMatchObject({ refusal: { code: "forbidden" } });
    must(await cancelPreview(tobias(), { previewId }));
    await runPreview(job(), { previewId });
    expect(await preview()).toMatchObject({ state: "cancelled", done: 2, answer: { sales: 2 } });
    expect(
      await rows(
        sql`select act from audit_row where subject_id = ${previewId} and act <> 'terms.preview.step' order by chain_no`,
      ),
    ).toEqual([{ act: "terms.preview.start" }, { act: "terms.preview.cancel" }]);
  });

  it("stops by itself when the draft is changed, and is begun anew for the draft as it is then", async () => {
    const previewId = await start();
    must(await stepPreview(job(), { previewId }, 2));
    must(await put(versionId, "3.1", { words: "Boards." }));
    expect(must(await stepPreview(job(), { previewId }, 2))).toEqual({ ended: true });
    expect(await preview()).toMatchObject({
      state: "cancelled",
      error: expect.stringContaining("was changed meanwhile") as string,
    });
    const anew = await start();
    expect(anew).not.toBe(previewId);
    await runPreview(job(), { previewId: anew });
    expect(await figures()).toMatchObject(BY_HAND);
  });

  it("tells of cover that would be lost", async () => {
    const draft = await seen(versionId);
    const { id } = draft.clauses.find((c) => c.number === "3.1")!;
    must(await dropClause(tobias(), { versionId, version: draft.version, clauseId: id }));
    await runPreview(job(), { previewId: await start() });
    // The three systems; two of them run today, and the old one to 1 July 2026.
    expect(await figures()).toMatchObject({ lost: 3, unchanged: 0, ended: 5, shorter: 5 });
    await throwAway(versionId);
    expect(await rows(sql`select id from terms_preview`)).toEqual([]);
  });
});

describe("a published draft", () => {
  const shippedOn = (serial: string, day: string) =>
    sell([system(serial, { order: `ORD-${serial}`, "ship date": day, "delivery date": day })]);

  it("is what is sold from its day on; what was sold before keeps its issue", async () => {
    const versionId = await draftOf();
    expect(await publishDraft(tobias(), { versionId, version: 1 })).toMatchObject({
      ok: false,
      refusal: { code: "rule", message: expect.stringContaining("Nothing differs from issue 1") as string },
    });
    must(await put(versionId, "3.1", { period: "P60M" }));
    must(await keepDraftHead(tobias(), { versionId, version: 2, effectiveOn: "2026-06-10" }));
    // Nothing is sold under a draft, not even from its day on.
    await shippedOn("OW2210-DRFT1", "2026-06-11");
    expect(await issueOfSale("OW2210-DRFT1")).toBe(1);
    expect(must(await publishDraft(tobias(), { versionId, version: 3 }))).toEqual({ versionId, issue: 2 });
    await shippedOn("OW2210-EVE01", "2026-06-09");
    await shippedOn("OW2210-DAY01", "2026-06-10");
    expect(await issueOfSale("OW2210-EVE01")).toBe(1);
    expect(await issueOfSale("OW2210-DAY01")).toBe(2);
    expect(await issueOfSale("OW2210-DRFT1")).toBe(1);
    expect(
      await rows(
        sql`select w.last_on::text as last from cover_window w join unit u on u.id = w.unit_id
          where u.serial = 'OW2210-DAY01' and w.kind = 'cover'`,
      ),
    ).toEqual([{ last: "2031-06-10" }]);
    expect(await salesUnder(tobias(), { versionId, termsId, fromOn: "2026-06-10" })).toMatchObject({
      under: 1,
      shippedSince: 2,
    });
    expect((await audits(versionId)).at(-1)).toMatchObject({
      act: "terms.publish",
      actor: "Tobias Renn",
      before: { issue: 1 },
      after: { code: "OSW-B", issue: 2, effectiveOn: "2026-06-10", change: "1 changed" },
    });
  });

  it("never changes: the commands say so, and the database refuses it", async () => {
    const of = (await termsBoard(tobias())).find((v) => v.issue === 2)!;
    expect(await put(of.versionId, "3.1", { period: "P12M" })).toMatchObject({
      ok: false,
      refusal: { code: "rule", message: "Issue 2 is published: it never changes. Draft the next issue." },
    });
    for (const change of [
      sql`update clause set period = 'P12M' where terms_version_id = ${of.versionId}`,
      sql`delete from clause where terms_version_id = ${of.versionId}`,
      sql`update terms_version set effective_on = '2026-01-01' where id = ${of.versionId}`,
    ])
      await expect(rows(change)).rejects.toMatchObject({ cause: { code: "23001" } });
    expect(await startPreview(tobias(), { versionId: of.versionId })).toMatchObject({ ok: false });
  });
});
