import { spawn } from "node:child_process";
import { cpSync, existsSync, mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join, relative } from "node:path";
import { ensureBuilt } from "./build";
import { childEnv } from "./child";
import { installPackages, onPath } from "./debian";
import { plainWords } from "./plain";
import { hasPostgres } from "./postgres";
import { ROOT } from "./system";

/**
 * `npm test`: every check, its time, and how many tests passed. `--only core,shell` runs a part;
 * what follows `--` goes to the test runner.
 */
type Count = { passed: number; failed: number };
type Step = { name: string; together?: boolean; needs?: string; run(): Promise<Count & { words: string }> };

const scratch = mkdtempSync(join(tmpdir(), "mendbay-check-"));
const args = process.argv.slice(2);
const cut = args.indexOf("--");
const passed_on = cut >= 0 ? args.slice(cut + 1) : [];
const only = args.includes("--only") ? (args[args.indexOf("--only") + 1] ?? "").split(",") : undefined;
const STEP_MS = 20 * 60_000;

function node(
  script: string,
  more: string[],
  env: Record<string, string> = {},
): Promise<{ code: number; words: string }> {
  return new Promise((done, fail) => {
    const child = spawn(process.execPath, [join("node_modules", script), ...more], {
      cwd: ROOT,
      env: childEnv({ FORCE_COLOR: "0", NEXT_TELEMETRY_DISABLED: "1", ...env }),
      stdio: ["ignore", "pipe", "pipe"],
      timeout: STEP_MS,
    });
    let words = "";
    child.stdout.on("data", (c: Buffer) => (words += c.toString()));
    child.stderr.on("data", (c: Buffer) => (words += c.toString()));
    child.once("error", fail);
    child.once("close", (code) => done({ code: code ?? 1, words }));
  });
}

/** A step without tests counts as one check. */
async function one(...runs: (() => Promise<{ code: number; words: string }>)[]) {
  for (const run of runs) {
    const { code, words } = await run();
    if (code !== 0) return { passed: 0, failed: 1, words };
  }
  return { passed: 1, failed: 0, words: "" };
}

function readCount(file: string): Record<string, unknown> | undefined {
  return existsSync(file) ? (JSON.parse(readFileSync(file, "utf8")) as Record<string, unknown>) : undefined;
}

/** A skipped test is a check that did not happen, and a runner that ran nothing has proved nothing. */
function judged(count: Count & { skipped: number }, code: number, words: string) {
  const failed = count.failed + count.skipped;
  const silent = failed === 0 && (code !== 0 || count.passed === 0);
  const skipped = count.skipped ? `\n${count.skipped} skipped: a skipped test counts as failed.` : "";
  return { passed: count.passed, failed: silent ? 1 : failed, words: words + skipped };
}

async function vitest(project: string) {
  const file = join(scratch, `${project}.json`);
  const reporters = ["--reporter=default", "--reporter=json", `--outputFile.json=${file}`];
  const { code, words } = await node("vitest/vitest.mjs", [
    "run",
    "--project",
    project,
    ...reporters,
    ...passed_on,
  ]);
  const found = readCount(file);
  const number = (name: string) => Number(found?.[name] ?? 0);
  const skipped = number("numPendingTests") + number("numTodoTests");
  return judged({ passed: number("numPassedTests"), failed: number("numFailedTests"), skipped }, code, words);
}

async function playwright() {
  const file = join(scratch, "e2e.json");
  const { code, words } = await node(
    "@playwright/test/cli.js",
    ["test", "--reporter=list,json", ...passed_on],
    {
      PLAYWRIGHT_JSON_OUTPUT_NAME: file,
    },
  );
  const stats = (readCount(file)?.stats ?? {}) as Record<string, number>;
  const failed = (stats.unexpected ?? 0) + (stats.flaky ?? 0);
  return judged({ passed: stats.expected ?? 0, failed, skipped: stats.skipped ?? 0 }, code, words);
}

/** The migrations make what the schema says: generating once more must find nothing to do. */
async function drift() {
  const copy = join(scratch, "migrations");
  cpSync(join(ROOT, "db/migrations"), copy, { recursive: true });
  // The generator takes a path from here alone, and ends with 0 whatever happened: its words decide.
  const out = `--out=${relative(ROOT, copy)}`;
  const { code, words } = await node("drizzle-kit/bin.cjs", [
    "generate",
    "--dialect=postgresql",
    "--schema=./db/schema/*.ts",
    out,
  ]);
  if (code === 0 && words.includes("No schema changes")) return { passed: 1, failed: 0, words: "" };
  return { passed: 0, failed: 1, words: `${words}\ndb/schema has changes without a migration.` };
}

