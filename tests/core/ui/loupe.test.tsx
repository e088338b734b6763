// @vitest-environment happy-dom
import { cleanup, render, screen, within } from "@testing-library/react";
import fc from "fast-check";
import { afterEach, describe, expect, it } from "vitest";
import { decides, fromClaim, loupeFor, rowsUnder, type LoupeDays } from "@/components/coverage/near";
import { Ruler, type RulerRow } from "@/components/coverage/ruler";
import { addDays, daysBetween } from "@/lib/base/civil";

afterEach(cleanup);

const row = (more: Partial<RulerRow> = {}): RulerRow => ({
  clause: "3.1",
  label: "Board and chassis",
  kind: "covered",
  window: "cover",
  from: "2024-03-05",
  to: "2027-03-03",
  words: "to 3 Mar 2027",
  claimed: true,
  ...more,
});
const DOA = row({
  clause: "2.1",
  label: "Dead on arrival",
  kind: "doa",
  window: "doa",
  to: "2024-04-03",
  words: "to 3 Apr 2024",
});
/** Makes the scale five years long. */
const MEMORY = row({ clause: "3.2", label: "Memory", to: "2029-03-04", claimed: false });

type Case = { rows: RulerRow[]; days: LoupeDays; why: string | null };
const SHIPPED = "2024-03-04";

