import { beforeEach, expect, test } from "vitest";
import { sql } from "drizzle-orm";
import { rawDb } from "@/db/client";
import { addDays } from "@/lib/base/civil";
import { must } from "@/lib/base/result";
import { jobCtx, type Ctx, type Role } from "@/lib/ctx";
import { DAYS_PER_YEAR, seen } from "@/lib/reliability/exposure";
import { rates, ratesChoices, survival, triangle } from "@/lib/reliability/queries";
import { freshDb } from "../db";
import { makeWorld, type World } from "./world";

await freshDb();

const asOf = "2026-11-12";
const staff = (...roles: Role[]): Ctx =>
  jobCtx("test", {
    now: new Date(`${asOf}T10:00:00Z`),
    actor: {
      kind: "staff",
      userId: "00000000-0000-4000-8000-00000000000a",
      name: "Anneke Sow",
      email: "anneke@ostwick.example",
      roles,
    },
  });
const manager = staff("manager");

let world: World;
let system: string;
let sale: string;
beforeEach(async () => {
  await rawDb().execute(
    sql`truncate bench_test, rma_line, rma, ticket_unit, ticket, cover_window, installation, sale_line, unit, lot,
      supplier, model, clause, terms_version, terms, site, account cascade`,
  );
  world = await makeWorld();
  system = await world.unit("OW-2210", "system");
  sale = await world.sale({ unitId: system, shippedOn: "2026-01-01", coverEnd: "2029-01-01" });
});

const drive = async (more: Partial<Parameters<World["place"]>[0]> = {}, lot: string | null = null) => {
  const unitId = await world.unit("VD-8", "drive", "new", lot);
  await world.place({
    unitId,
    parentUnitId: system,
    saleLineId: sale,
    fromOn: "2026-01-01",
    coverEnd: "2029-01-01",
    doaEnd: "2026-01-31",
    ...more,
  });
  return unitId;
};
const drives = async (filter: object = {}) => {
  const view = must(await rates(manager, filter));
  return view.rows.filter((r) => r.family === "drive");
};

test("a fault confirmed at the bench is counted, and time stops on the day it was reported", async () => {
  const bad = await drive();
  await drive();
  await world.returned({ unitId: bad, claimOn: "2026-03-02", outcome: "fault_confirmed" });
  const [row] = await drives();
  expect(row).toMatchObject({
    units: 2,
    failures: 1,
    inView: 1,
    judged: 1,
    noFaultFound: 0,
    open: 0,
    small: true,
  });
  // 60 days of the one, 315 of the other: by hand.
  expect(row!.unitYears).toBeCloseTo((60 + 315) / DAYS_PER_YEAR, 10);
  expect(row!.limits!.lo).toBeGreaterThan(0);
});

test("no fault found, damage, open and withdrawn returns are no failures, and each is told", async () => {
  const [nff, damaged, open, withdrawn, cancelled] = [
    await drive(),
    await drive(),
    await drive(),
    await drive(),
    await drive(),
  ];
  await world.returned({ unitId: nff, claimOn: "2026-03-02", outcome: "no_fault_found" });
  await world.returned({ unitId: damaged, claimOn: "2026-03-02", outcome: "damage_not_covered" });
  await world.returned({ unitId: open, claimOn: "2026-11-01" });
  await world.returned({
    unitId: withdrawn,
    claimOn: "2026-11-01",
    rmaState: "withdrawn",
    lineState: "cancelled",
  });
  await world.returned({ unitId: cancelled, claimOn: "2026-11-01", lineState: "cancelled" });
  const [row] = await drives();
  expect(row).toMatchObject({ units: 5, failures: 0, judged: 2, noFaultFound: 1, open: 1, inView: 5 });
  expect(row!.rate).toBe(0);
  expect(row!.highest!).toBeGreaterThan(row!.limits!.hi);
});

