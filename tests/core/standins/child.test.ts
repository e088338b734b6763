import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, expect, test } from "vitest";
import { runOnce, startChild } from "@/lib/standins/child";

const dir = mkdtempSync(join(tmpdir(), "mendbay-child-"));
afterAll(() => rmSync(dir, { recursive: true, force: true }));

function program(name: string, text: string): string {
  const file = join(dir, `${name}.mjs`);
  writeFileSync(file, text);
  return file;
}

const START = 'process.send("ready"); setInterval(() => undefined, 1000);';

function started(name: string, text: string, failed: (words: string) => void = () => undefined) {
  return startChild({
    name,
    args: [program(name, text)],
    env: {},
    cwd: dir,
    logFile: join(dir, "log", `${name}.log`),
    probe: "message",
    failed,
  });
}

test("a process that was killed is started again, and stops when asked", async () => {
  const child = started("worker", START);
  await child.ready();
  const first = child.pid()!;
  child.kill("SIGKILL");
  await expect.poll(() => child.pid(), { timeout: 10_000 }).not.toBe(first);
  await child.ready();
  const second = child.pid()!;
  await child.stop();
  expect(() => process.kill(second, 0)).toThrow();
});

test("a process may end in order before it is gone", async () => {
  const mark = join(dir, "ended");
  const child = started(
    "orderly",
    `import { writeFileSync } from "node:fs";
     process.on("SIGTERM", () => { writeFileSync(${JSON.stringify(mark)}, "x"); process.exit(0); }); ${START}`,
  );
  await child.ready();
  await child.stop();
  expect(existsSync(mark)).toBe(true);
});

test("a process that keeps ending is given up, with the end of its log", async () => {
  let told: (words: string) => void = () => undefined;
  const words = new Promise<string>((done) => (told = done));
  const child = started("broken", 'console.error("the cause"); process.exit(3);', told);
  expect(await words).toMatch(/broken ends again and again \(3\)[\s\S]*the cause/);
  await expect(child.ready()).rejects.toThrow(/again and again/);
  await child.stop();
}, 20_000);

test("a step that fails says so with the end of its log; its words come while it runs", async () => {
  const said: string[] = [];
  const at = { env: {}, cwd: dir, logFile: join(dir, "log", "step.log") };
  const good = program("good", 'process.send("half done"); console.log("to the log");');
  await runOnce({ ...at, name: "The step", args: [good], say: (line) => said.push(line) });
  expect(said).toEqual(["half done"]);
  expect(readFileSync(at.logFile, "utf8")).toContain("to the log");
  const bad = program("bad", 'throw new Error("why");');
  await expect(runOnce({ ...at, name: "The step", args: [bad] })).rejects.toThrow(
    /The step failed[\s\S]*why/,
  );
});

test("when its parent is killed a child ends too", async () => {
  const pidFile = join(dir, "child.pid");
  const leaf = program("leaf", START);
  const parent = program(
    "parent",
    `import { startChild } from ${JSON.stringify(join(process.cwd(), "lib/standins/child.ts"))};
     import { writeFileSync } from "node:fs";
     const child = startChild({ name: "leaf", args: [${JSON.stringify(leaf)}], env: {}, cwd: ".",
       logFile: ${JSON.stringify(join(dir, "log", "leaf.log"))}, probe: "message", failed() {} });
     await child.ready();
     writeFileSync(${JSON.stringify(pidFile)}, String(child.pid()));
     process.send("ready");`,
  );
  const tsx = new URL("../../../node_modules/tsx/dist/loader.mjs", import.meta.url).href;
  const top = startChild({
    name: "parent",
    args: ["--import", tsx, parent],
    env: {},
    cwd: dir,
    logFile: join(dir, "log", "parent.log"),
    probe: "message",
    failed: () => undefined,
  });
  await top.ready();
  const leafPid = Number(readFileSync(pidFile, "utf8"));
  process.kill(leafPid, 0);
  top.kill("SIGKILL");
  await expect
    .poll(
      () => {
        try {
          process.kill(leafPid, 0);
          return "alive";
        } catch {
          return "gone";
        }
      },
      { timeout: 10_000 },
    )
    .toBe("gone");
  await top.stop();
}, 30_000);
