import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { fileWhere, mayAcknowledge, type FilingFacts, type FilingTicket } from "@/lib/mail/filing";

const now = new Date("2026-03-04T10:00:00Z");
const ticket = (
  n: number,
  participants = ["ines@pinnock.example"],
  closedAt: Date | null = null,
): FilingTicket => ({
  ticketId: `t${n}`,
  number: n,
  participants,
  closedAt,
});
const facts = (more: Partial<FilingFacts> = {}): FilingFacts => ({
  fromEmail: "ines@pinnock.example",
  now,
  kind: "person",
  proof: "not_checked",
  byToken: null,
  badToken: false,
  byId: [],
  hint: null,
  cameBack: null,
  suspicions: [],
  known: true,
  ...more,
});

describe("where a mail goes", () => {
  test.each<[string, Partial<FilingFacts>, string, string | null]>([
    ["nothing known", {}, "new", null],
    ["our signed address", { byToken: ticket(1) }, "append", "t1"],
    ["our message id alone", { byId: [ticket(1)] }, "append", "t1"],
    ["the address of one, an id of another", { byToken: ticket(1), byId: [ticket(2)] }, "append", "t1"],
    ["a number in its subject alone", { hint: { ticketId: "t9", number: 9 } }, "new", null],
    ["a broken signature", { badToken: true }, "new", null],
    ["a signed address in a stranger's hands", { byToken: ticket(1, ["a@lowmere.example"]) }, "hold", null],
    ["an id in a stranger's hands", { byId: [ticket(1, ["a@lowmere.example"])] }, "hold", null],
    ["an automatic answer on a ticket", { kind: "auto_reply", byToken: ticket(1) }, "note", "t1"],
    ["an automatic answer to nothing", { kind: "auto_reply" }, "hold", null],
    ["a bounce of a mail of ours", { kind: "bounce", cameBack: ticket(3) }, "note", "t3"],
    ["a bounce of nothing that we sent", { kind: "bounce", byToken: ticket(1) }, "park", null],
    ["a list, from somebody known", { kind: "list" }, "new", null],
    ["a list, from a stranger", { kind: "list", known: false }, "hold", null],
    ["two senders", { suspicions: ["it names 2 senders"], byToken: ticket(1) }, "hold", null],
    [
      "a ticket closed last week",
      { byToken: ticket(1, undefined, new Date("2026-02-25T00:00:00Z")) },
      "append",
      "t1",
    ],
    [
      "a ticket closed a year ago",
      { byToken: ticket(1, undefined, new Date("2025-03-04T00:00:00Z")) },
      "new",
      null,
    ],
  ])("%s", (_, more, to, ticketId) => {
    const filed = fileWhere(facts(more));
    expect(filed.to).toBe(to);
    expect(filed.ticketId).toBe(ticketId);
    if (to === "hold") expect(filed.why).toMatch(/^[A-Z].*\.$/);
  });

  const anyTicket = fc.option(
    fc.record({
      ticketId: fc.constantFrom("t1", "t2"),
      number: fc.constantFrom(1, 2),
      participants: fc.subarray(["ines@pinnock.example", "a@lowmere.example"]),
      closedAt: fc.constantFrom(null, new Date("2025-01-01T00:00:00Z")),
    }),
  );
  test("nobody who has no part in a ticket ever writes into it, whatever a mail claims", () => {
    fc.assert(
      fc.property(
        anyTicket,
        anyTicket,
        fc.constantFrom("person", "list", "calendar", "auto_reply", "unreadable"),
        fc.constantFrom("ines@pinnock.example", "a@lowmere.example", "x@evil.example"),
        (byToken, id, kind, fromEmail) => {
          const byId = id ? [id] : [];
          const filed = fileWhere(facts({ byToken, byId, kind: kind as FilingFacts["kind"], fromEmail }));
          if (filed.to !== "append" && filed.to !== "note") return true;
          return [byToken, id].some(
            (t) => t?.ticketId === filed.ticketId && t.participants.includes(fromEmail),
          );
        },
      ),
    );
  });
});

describe("the acknowledgement", () => {
  const ack = {
    filing: "new" as const,
    mayAnswer: true,
    why: "",
    proof: "not_checked" as const,
    toOurselves: false,
    acksLastHour: 0,
  };
  test("goes to a person's new ticket, and to nothing else", () => {
    expect(mayAcknowledge(ack).yes).toBe(true);
    for (const more of [
      { filing: "append" as const },
      { filing: "hold" as const },
      { mayAnswer: false },
      { proof: "failed" as const },
      { toOurselves: true },
      { acksLastHour: 3 },
    ])
      expect(mayAcknowledge({ ...ack, ...more }).yes).toBe(false);
  });
});
