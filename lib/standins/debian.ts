import { spawn } from "node:child_process";
import { accessSync, constants } from "node:fs";
import { delimiter, join } from "node:path";
import { Plain } from "./plain";

/** Full path of a program on PATH. */
export function onPath(program: string): string | undefined {
  for (const folder of (process.env.PATH ?? "").split(delimiter)) {
    const at = join(folder, program);
    try {
      accessSync(at, constants.X_OK);
      return at;
    } catch {
      // not here
    }
  }
  return undefined;
}

export const isRoot = (): boolean => process.getuid?.() === 0;

function run(command: string, args: string[]): Promise<{ code: number; words: string }> {
  return new Promise((done, fail) => {
    const child = spawn(command, args, {
      stdio: ["ignore", "pipe", "pipe"],
      env: { ...process.env, DEBIAN_FRONTEND: "noninteractive" },
    });
    let words = "";
    const keep = (chunk: Buffer) => (words = (words + chunk.toString()).slice(-4000));
    child.stdout.on("data", keep);
    child.stderr.on("data", keep);
    child.once("error", fail);
    child.once("exit", (code) => done({ code: code ?? 1, words }));
  });
}

/**
 * Installs Debian packages when we may; otherwise says the exact line that does it.
 * @throws Plain with that line
 */
export async function installPackages(packages: string[], say: (line: string) => void): Promise<void> {
  const line = `apt-get update && apt-get install -y ${packages.join(" ")}`;
  if (!onPath("apt-get")) throw new Plain(`Missing: ${packages.join(", ")}. Install it, then start again.`);
  if (!isRoot())
    throw new Plain(`Missing: ${packages.join(", ")}. Run this, then start again:\n  sudo sh -c '${line}'`);
  say(`Installing ${packages.join(", ")} from Debian …`);
  const update = await run("apt-get", ["update", "-q"]);
  const install = await run("apt-get", ["install", "-y", "-q", "--no-install-recommends", ...packages]);
  if (install.code !== 0) {
    const last = (update.code !== 0 ? update.words : install.words).trim().split("\n").slice(-3).join("\n  ");
    throw new Plain(
      `Could not install ${packages.join(", ")}. Run this yourself and see why:\n  ${line}\n  ${last}`,
    );
  }
}
