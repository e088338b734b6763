import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { transact } from "@/db/client";
import { ok, must } from "@/lib/base/result";
import { lawBeside, lawNotice, noticeGroups } from "@/lib/coverage/law.queries";
import { keepLawNotice } from "@/lib/coverage/law.commands";
import { authorizeRma, declineClaim } from "@/lib/rma/commands";
import { decided } from "../../factories/returns";
import { as, at, rows, sell, seller, unitId, type Seller } from "../../factories/seller";
import { part, system } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
beforeAll(async () => {
  s = await seller();
});

const OURS = {
  region: "EU" as const,
  forConsumers: false,
  effectiveOn: "2026-03-01",
  title: "Business purchases, as we put it",
  words: "Between businesses the contract applies beside our warranty; the law of your country comes first.",
  source: "Common practice, no source",
};

describe("a notice that an admin keeps", () => {
  it("is shown from its day, stays as it was kept, and is on record", async () => {
    must(await keepLawNotice(as(s.admin, at("2026-02-02T10:00:00Z")), OURS));
    const shown = (onDay: string) => lawNotice(as(s.dana), { country: "DE", buyerKind: "business", onDay });
    expect((await shown("2026-02-28")).title).toBe("Business purchases in the European Union");
    expect(await shown("2026-03-01")).toEqual(OURS);
    expect(await keepLawNotice(as(s.admin, at("2026-02-02T10:00:00Z")), OURS)).toMatchObject({
      ok: false,
      refusal: { code: "conflict", fields: { effectiveOn: [expect.stringContaining("1 March 2026")] } },
    });
    expect(await keepLawNotice(as(s.manager), { ...OURS, effectiveOn: "2026-04-01" })).toMatchObject({
      ok: false,
      refusal: { code: "forbidden" },
    });
    expect(await keepLawNotice(as(s.admin), { ...OURS, forConsumers: true })).toMatchObject({
      ok: false,
      refusal: { fields: { effectiveOn: [expect.stringContaining("today or later")] } },
    });
    await expect(rows(sql`update law_notice set words = 'x' returning id`)).rejects.toMatchObject({
      cause: { message: expect.stringContaining("never rewritten") as string },
    });
    const acts = await rows<{ act: string }>(sql`select act from audit_row where act = 'law.keep'`);
    expect(acts).toHaveLength(1);
    const group = (await noticeGroups(as(s.agent), "2026-06-03")).find(
      (g) => g.region === "EU" && !g.forConsumers,
    )!;
    expect(group.rows.map((r) => [r.title, r.state])).toEqual([
      [OURS.title, "shown"],
      ["Business purchases in the European Union", "past"],
    ]);
  });

  it("cannot be written by a customer", async () => {
    await expect(
      transact(as(s.sam), async (ctx) => {
        await ctx.tx
          .execute(sql`insert into law_notice (id, region, for_consumers, effective_on, title, words, source, made_by_name, created_at)
          values (gen_random_uuid(), 'EU', true, '2026-01-01', 't', 'w', 's', 'n', now())`);
        return ok();
      }),
    ).rejects.toMatchObject({ cause: { code: "42501" } });
  });
});

describe("a letter", () => {
  const props = async (ticketId: string, template: string) =>
    (
      await rows<{ props: { law?: { title: string }; fees?: string[] } }>(
        sql`select o.props from outbox o where o.ticket_id = ${ticketId} and o.template = ${template}`,
      )
    )[0]!.props;

  it("of authorization and of refusal has the notice for its sale's buyer and country", async () => {
    const yes = await decided(s, "VS19-LOW0A", { from: s.dana });
    must(
      await authorizeRma(as(s.agent), {
        ticketId: yes.ticketId,
        lines: [{ ticketUnitId: yes.ticketUnitId }],
        remedy: "advance_replacement",
      }),
    );
    expect((await props(yes.ticketId, "rma_authorized")).law?.title).toBe(OURS.title);
    const no = await decided(s, "VS19-PIN0A", { receivedAt: at("2029-03-01T10:00:00Z") });
    must(
      await declineClaim(as(s.agent), {
        ticketId: no.ticketId,
        ticketUnitId: no.ticketUnitId,
        reason: "Under our warranty its days were over when you wrote.",
      }),
    );
    expect((await props(no.ticketId, "rma_declined")).law?.title).toBe(OURS.title);
  });

  it("to a consumer tells a consumer's rights and asks for no fee", async () => {
    const own = system("OW2210-CONS1", {
      order: "ORD-9901",
      "account code": "TALLOW",
      "account name": "Wren Tallow",
      "buyer kind": "consumer",
      country: "GB",
      "contact name": "Wren Tallow",
      "contact e-mail": "wren@tallow.example",
    });
    await sell([own, part("VS19-CONS1", own, "Drive bay 1")]);
    const { customer } = await import("../../factories/seller");
    const wren = await customer("wren@tallow.example");
    const d = await decided(s, "VS19-CONS1", { from: wren });
    must(
      await authorizeRma(as(s.agent), {
        ticketId: d.ticketId,
        lines: [{ ticketUnitId: d.ticketUnitId }],
        remedy: "advance_replacement",
      }),
    );
    const mail = await props(d.ticketId, "rma_authorized");
    expect(mail.law?.title).toBe("Your rights as a consumer in the United Kingdom");
    expect(mail.fees).toEqual([]);
    expect(
      await rows(sql`select 1 as x from fee_notice f join rma_line l on l.id = f.rma_line_id
        join unit u on u.id = l.unit_id where u.id = ${await unitId("VS19-CONS1")}`),
    ).toEqual([]);
    expect((await lawBeside(as(wren), d.decisionId))?.title).toContain("consumer");
    expect(await lawBeside(as(s.dana), d.decisionId)).toBeNull();
  });
});