test("a fault after cover counts neither as failure nor as time", async () => {
  const late = await drive({ coverEnd: "2026-02-01" });
  await world.returned({ unitId: late, claimOn: "2026-05-01", outcome: "fault_confirmed" });
  const [row] = await drives();
  expect(row).toMatchObject({ failures: 0, inView: 0 });
  expect(row!.unitYears).toBeCloseTo(31 / DAYS_PER_YEAR, 10);
});

test("dead on the day it was shipped is a share of arrivals, with no time and no failure", async () => {
  const dead = await drive();
  await drive();
  await world.returned({ unitId: dead, claimOn: "2026-01-01", outcome: "fault_confirmed" });
  const [row] = await drives();
  expect(row).toMatchObject({ failures: 0, arrived: 2, arrivedDead: 1, inView: 1 });
  expect(row!.unitYears).toBeCloseTo(315 / DAYS_PER_YEAR, 10);
  const view = must(await survival(manager, { family: "drive" }));
  expect(view.groups[0]).toMatchObject({ units: 1, failures: 0, steps: [] });
});

test("a part in its second life is refurbished, and new and refurbished stand apart", async () => {
  const again = await drive({ toOn: "2026-04-01" });
  await world.place({
    unitId: again,
    parentUnitId: system,
    saleLineId: sale,
    fromOn: "2026-06-01",
    coverEnd: "2029-01-01",
    source: "swap",
  });
  await world.returned({ unitId: again, claimOn: "2026-07-01", outcome: "fault_confirmed" });
  const rows = await drives();
  expect(rows.map((r) => [r.label, r.units, r.failures])).toEqual([
    ["Drive, refurbished", 1, 1],
    ["Drive, new", 1, 0],
  ]);
  expect(rows[0]!.unitYears).toBeCloseTo(30 / DAYS_PER_YEAR, 10);
  expect(rows[1]!.unitYears).toBeCloseTo(90 / DAYS_PER_YEAR, 10);
  expect((await drives({ condition: "refurbished" })).map((r) => r.units)).toEqual([1]);
});

test("a system's end of sale ends its parts' time, and filters choose by system and month", async () => {
  const other = await world.unit("OW-4420", "system");
  const ended = await world.sale({
    unitId: other,
    shippedOn: "2025-05-01",
    coverEnd: "2028-05-01",
    endedOn: "2025-05-31",
  });
  const part = await world.unit("VD-8", "drive");
  await world.place({
    unitId: part,
    parentUnitId: other,
    saleLineId: ended,
    fromOn: "2025-05-01",
    coverEnd: "2028-05-01",
  });
  await drive();
  expect((await drives({ system: "OW-4420" }))[0]!.unitYears).toBeCloseTo(30 / DAYS_PER_YEAR, 10);
  expect((await drives({ to: "2025-05" }))[0]!.units).toBe(1);
  expect((await drives({ from: "2025-06" }))[0]!.units).toBe(1);
  expect(await drives({ from: "2027-01" })).toEqual([]);
  expect((await drives({ from: "nonsense", by: "nothing" }))[0]!.units).toBe(2);
  const byModel = must(await rates(manager, { by: "model" }));
  expect(byModel.rows.map((r) => r.label).sort()).toEqual(["OW-2210", "OW-4420", "VD-8"]);
  expect(byModel.rows.map((r) => r.name)).toContain("drive VD-8, VD-8");
  // Whole systems stand beside the parts: their time would count twice in the figure of all parts.
  expect(byModel.all.units).toBe(2);
});

