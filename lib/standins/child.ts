import { spawn, type ChildProcess } from "node:child_process";
import { createWriteStream, mkdirSync, readFileSync } from "node:fs";
import { dirname } from "node:path";
import { Plain } from "./plain";

/** How to know that a process does its work: it answers a URL, or says so over the channel. */
export type Probe = { url: string } | "message";

export type ChildOptions = {
  name: string;
  args: string[];
  env: Record<string, string>;
  cwd: string;
  logFile: string;
  probe: Probe;
  /** Told when the process keeps ending by itself. */
  failed(words: string): void;
};

export type Child = {
  name: string;
  pid(): number | undefined;
  /** Sends a signal to the process; what ended by itself is started again. */
  kill(signal: NodeJS.Signals): void;
  ready(): Promise<void>;
  stop(): Promise<void>;
};

const LEASH = new URL("./leash.mjs", import.meta.url).href;
const PATIENCE_MS = 90_000;
const STOP_MS = 15_000;
const pause = (ms: number) => new Promise<void>((done) => setTimeout(done, ms));

/** The end of a log, to show with what went wrong. */
export function lastLines(file: string, count = 12): string {
  try {
    return readFileSync(file, "utf8").trimEnd().split("\n").slice(-count).join("\n");
  } catch {
    return "";
  }
}

/** Environment for a child: ours, but nothing of what the test runner set for itself. */
export function childEnv(more: Record<string, string>): NodeJS.ProcessEnv {
  const env: NodeJS.ProcessEnv = { ...process.env, ...more, MENDBAY_PARENT: String(process.pid) };
  for (const name of Object.keys(env))
    if (/^(VITEST|NODE_OPTIONS|NODE_CHANNEL|npm_)/.test(name)) delete env[name];
  return env;
}

async function answers(probe: Probe, said: boolean): Promise<boolean> {
  if (probe === "message") return said;
  const answer = await fetch(probe.url, { signal: AbortSignal.timeout(5000) }).catch(() => undefined);
  await answer?.arrayBuffer().catch(() => undefined);
  return answer?.ok ?? false;
}

/** Starts a process, keeps it running, and stops it when asked. Its words go to a log file. */
export function startChild(options: ChildOptions): Child {
  mkdirSync(dirname(options.logFile), { recursive: true });
  const log = createWriteStream(options.logFile, { flags: "w" });
  let child: ChildProcess | undefined;
  let gone = Promise.resolve();
  let stopping = false;
  let said = false;
  let dead: string | undefined;
  const ends: number[] = [];

  const launch = () => {
    said = false;
    // Its own process group: Ctrl-C is for the parent, which ends everything in order.
    const now = spawn(process.execPath, ["--import", LEASH, ...options.args], {
      cwd: options.cwd,
      env: childEnv(options.env),
      detached: true,
      stdio: ["ignore", "pipe", "pipe", "ipc"],
    });
    child = now;
    now.stdout?.pipe(log, { end: false });
    now.stderr?.pipe(log, { end: false });
    now.on("message", () => (said = true));
    gone = new Promise((done) => {
      now.once("error", () => done());
      now.once("exit", (code, signal) => {
        done();
        if (stopping) return;
        const at = performance.now();
        ends.push(at);
        const often = ends.filter((end) => end > at - 60_000).length >= 3;
        if (!often) return void setTimeout(() => !stopping && launch(), 500);
        dead = `${options.name} ends again and again (${signal ?? code}). Its log: ${options.logFile}\n${lastLines(options.logFile)}`;
        options.failed(dead);
      });
    });
  };
  launch();

  return {
    name: options.name,
    pid: () => child?.pid,
    kill: (signal) => void child?.kill(signal),
    async ready() {
      const until = performance.now() + PATIENCE_MS;
      while (performance.now() < until) {
        if (dead) throw new Plain(dead);
        if (stopping) throw new Plain(`${options.name} was stopped before it was ready.`);
        if (child?.exitCode === null && (await answers(options.probe, said))) return;
        await pause(100);
      }
      throw new Plain(
        `${options.name} is not ready after ${PATIENCE_MS / 1000} s.\n${lastLines(options.logFile)}`,
      );
    },
    async stop() {
      stopping = true;
      if (child && child.exitCode === null && child.signalCode === null) {
        child.kill("SIGTERM");
        const timer = setTimeout(() => child?.kill("SIGKILL"), STOP_MS);
        await gone;
        clearTimeout(timer);
      }
      await new Promise<void>((done) => log.end(() => done()));
    },
  };
}

/** Runs a process to its end. @throws Plain with the end of its words when it fails. */
export async function runOnce(at: {
  name: string;
  args: string[];
  env: Record<string, string>;
  cwd: string;
  logFile: string;
  say?: (line: string) => void;
}): Promise<void> {
  mkdirSync(dirname(at.logFile), { recursive: true });
  const log = createWriteStream(at.logFile, { flags: "w" });
  const child = spawn(process.execPath, ["--import", LEASH, ...at.args], {
    cwd: at.cwd,
    env: childEnv(at.env),
    detached: true,
    stdio: ["ignore", "pipe", "pipe", "ipc"],
  });
  child.stdout?.pipe(log, { end: false });
  child.stderr?.pipe(log, { end: false });
  // A long step tells its share over the channel.
  child.on("message", (line) => typeof line === "string" && at.say?.(line));
  const code = await new Promise<number | string>((done, fail) => {
    child.once("error", fail);
    child.once("close", (exit, signal) => done(exit ?? signal ?? 1));
  });
  await new Promise<void>((done) => log.end(() => done()));
  if (code !== 0)
    throw new Plain(`${at.name} failed (${code}). Its log: ${at.logFile}\n${lastLines(at.logFile, 25)}`);
}