const CASES: Record<string, Case> = {
  "the claim a day before the end": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2027-03-02", todayOn: "2027-08-01" },
    why: "The claim of 2 March came 1 day before the last covered day, 3 March.",
  },
  "the claim on the last covered day": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2027-03-03", todayOn: "2027-08-01" },
    why: "The claim of 3 March came on the last covered day.",
  },
  "the claim a day after the end": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2027-03-04", todayOn: "2027-08-01" },
    why: "The claim of 4 March came 1 day after the last covered day, 3 March.",
  },
  "claim, end and today together": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2027-03-02", todayOn: "2027-03-12" },
    why: "The claim of 2 March came 1 day before the last covered day, 3 March. Today, 12 March, is 10 days after the claim.",
  },
  "claimed today, the day after": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2027-03-04", todayOn: "2027-03-04" },
    why: "The claim of 4 March, today, came 1 day after the last covered day, 3 March.",
  },
  "claim and today near each other alone": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2026-11-02", todayOn: "2026-11-12" },
    why: "Today, 12 November, is 10 days after the claim of 2 November.",
  },
  "claim and today near, all cover long over": {
    rows: [row({ kind: "ended", to: "2025-03-04" }), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2026-11-02", todayOn: "2026-11-12" },
    why: null,
  },
  "no claim, today near the end, over a year's end": {
    rows: [row({ from: "2024-01-03", to: "2027-01-02" })],
    days: { shippedOn: "2024-01-02", todayOn: "2026-12-29" },
    why: "Today, 29 December 2026, is 4 days before the last covered day, 2 January 2027.",
  },
  "a leap day between claim and end": {
    rows: [row({ from: "2025-03-02", to: "2028-03-01" })],
    days: { shippedOn: "2025-03-01", claimOn: "2028-02-28", todayOn: "2028-12-01" },
    // 2028 is a leap year: 28 and 29 February, then 1 March.
    why: "The claim of 28 February came 2 days before the last covered day, 1 March.",
  },
  "no leap day between claim and end": {
    rows: [row({ from: "2024-03-02", to: "2027-03-01" })],
    days: { shippedOn: "2024-03-01", claimOn: "2027-02-28", todayOn: "2027-12-01" },
    why: "The claim of 28 February came 1 day before the last covered day, 1 March.",
  },
  "all inside the DOA window": {
    rows: [DOA, row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2024-03-12", todayOn: "2024-03-14" },
    why:
      "The claim of 12 March came 7 days after the first covered day, 5 March, and 22 days before the last day " +
      "of the DOA window, 3 April. Today, 14 March, is 2 days after the claim.",
  },
  "a DOA window that has ended, known by its window": {
    rows: [{ ...DOA, kind: "ended" }, row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2024-04-04", todayOn: "2024-09-01" },
    why:
      "The claim of 4 April came 1 day after the last day of the DOA window, 3 April, and 30 days after the first " +
      "covered day, 5 March.",
  },
  "several claimed rows that end apart": {
    rows: [row(), row({ clause: "3.3", label: "Drive, bay 5", to: "2027-03-07" }), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2027-03-05", todayOn: "2027-08-01" },
    why:
      "The claim of 5 March came 2 days after the last covered day of clause 3.1, 3 March, and 2 days before the " +
      "last covered day of clause 3.3, 7 March.",
  },
  "several claimed rows that end together are one day": {
    rows: [row(), row({ clause: "3.3", label: "Drive, bay 5" }), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2027-03-05", todayOn: "2027-08-01" },
    why: "The claim of 5 March came 2 days after the last covered day, 3 March.",
  },
  "a claim before cover began": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2024-03-02", todayOn: "2024-09-01" },
    why: "The claim of 2 March came 3 days before the first covered day, 5 March.",
  },
  "a stored decision, its gold line not today": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2026-11-02", todayOn: "2026-11-12", todayWord: "counted" },
    why: "It was counted on 12 November, 10 days after the claim of 2 November.",
  },
  "all far apart": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2025-06-01", todayOn: "2025-12-01" },
    why: null,
  },
  "near only to a row that decides nothing": {
    rows: [row(), { ...MEMORY, to: "2025-06-03" }],
    days: { shippedOn: SHIPPED, claimOn: "2025-06-01", todayOn: "2025-12-01" },
    why: null,
  },
  "first and last day of one short row near each other, claim and today away": {
    rows: [DOA, row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2025-06-01", todayOn: "2025-12-01" },
    why: null,
  },
  "claim and today one day, the ends away": {
    rows: [row(), MEMORY],
    days: { shippedOn: SHIPPED, claimOn: "2025-06-01", todayOn: "2025-06-01" },
    why: null,
  },
  "several rows and none claimed": {
    rows: [row({ claimed: false }), MEMORY],
    days: { shippedOn: SHIPPED, todayOn: "2027-03-02" },
    why: null,
  },
  "a scale so short that it shows days itself": {
    rows: [row({ from: "2026-11-01", to: "2026-11-30" })],
    days: { shippedOn: "2026-10-31", claimOn: "2026-11-30", todayOn: "2026-12-01" },
    why: null,
  },
};

describe("whether a ruler needs a loupe", () => {
  it.each(Object.entries(CASES))("%s", (_, { rows, days, why }) => {
    expect(loupeFor(rows, days)?.why ?? null).toBe(why);
  });

  const day = fc.integer({ min: 0, max: 2_000 }).map((n) => addDays("2024-01-01", n));

  // ISO 8601: a week runs from Monday to Sunday. Reference for the calendar: temporal-polyfill.
  it("shows whole weeks from Monday to Sunday that hold what it speaks of, whatever the days", () => {
    fc.assert(
      fc.property(day, day, day, (claimOn, todayOn, to) => {
        const rows = [row({ from: "2024-01-01", to }), MEMORY];
        const loupe = loupeFor(rows, { shippedOn: "2023-12-31", claimOn, todayOn });
        if (!loupe) return;
        expect(new Date(`${loupe.from}T00:00:00Z`).getUTCDay()).toBe(1);
        expect(new Date(`${loupe.to}T00:00:00Z`).getUTCDay()).toBe(0);
        const length = daysBetween(loupe.from, loupe.to) + 1;
        expect(length).toBeGreaterThanOrEqual(21);
        expect(length).toBeLessThanOrEqual(13 * 7);
        const inside = (d: string) => d >= loupe.from && d <= loupe.to;
        expect(inside(claimOn) || inside(todayOn)).toBe(true);
        expect(rowsUnder(rows, loupe).length).toBeGreaterThan(0);
        expect(loupe.why).toMatch(/^[A-Z].*\.$/);
      }),
    );
  });

  it("is never missing where the claim stands within three weeks of the end of a five year scale", () => {
    fc.assert(
      fc.property(fc.integer({ min: -21, max: 21 }), day, (apart, todayOn) => {
        const claimOn = addDays("2027-03-03", apart);
        const loupe = loupeFor([row(), MEMORY], { shippedOn: SHIPPED, claimOn, todayOn });
        expect(loupe && loupe.from <= claimOn && loupe.to >= claimOn).toBe(true);
        expect(loupe && loupe.from <= "2027-03-03" && loupe.to >= "2027-03-03").toBe(true);
        const word = apart === 0 ? "on the last" : apart < 0 ? "before the last" : "after the last";
        expect(loupe?.why).toContain(word);
      }),
    );
  });
});

describe("rows under a loupe", () => {
  const at = { from: "2027-02-22", to: "2027-03-21" };

  it("are the claimed ones that reach into it", () => {
    expect(rowsUnder([DOA, row(), MEMORY], at).map((r) => r.clause)).toEqual(["3.1"]);
  });

  it.each([
    ["2027-03-02", "to 1 day after the claim"],
    ["2027-03-03", "to the day of the claim"],
    ["2027-03-05", "to 2 days before the claim"],
    ["2024-03-02", "from 3 days after the claim"],
    ["2026-03-02", "to 3 Mar 2027"],
  ])("count from a claim of %s: %s", (claimOn, words) => {
    expect(fromClaim(row(), { claimOn, todayOn: "2027-04-01" })).toBe(words);
  });

  it("count from today where nothing is claimed", () => {
    expect(fromClaim(row(), { todayOn: "2027-02-27" })).toBe("to 4 days after today");
    expect(fromClaim(row(), { todayOn: "2027-03-03" })).toBe("to today");
  });

  it("a DOA window decides up to its last day, a cover that is over still decides", () => {
    expect(decides(DOA, { claimOn: "2024-04-03", todayOn: "2027-01-01" })).toBe(true);
    expect(decides(DOA, { claimOn: "2024-04-04", todayOn: "2027-01-01" })).toBe(false);
    expect(decides(row(), { claimOn: "2028-01-01", todayOn: "2028-01-01" })).toBe(true);
  });
});

describe("a ruler with a loupe", () => {
  const draw = (claimOn: string, todayOn: string, mini = false) =>
    render(
      <Ruler
        rows={[{ ...DOA, kind: "ended" }, row(), MEMORY]}
        shippedOn={SHIPPED}
        claimOn={claimOn}
        todayOn={todayOn}
        mini={mini}
      />,
    ).container;
  const number = (el: HTMLElement | null | undefined, name: string) =>
    parseFloat(el?.style.getPropertyValue(name) ?? "");

  it("says the loupe to readers as a figure's caption, and shows them each row once", () => {
    draw("2027-03-02", "2027-03-12");
    const figure = screen.getByRole("figure");
    expect(within(figure).getByText(/^The claim of 2 March came 1 day before/).tagName).toBe("FIGCAPTION");
    expect(within(figure).queryAllByRole("row")).toHaveLength(0);
    expect(within(screen.getByRole("table")).getAllByRole("row")).toHaveLength(4);
    for (const drawing of figure.querySelectorAll(":scope > :not(figcaption)")) {
      expect(drawing.getAttribute("aria-hidden")).toBe("true");
    }
  });

  it.each([
    ["2027-03-02", true],
    ["2027-03-03", true],
    ["2027-03-04", false],
  ])("a claim of %s stands inside the bar: %s", (claimOn, inside) => {
    const container = draw(claimOn, "2027-03-12");
    const bar = container.querySelector<HTMLElement>(".loupe .bar-c");
    const line = container.querySelector<HTMLElement>(".loupe .vline.claim");
    const end = number(bar, "--l") + number(bar, "--w");
    const at = parseFloat(line?.style.left ?? "");
    expect(at < end).toBe(inside);
    // Half a day of 28 to either side: the eye can tell.
    expect(Math.abs(at - end)).toBeGreaterThanOrEqual(50 / 28 - 0.01);
  });

  it("draws the same lines and fills as above, the bar open where it runs on", () => {
    const container = draw("2027-03-02", "2027-03-12");
    const bar = container.querySelector(".loupe .bar-c");
    expect(bar?.classList.contains("on-l")).toBe(true);
    expect(bar?.classList.contains("on-r")).toBe(false);
    expect(container.querySelector(".loupe .vline.today .flag")).not.toBeNull();
    expect(container.querySelector(".loupe .vline.ship")).toBeNull();
    expect(container.querySelectorAll(".loupe .tick")).toHaveLength(28);
    expect(
      [...container.querySelectorAll(".loupe .tick.yr + .yl")].map((label) => label.textContent),
    ).toEqual(["22 Feb", "1 Mar", "8 Mar", "15 Mar"]);
  });

  it("shows by its beam which days of the years are enlarged", () => {
    const container = draw("2027-03-02", "2027-03-12");
    const path = container.querySelector(".beam .edge")?.getAttribute("d") ?? "";
    const [left = NaN, right = NaN] = [...path.matchAll(/M([\d.]+) 0V4/g)].map((m) => Number(m[1]));
    const claim = parseFloat(container.querySelector<HTMLElement>(".years .vline.claim")?.style.left ?? "");
    const today = parseFloat(container.querySelector<HTMLElement>(".years .vline.today")?.style.left ?? "");
    expect(left).toBeLessThan(claim);
    expect(today).toBeLessThan(right);
    expect(right - left).toBeLessThan(3);
  });

  it("has none where the ruler is a peek, or shows all", () => {
    expect(draw("2027-03-02", "2027-03-12", true).querySelector("figure")).toBeNull();
    cleanup();
    expect(draw("2025-06-01", "2025-12-01").querySelector("figure")).toBeNull();
  });

  it("the deciding row alone is bold; first days long over are not", () => {
    const bold = [...draw("2027-03-02", "2027-03-12").querySelectorAll(".years .row.hit")];
    expect(bold.map((r) => r.querySelector("[role=rowheader]")?.textContent)).toEqual([
      "3.1Board and chassis",
    ]);
  });
});
