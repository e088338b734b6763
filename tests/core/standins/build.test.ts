import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, expect, test } from "vitest";
import { isBuilt, sourcesHash } from "@/lib/standins/build";

let root = "";
beforeEach(() => {
  root = mkdtempSync(join(tmpdir(), "mendbay-build-"));
  for (const folder of ["app", "lib/standins", "db/demo", ".next"])
    mkdirSync(join(root, folder), { recursive: true });
  writeFileSync(join(root, "app/page.tsx"), "one");
  writeFileSync(join(root, ".next/BUILD_ID"), "b");
  writeFileSync(join(root, ".next/mendbay-sources"), sourcesHash(root));
});
afterEach(() => rmSync(root, { recursive: true, force: true }));

test("a build stands while its sources do", () => {
  expect(isBuilt(root)).toBe(true);
  // Neither is part of what is served.
  writeFileSync(join(root, "lib/standins/up.ts"), "x");
  writeFileSync(join(root, "db/demo/run.ts"), "x");
  expect(isBuilt(root)).toBe(true);
});

test.each([
  ["changed", () => writeFileSync(join(root, "app/page.tsx"), "two")],
  ["added", () => writeFileSync(join(root, "app/more.tsx"), "")],
  ["moved", () => (rmSync(join(root, "app/page.tsx")), writeFileSync(join(root, "app/paged.tsx"), "one"))],
  ["settings changed", () => writeFileSync(join(root, "next.config.ts"), "x")],
  ["half-written", () => rmSync(join(root, ".next/BUILD_ID"))],
])("%s: it is stale", (_what, change) => {
  change();
  expect(isBuilt(root)).toBe(false);
});
