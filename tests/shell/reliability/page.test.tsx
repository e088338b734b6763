import type { ReactNode } from "react";
import { renderToStaticMarkup } from "react-dom/server";
import { beforeAll, expect, test, vi } from "vitest";
import { jobCtx, type Ctx } from "@/lib/ctx";
import { freshDb } from "../db";
import { makeWorld } from "./world";

const who = vi.hoisted(() => ({ roles: ["manager"] as string[] }));
const ctx = (): Ctx =>
  jobCtx("test", {
    now: new Date("2026-11-12T10:00:00Z"),
    actor: {
      kind: "staff",
      userId: "00000000-0000-4000-8000-00000000000a",
      name: "Anneke Sow",
      email: "anneke@ostwick.example",
      roles: who.roles as ["manager"],
    },
  });
// The session alone is stood in for; page, route, query and database are the real ones.
vi.mock("@/app/_edge/ctx", () => ({ requireStaff: async () => ctx(), currentCtx: async () => ctx() }));

await freshDb();

let world: Awaited<ReturnType<typeof makeWorld>>;
beforeAll(async () => {
  world = await makeWorld();
});

const page = async (query: Record<string, string> = {}) => {
  const { default: Rates } = await import("@/app/(desk)/rates/page");
  return renderToStaticMarkup((await Rates({ searchParams: Promise.resolve(query) })) as ReactNode);
};
const sheet = async (query: string) => {
  const { GET } = await import("@/app/(desk)/rates/export/route");
  return GET(new Request(`http://127.0.0.1/rates/export?${query}`));
};

test("before the first sale the page says what rates begin with", async () => {
  expect(await page()).toContain("Nothing has been sold yet.");
});

test("a part confirmed at the bench stands in the figure, the sentence, the table and the sheet", async () => {
  const system = await world.unit("OW-2210", "system");
  const sale = await world.sale({ unitId: system, shippedOn: "2026-01-01", coverEnd: "2029-01-01" });
  const units: string[] = [];
  for (let i = 0; i < 3; i++) {
    const unitId = await world.unit("VD-8", "drive");
    const place = {
      unitId,
      parentUnitId: system,
      saleLineId: sale,
      fromOn: "2026-01-01",
      coverEnd: "2029-01-01",
    };
    await world.place(place);
    units.push(unitId);
  }
  expect(await page()).toContain("0 failures confirmed at the bench");
  await world.returned({ unitId: units[0]!, claimOn: "2026-07-01", outcome: "fault_confirmed" });
  const markup = await page();
  expect(markup).toContain(
    "1 failure confirmed at the bench in 2.2 unit-years of parts, as of 12 November 2026.",
  );
  expect(markup).toContain("Drive †");
  expect(markup).toContain("Figure 3 as a table");
  expect(markup).not.toMatch(/NaN|undefined/);
  const answer = await sheet("sheet=rates");
  expect(answer.headers.get("content-type")).toContain("text/csv");
  expect(await answer.text()).toMatch(/2026-11-12,Drive,3,1,/);
  expect(await (await sheet("sheet=survival&family=drive")).text()).toContain(
    "2026-11-12,drive,new,181,3,1,",
  );
  expect(await (await sheet("sheet=triangle&family=drive")).text()).toContain("drive,2026-01,3,6,3,1,false");
});

test("filters that nothing answers, and months the wrong way round, are told in words", async () => {
  expect(await page({ system: "OW-9999" })).toContain("Nothing under cover was shipped");
  expect(await page({ from: "2026-06", to: "2026-02" })).toContain("The first month lies after the last.");
  expect(await page({ family: "fan" })).toContain("No fan has been in service for a day.");
});

test("a sheet of no such name, or asked for by somebody who may not read rates, is not found", async () => {
  expect((await sheet("sheet=people")).status).toBe(404);
  who.roles = ["agent"];
  expect((await sheet("sheet=rates")).status).toBe(404);
  await expect(page()).rejects.toThrow(/NEXT_HTTP_ERROR_FALLBACK;404/);
  who.roles = ["manager"];
});