test("the database counts as the rules do, on 400 lives of a random history", async () => {
  let seed = 20261112;
  const random = (n: number) => (seed = (seed * 1103515245 + 12345) % 2147483648) % n;
  const want = { units: 0, days: 0, failures: 0, dead: 0 };
  for (let i = 0; i < 400; i++) {
    const start = addDays("2024-06-01", random(1000));
    const coverEnd = addDays(start, random(900));
    const removed = random(3) === 0 ? addDays(start, random(800)) : undefined;
    const claim = random(2) === 0 ? addDays(start, random(6) === 0 ? 0 : random(900)) : undefined;
    const unitId = await drive({ fromOn: start, coverEnd, toOn: removed, doaEnd: undefined });
    const outcome = (["fault_confirmed", "no_fault_found", "damage_not_covered", undefined] as const)[
      random(4)
    ];
    if (claim) await world.returned({ unitId, claimOn: claim, ...(outcome ? { outcome } : {}) });
    if (start > asOf) continue;
    const inLife = claim !== undefined && (removed === undefined || claim <= removed);
    const life = seen(
      {
        start,
        coverEnd,
        lastKnownGood: removed ?? null,
        confirmedOn: inLife && outcome === "fault_confirmed" ? claim : null,
      },
      asOf,
    );
    want.units += 1;
    want.days += life.days;
    want.failures += life.failed ? 1 : 0;
    want.dead += life.deadOnArrival ? 1 : 0;
  }
  expect(want.failures).toBeGreaterThan(10);
  expect(want.dead).toBeGreaterThan(2);
  const [row] = await drives();
  expect(row!.units).toBe(want.units);
  expect(row!.failures).toBe(want.failures);
  expect(row!.unitYears * DAYS_PER_YEAR).toBeCloseTo(want.days, 6);
  const curve = must(await survival(manager, { family: "drive" })).groups[0]!;
  expect(curve.failures).toBe(want.failures);
});

test("a ship month that departs is named with its lot", async () => {
  const lot = await world.lot("VS-L26-09");
  for (let i = 0; i < 60; i++) {
    const fromOn = addDays("2026-01-05", (i % 10) * 30);
    const unitId = await drive({ fromOn, doaEnd: undefined }, fromOn === "2026-03-06" ? lot : null);
    if (fromOn === "2026-03-06")
      await world.returned({ unitId, claimOn: addDays(fromOn, 20 + i), outcome: "fault_confirmed" });
    else if (i === 7)
      await world.returned({ unitId, claimOn: addDays(fromOn, 10), outcome: "fault_confirmed" });
  }
  const view = must(await triangle(manager, { family: "drive" }));
  expect(view.standsOut).toMatchObject({
    month: "2026-03",
    failures: 6,
    lot: { code: "VS-L26-09", units: 6, of: 6 },
  });
  const march = view.cohorts.find((c) => c.month === "2026-03")!;
  expect(march.units).toBe(6);
  expect(march.cells.reduce((n, c) => n + c.failed, 0)).toBe(6);
});

test("an empty ledger gives empty figures, not errors", async () => {
  await rawDb().execute(sql`truncate cover_window`);
  const view = must(await rates(manager, {}));
  expect(view.rows).toEqual([]);
  expect(view.all).toMatchObject({ units: 0, rate: null, limits: null });
  expect(must(await survival(manager, {})).groups).toEqual([]);
  expect(must(await triangle(manager, {})).cohorts).toEqual([]);
});

test("managers and admins read rates; agents, warehouse, customers and strangers do not", async () => {
  expect((await rates(staff("admin"), {})).ok).toBe(true);
  for (const ctx of [staff("agent"), staff("warehouse")]) {
    for (const ask of [rates, survival, triangle])
      expect(await ask(ctx, {})).toMatchObject({ ok: false, refusal: { code: "forbidden" } });
    expect((await ratesChoices(ctx)).ok).toBe(false);
  }
  expect(await rates({ ...manager, actor: { kind: "anonymous" } }, {})).toMatchObject({
    refusal: { code: "unauthenticated" },
  });
  const choices = must(await ratesChoices(manager));
  expect(choices.systems.map((s) => s.code)).toEqual(["OW-2210"]);
  expect(choices.months).toEqual({ first: "2026-01", last: "2026-01" });
});
