// @vitest-environment happy-dom
import { cleanup, render, screen, within } from "@testing-library/react";
import { afterEach, describe, expect, it } from "vitest";
import { NARROW } from "@/components/coverage/labels";
import { PortalCoverBar } from "@/components/coverage/portal-bar";
import { Ruler, type RulerRow } from "@/components/coverage/ruler";
import { CoverTree } from "@/components/coverage/tree";

afterEach(cleanup);

const ROWS: RulerRow[] = [
  {
    clause: "2.1",
    label: "Dead on arrival",
    kind: "doa",
    from: "2024-03-05",
    to: "2024-04-03",
    words: "ended 3 Apr 2024",
  },
  {
    clause: "3.1",
    label: "Board and chassis",
    kind: "covered",
    from: "2024-03-05",
    to: "2027-03-04",
    words: "to 4 Mar 2027, 112 days left",
    claimed: true,
  },
];

const draw = (claimOn?: string) =>
  render(<Ruler rows={ROWS} shippedOn="2024-03-04" claimOn={claimOn} todayOn="2026-11-12" />);

describe("ruler", () => {
  it("is a table for readers: what is covered, and its last day in words", () => {
    draw("2026-11-02");
    const table = screen.getByRole("table", {
      name: "Cover: shipped 4 Mar 2024, claim 2 Nov 2026, today 12 Nov 2026",
    });
    const rows = within(table).getAllByRole("row");
    expect(rows).toHaveLength(3);
    expect(within(rows[0] as HTMLElement).getAllByRole("columnheader")).toHaveLength(2);
    expect(within(rows[2] as HTMLElement).getByRole("rowheader").textContent).toBe("3.1Board and chassis");
    expect(within(rows[2] as HTMLElement).getByRole("cell").textContent).toBe("to 4 Mar 2027, 112 days left");
  });

  it("draws claim before today, and both inside the bar that covers them", () => {
    const { container } = draw("2026-11-02");
    const at = (line: string) =>
      parseFloat(container.querySelector<HTMLElement>(`.vline.${line}`)?.style.left ?? "");
    expect(at("ship")).toBeLessThan(at("claim"));
    expect(at("claim")).toBeLessThan(at("today"));
    const bar = container.querySelector<HTMLElement>(".row.hit .bar-c");
    const left = parseFloat(bar?.style.getPropertyValue("--l") ?? "");
    const width = parseFloat(bar?.style.getPropertyValue("--w") ?? "");
    expect(left).toBeGreaterThan(at("ship"));
    expect(left + width).toBeGreaterThan(at("today"));
    expect(left + width).toBeLessThanOrEqual(100);
  });

  it("joins claim and today where they are one day", () => {
    const { container } = draw("2026-11-12");
    expect(container.querySelector(".vline.claim")).toBeNull();
    expect(container.querySelector(".vline.today .vlab")?.textContent).toBe("claim, today");
  });
});

it("a narrow ruler has no label that would run over its edge or into the next", () => {
  const { container } = render(
    <Ruler
      rows={[
        { clause: "3.1", label: "Board", kind: "covered", from: "2018-01-05", to: "2026-12-20", words: "" },
      ]}
      shippedOn="2018-01-04"
      todayOn="2021-06-01"
    />,
  );
  const shown = [...container.querySelectorAll<HTMLElement>(".yl:not(.spare)")];
  const at = shown.map((l) => (parseFloat(l.style.left) / 100) * NARROW);
  expect(at.length).toBeGreaterThan(2);
  // Four figures of the mono face at 12.5 px and its distance from the tick.
  for (const [i, x] of at.entries()) expect(x + 36).toBeLessThan(at[i + 1] ?? NARROW + 12);
});

describe("portal bar", () => {
  it("says a past end as past, and nothing where nothing is sold", () => {
    const { container, rerender } = render(
      <PortalCoverBar shippedOn="2025-08-09" endsOn="2026-08-09" todayOn="2026-11-12" state="ended" />,
    );
    expect(container.textContent).toContain("ended August 2026");
    rerender(<PortalCoverBar shippedOn="2025-08-09" endsOn={null} todayOn="2026-11-12" state="none" />);
    expect(container.innerHTML).toBe("");
  });

  it("marks the day they wrote in place of today", () => {
    const { container } = render(
      <PortalCoverBar
        shippedOn="2024-03-04"
        endsOn="2027-03-04"
        todayOn="2026-11-12"
        saidOn="2026-11-02"
        state="covered"
      />,
    );
    expect(container.textContent).toContain("you wrote to us, 2 November 2026");
    expect(container.textContent).toContain("ends 4 March 2027");
  });
});

it("the tree says each part's cover in words too", () => {
  render(
    <CoverTree
      todayOn="2026-11-12"
      nodes={[
        {
          key: "a",
          depth: 1,
          label: "Drive, bay 5",
          serial: "VS-19F4-00K7",
          bar: { kind: "covered", from: "2024-03-05", to: "2027-03-04", words: "to 4 Mar 2027" },
          was: [{ serial: "VS-19F4-00K1", words: "to 11 Jun 2025" }],
        },
      ]}
    />,
  );
  const item = screen.getByRole("listitem");
  expect(item.textContent).toContain("to 4 Mar 2027");
  expect(item.textContent).toContain("was VS-19F4-00K1 to 11 Jun 2025");
});
