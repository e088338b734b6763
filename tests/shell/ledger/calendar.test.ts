import { sql } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { must } from "@/lib/base/result";
import { coverFor } from "@/lib/coverage/queries";
import { runDueJobs } from "@/lib/jobs/worker.io";
import { keepHolidays } from "@/lib/ledger/calendar.commands";
import { defaultSite } from "@/lib/ledger/queries";
import { as, job, rows, sell, seller, unitId, type Seller } from "../../factories/seller";
import { system } from "../../factories/shipments";
import { freshDb } from "../db";

await freshDb();
let s: Seller;
beforeAll(async () => {
  s = await seller();
});

const doa = async (serial: string) => {
  const [kept] = await rows<{ on: string }>(
    sql`select w.last_on::text as on from cover_window w join unit u on u.id = w.unit_id
      where u.serial = ${serial} and w.kind = 'doa'`,
  );
  const told = (await coverFor(job(), await unitId(serial), "2026-01-10"))!.rows.find(
    (r) => r.kind === "doa",
  );
  return { kept: kept!.on, told: told!.lastOn };
};

describe("holidays of our site", () => {
  it("move the limits that end about them, kept and told alike, and cover not at all", async () => {
    // Delivered 7 January 2026: thirty days end on Friday 6 February.
    await sell([system("OW2210-HOL01", { order: "ORD-9701" })]);
    expect(await doa("OW2210-HOL01")).toEqual({ kept: "2026-02-06", told: "2026-02-06" });
    must(
      await keepHolidays(as(s.admin), { holidays: "2026-02-06, Founders' Day\n2026-12-25, Christmas Day" }),
    );
    await runDueJobs();
    expect(await doa("OW2210-HOL01")).toEqual({ kept: "2026-02-09", told: "2026-02-09" });
    // And back, when it is no holiday any more.
    must(await keepHolidays(as(s.admin), { holidays: "2026-12-25, Christmas Day" }));
    await runDueJobs();
    expect(await doa("OW2210-HOL01")).toEqual({ kept: "2026-02-06", told: "2026-02-06" });
  });

  it("of years that a list does not name stay, and a wrong line changes nothing", async () => {
    must(await keepHolidays(as(s.admin), { holidays: "2027-01-01, New Year" }));
    expect([...(await defaultSite(job())).holidays].sort()).toEqual(["2026-12-25", "2027-01-01"]);
    expect(
      await keepHolidays(as(s.admin), { holidays: "2027-01-01, New Year\nthe day after" }),
    ).toMatchObject({
      ok: false,
      refusal: { fields: { holidays: [expect.stringContaining("Line 2")] } },
    });
    expect([...(await defaultSite(job())).holidays].sort()).toEqual(["2026-12-25", "2027-01-01"]);
    const acts = await rows(sql`select 1 as x from audit_row where act = 'site.holidays'`);
    expect(acts).toHaveLength(3);
    expect(await keepHolidays(as(s.agent), { holidays: "2027-01-01, New Year" })).toMatchObject({
      ok: false,
      refusal: { code: "forbidden" },
    });
  });
});