async function build() {
  const log = join(scratch, "build.log");
  try {
    await ensureBuilt(ROOT, log, () => undefined);
    return { passed: 1, failed: 0, words: "" };
  } catch (thrown) {
    return { passed: 0, failed: 1, words: existsSync(log) ? readFileSync(log, "utf8") : String(thrown) };
  }
}

const CACHE = "node_modules/.cache";
const IMPORT_ROOTS = ["app", "components", "db", "emails", "lib", "tests"];
const steps: Step[] = [
  {
    name: "types",
    together: true,
    // Route types and next-env.d.ts are made first: a fresh clone has neither.
    run: () =>
      one(
        () => node("next/dist/bin/next", ["typegen"]),
        () => node("typescript/bin/tsc", ["--noEmit"]),
      ),
  },
  {
    name: "lint",
    together: true,
    run: () =>
      one(() =>
        node("eslint/bin/eslint.js", [
          ".",
          "--max-warnings",
          "0",
          "--cache",
          "--cache-location",
          `${CACHE}/mendbay-eslint/`,
        ]),
      ),
  },
  {
    name: "imports",
    together: true,
    run: () =>
      one(() =>
        node("dependency-cruiser/bin/dependency-cruise.mjs", [
          ...IMPORT_ROOTS,
          "--config",
          ".dependency-cruiser.cjs",
        ]),
      ),
  },
  { name: "drift", together: true, run: drift },
  {
    name: "format",
    together: true,
    run: () =>
      one(() =>
        node("prettier/bin/prettier.cjs", [
          "--check",
          ".",
          "--cache",
          "--cache-location",
          `${CACHE}/mendbay-prettier`,
        ]),
      ),
  },
  { name: "core", run: () => vitest("core") },
  { name: "shell", run: () => vitest("shell") },
  { name: "build", run: build },
  { name: "e2e", needs: "build", run: playwright },
];

const TOOLS: [present: () => boolean, debianPackage: string][] = [
  [hasPostgres, "postgresql"],
  [() => Boolean(onPath("chromium")), "chromium"],
  [() => Boolean(onPath("zbarimg")), "zbar-tools"],
  [() => Boolean(onPath("pdftotext")), "poppler-utils"],
];

const total: Count = { passed: 0, failed: 0 };
const broken = new Set<string>();

async function runStep(step: Step): Promise<void> {
  const from = performance.now();
  const blocked = step.needs && broken.has(step.needs);
  const found = blocked
    ? { passed: 0, failed: 1, words: `not run: ${step.needs} failed` }
    : await step.run().catch((thrown: unknown) => ({
        passed: 0,
        failed: 1,
        words: plainWords(thrown) ?? String((thrown as Error)?.stack ?? thrown),
      }));
  total.passed += found.passed;
  total.failed += found.failed;
  const time = `${((performance.now() - from) / 1000).toFixed(1)} s`.padStart(8);
  const bad = found.failed > 0;
  if (bad) broken.add(step.name);
  console.log(
    `${step.name.padEnd(8)}${time}  ${found.passed} passed${bad ? `, ${found.failed} FAILED` : ""}`,
  );
  if (bad) console.log(`${found.words.trim().split("\n").slice(-200).join("\n")}\n`);
}

async function lanes(list: Step[], width: number): Promise<void> {
  const left = [...list];
  const lane = async () => {
    for (let step = left.shift(); step; step = left.shift()) await runStep(step);
  };
  await Promise.all(Array.from({ length: width }, lane));
}

async function main(): Promise<void> {
  const unknown = only?.filter((name) => !steps.some((step) => step.name === name)) ?? [];
  if (unknown.length) {
    console.log(`No such step: ${unknown.join(", ")}. There are: ${steps.map((s) => s.name).join(", ")}.`);
    total.failed++;
    return;
  }
  const chosen = steps.filter((step) => !only || only.includes(step.name));
  if (chosen.some((step) => ["core", "shell", "e2e"].includes(step.name))) {
    const missing = TOOLS.filter(([present]) => !present()).map(([, name]) => name);
    try {
      if (missing.length) await installPackages(missing, (line) => console.log(line));
    } catch (thrown) {
      console.log(plainWords(thrown) ?? thrown);
      total.failed++;
    }
  }
  await lanes(
    chosen.filter((step) => step.together),
    2,
  );
  for (const step of chosen.filter((s) => !s.together)) await runStep(step);
}

await main().finally(() => {
  rmSync(scratch, { recursive: true, force: true });
  console.log(`${total.passed} passed, ${total.failed} failed`);
  process.exitCode = total.failed > 0 || total.passed === 0 ? 1 : 0;
});
