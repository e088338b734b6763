import { describe, expect, test } from "vitest";
import { deliveryReports, kindOf, type KindFacts } from "@/lib/mail/kinds";

const mail = (headers: Record<string, string>, more: Partial<KindFacts> = {}): KindFacts => ({
  headers: Object.entries(headers).map(([k, v]) => ({ key: k.toLowerCase(), line: `${k}: ${v}` })),
  envelopeFrom: "ines@pinnock.example",
  fromEmail: "ines@pinnock.example",
  contentType: "text/plain",
  reportType: "",
  calendar: false,
  unreadable: false,
  ...more,
});

describe("kinds", () => {
  test("a person's mail may be answered", () => {
    expect(kindOf(mail({}))).toMatchObject({ kind: "person", mayAnswer: true });
  });

  // RFC 3834 s. 5: the keyword counts without case, comments and parameters.
  test.each([
    ["auto-replied", "auto_reply"],
    ["Auto-Generated", "auto_reply"],
    ["auto-replied; owner=x", "auto_reply"],
    ["no", "person"],
    ["NO (really)", "person"],
  ])("Auto-Submitted: %s", (value, kind) =>
    expect(kindOf(mail({ "Auto-Submitted": value })).kind).toBe(kind),
  );

  test("the null return path is never answered (RFC 5321 s. 4.5.5)", () => {
    expect(kindOf(mail({}, { envelopeFrom: "" }))).toMatchObject({ kind: "auto_reply", mayAnswer: false });
  });

  test("reports are told apart by their type (RFC 6522)", () => {
    const report = { contentType: "multipart/report" };
    expect(kindOf(mail({}, { ...report, reportType: "delivery-status" })).kind).toBe("bounce");
    expect(kindOf(mail({}, { ...report, reportType: "disposition-notification" })).kind).toBe("auto_reply");
    expect(kindOf(mail({}, { ...report, reportType: "feedback-report" })).kind).toBe("auto_reply");
  });

  test("a list's mail is filed, and not answered", () => {
    for (const headers of <Record<string, string>[]>[
      { "List-Id": "<ops.pinnock.example>" },
      { Precedence: "bulk" },
    ])
      expect(kindOf(mail(headers))).toMatchObject({ kind: "list", mayAnswer: false });
  });

  test.each<[string, Partial<KindFacts>, Record<string, string>]>([
    [
      "a machine's address",
      { fromEmail: "no-reply@pinnock.example", envelopeFrom: "no-reply@pinnock.example" },
      {},
    ],
    ["another return path", { envelopeFrom: "owner-ops@lowmere.example" }, {}],
    ["a wish for none", {}, { "X-Auto-Response-Suppress": "All" }],
  ])("%s stops the answer only", (_, more, headers) => {
    expect(kindOf(mail(headers, more))).toMatchObject({ kind: "person", mayAnswer: false });
  });
});

// The layout of RFC 3464 s. 2: per-message fields, then a group a recipient. Names are ours.
test("a delivery report with a failure and a delay", () => {
  const text = [
    "Reporting-MTA: dns; mx.pinnock.example",
    "Original-Envelope-Id: abc",
    "",
    "Final-Recipient: rfc822; ines@pinnock.example",
    "Action: failed",
    "Status: 5.1.1 (no such person)",
    "Diagnostic-Code: smtp; 550 no such",
    " person here",
    "",
    "Final-Recipient: rfc822; ops@pinnock.example",
    "Action: delayed",
    "Status: 4.4.7",
  ].join("\r\n");
  expect(deliveryReports(text)).toEqual([
    { recipient: "ines@pinnock.example", action: "failed", status: "5.1.1", failed: true },
    { recipient: "ops@pinnock.example", action: "delayed", status: "4.4.7", failed: false },
  ]);
});
