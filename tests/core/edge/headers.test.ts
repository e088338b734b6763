import { expect, test } from "vitest";
import { contentPolicy, methodsOf } from "@/app/_edge/headers";

const rulesOf = (policy: string) =>
  new Map(policy.split("; ").map((rule) => [rule.split(" ")[0]!, rule.split(" ").slice(1)]));

// Content Security Policy Level 3: script-src with a nonce and strict-dynamic, nothing inline or evaluated.
test("scripts and style elements run by nonce alone", () => {
  const rules = rulesOf(contentPolicy({ nonce: "n0nce", development: false }));
  for (const name of ["script-src", "style-src-elem"]) {
    expect(rules.get(name)).toContain("'nonce-n0nce'");
    expect(rules.get(name)).not.toContain("'unsafe-inline'");
    expect(rules.get(name)).not.toContain("'unsafe-eval'");
  }
  for (const name of ["object-src", "base-uri", "frame-ancestors"])
    expect(rules.get(name)).toEqual(["'none'"]);
});

test("the upload host is the one other place a page may talk to", () => {
  const policy = (uploadUrl?: string) =>
    rulesOf(contentPolicy({ nonce: "n", uploadUrl, development: false })).get("connect-src");
  expect(policy("http://localhost:4010/some/path")).toEqual(["'self'", "http://localhost:4010"]);
  expect(policy("not a url; script-src *")).toEqual(["'self'", "https://*.ingest.uploadthing.com"]);
});

test("odd methods are in neither list", () => {
  for (const path of ["/desk", "/api/v1/tickets"])
    for (const method of ["TRACE", "CONNECT", "PROPFIND"]) expect(methodsOf(path)).not.toContain(method);
  expect(methodsOf("/desk")).not.toContain("DELETE");
  expect(methodsOf("/api/v1/tickets")).toContain("DELETE");
});
