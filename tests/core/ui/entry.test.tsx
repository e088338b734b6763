// @vitest-environment happy-dom
import { cleanup, render, screen } from "@testing-library/react";
import { afterEach, expect, it } from "vitest";
import { DueClock } from "@/components/tickets/due";
import { RecordEntry } from "@/components/tickets/entry";

afterEach(cleanup);

// Source of the offsets: IANA time zone database, through Intl. London stands at +1 on 24 October
// 2026 and at +0 from 25 October; New York at -4 until 1 November.
it.each([
  ["2026-10-24T23:30:00Z", "Europe/London", "Sun 25 Oct", "00:30"],
  ["2026-10-25T01:30:00Z", "Europe/London", "Sun 25 Oct", "01:30"],
  ["2026-11-01T03:00:00Z", "America/New_York", "Sat 31 Oct", "23:00"],
])("shows %s in %s", (at, zone, day, clock) => {
  const { container } = render(<RecordEntry refName="M1" at={at} zone={zone} title="Ifeoma Carrow" />);
  expect(container.querySelector("time")?.textContent).toBe(`${day}${clock}`);
  expect(container.querySelector("time")?.dateTime).toBe(at.replace("Z", ".000Z"));
});

it("can be cited: the entry is found by its reference", () => {
  render(
    <RecordEntry
      refName="C1"
      at="2026-11-04T11:20:00Z"
      zone="UTC"
      kind="decision"
      title="Coverage decision"
    />,
  );
  expect(document.getElementById("C1")?.classList.contains("dec")).toBe(true);
  expect(screen.getByRole("article", { name: "Entry C1" })).toBeDefined();
});

it("a fuse holds what is left, and none at rest", () => {
  const { container } = render(
    <>
      <DueClock state="running" share={0.31} words="1:50 left" />
      <DueClock state="over" words="0:40 over" />
      <DueClock state="rest" words="chase Fri 13" />
    </>,
  );
  const [running, over, rest] = [...container.querySelectorAll<HTMLElement>(".due")];
  expect(running?.style.getPropertyValue("--v")).toBe("31%");
  expect(over?.style.getPropertyValue("--v")).toBe("100%");
  expect(rest?.className).toBe("due rest");
});
