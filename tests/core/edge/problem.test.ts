import { expect, test } from "vitest";
import { nextLink, problem, versionIn } from "@/app/_edge/problem";
import { REFUSAL_CODES } from "@/lib/base/result";

const at = { origin: "https://desk.ostwick.example", requestId: "4b7d2f2a-58a1-4a5e-9d0e-0a6a52f1c001" };
const bodyOf = async (r: Response) => (await r.json()) as Record<string, unknown>;

// RFC 9457 section 3: media type, and the members type, title, status, detail, instance.
test.each(REFUSAL_CODES)("%s is a problem document whose status repeats the response's", async (code) => {
  const response = problem({ code, message: "Words for a person." }, at);
  const body = await bodyOf(response);
  expect(response.headers.get("content-type")).toBe("application/problem+json");
  expect(response.status).toBeGreaterThanOrEqual(400);
  expect(body).toMatchObject({
    type: `https://desk.ostwick.example/problems/${code}`,
    status: response.status,
    detail: "Words for a person.",
    instance: `urn:uuid:${at.requestId}`,
  });
  expect(body.title).toBeTruthy();
});

test("no two codes share a status: a client can tell them apart by it alone", () => {
  const statuses = REFUSAL_CODES.map((code) => problem({ code, message: "" }, at).status);
  expect(new Set(statuses).size).toBe(REFUSAL_CODES.length);
});

test("facts stand beside the standard's members and cannot take their names", async () => {
  const body = await bodyOf(
    problem(
      { code: "conflict", message: "First.", details: { rmaNumber: "RMA-1207-K", status: "open" } },
      at,
    ),
  );
  expect(body).toMatchObject({ rmaNumber: "RMA-1207-K", status: 409 });
});

// RFC 9110 section 10.2.3: Retry-After as whole seconds. RFC 6585 section 4 pairs it with 429.
test("a wait is rounded up to whole seconds", () => {
  const late = problem({ code: "too_many", message: "", details: { retryAfterSeconds: 1.2 } }, at);
  expect(late.headers.get("retry-after")).toBe("2");
});

test("field errors are told by field", async () => {
  const body = await bodyOf(
    problem({ code: "invalid", message: "", fields: { serial: ["Too short."] } }, at),
  );
  expect(body.errors).toEqual({ serial: ["Too short."] });
});

// RFC 8288 section 3.
test("the next page keeps the other settings and replaces the cursor", () => {
  const url = new URL("https://desk.ostwick.example/api/v1/tickets?waiting=us&cursor=old");
  expect(nextLink(url, "a b")).toBe('</api/v1/tickets?waiting=us&cursor=a+b>; rel="next"');
  expect(nextLink(url, null)).toBeUndefined();
});

// RFC 9110 section 13.1.1: a strong comparison, so a weak tag never matches.
test.each([
  ['"7"', 7],
  [' "12" ', 12],
  ['W/"7"', undefined],
  ["*", undefined],
  ["7", undefined],
  ['"7", "8"', undefined],
  [null, undefined],
])("If-Match %s names version %s", (header, version) => {
  expect(versionIn(header)).toBe(version);
});
