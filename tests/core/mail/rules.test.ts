import fc from "fast-check";
import { expect, test } from "vitest";
import { backoffSeconds, headerText, subjectFor } from "@/lib/mail/rules";

test("no line end ever leaves in a header (RFC 5322 s. 2.2)", () => {
  const nasty = fc.string({
    unit: fc.constantFrom("\r", "\n", "\u2028", "\u0000", "B", "c", "c", ":", " ", "x"),
  });
  fc.assert(fc.property(nasty, (s) => !/[\r\n\u0000-\u001f\u2028\u2029]/.test(headerText(s))));
  expect(headerText("Hello\r\nBcc: all@pinnock.example")).toBe("Hello Bcc: all@pinnock.example");
});

test("a subject made of a customer's words is one line too", () => {
  const props = { personName: "", ticketNumber: 7, text: "", byName: "" };
  expect(subjectFor("reply", props, "Node\r\nBcc: x@y.example")).toBe("Re: Node Bcc: x@y.example (ticket 7)");
});

test("tries grow apart, within six hours and their jitter", () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 40 }), fc.double({ min: 0, max: 1, noNaN: true }), (n, jitter) => {
      const s = backoffSeconds(n, jitter);
      return s >= 22 && s <= 6 * 3600 * 1.25 && backoffSeconds(n + 1, jitter) >= s;
    }),
  );
});
