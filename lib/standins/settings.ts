import { createHash, randomBytes } from "node:crypto";
import { existsSync, mkdirSync, readFileSync, statfsSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { isRoot } from "./debian";
import { Plain } from "./plain";

/** Secrets of this installation, made once and kept. */
export type Settings = { secret: string; uploadKey: string; uploadApp: string };

export function keptSettings(dataDir: string): Settings {
  const file = join(dataDir, "settings.json");
  if (!existsSync(file)) {
    const made: Settings = {
      secret: randomBytes(36).toString("base64url"),
      uploadKey: `sk_local_${randomBytes(24).toString("hex")}`,
      uploadApp: `local${randomBytes(4).toString("hex")}`,
    };
    writeFileSync(file, JSON.stringify(made, null, 2), { mode: 0o600, flag: "wx" });
    return made;
  }
  try {
    return JSON.parse(readFileSync(file, "utf8")) as Settings;
  } catch {
    throw new Plain(`${file} is damaged. Mend it, or begin anew with: npm run demo:reset`);
  }
}

/**
 * Where the cluster lies. Root's cluster belongs to another user, who must be able to reach it
 * through every folder above: so not inside the checkout.
 */
export function clusterHome(dataDir: string): string {
  if (!isRoot()) return join(dataDir, "postgres");
  return join("/var/lib/mendbay", createHash("sha256").update(dataDir).digest("hex").slice(0, 12));
}

/** Makes the data folder. @throws Plain when there is no room to work in. */
export function prepareFolder(dataDir: string, needMb = 400): void {
  mkdirSync(dataDir, { recursive: true, mode: 0o700 });
  const disk = statfsSync(dataDir);
  const freeMb = Math.floor((disk.bavail * disk.bsize) / 1_048_576);
  if (freeMb < needMb)
    throw new Plain(
      `Only ${freeMb} MB are free at ${dataDir}; ${needMb} MB are needed. Free some space first.`,
    );
}

/** One start per data folder: two would fight over the same cluster. */
export function takeFolder(dataDir: string): void {
  const file = join(dataDir, "running.pid");
  const held = existsSync(file) ? Number(readFileSync(file, "utf8")) : 0;
  if (held && held !== process.pid && runsHere(held))
    throw new Plain(
      `Mendbay runs here already (process ${held}). Stop that one first, with Ctrl-C in its window.`,
    );
  writeFileSync(file, String(process.pid));
}

function runsHere(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return readFileSync(`/proc/${pid}/cmdline`, "utf8").includes("node");
  } catch {
    return false;
  }
}

/** The outside services a person has named. All or none: a stand-in never runs beside a real one. */
export function realServices(env: NodeJS.ProcessEnv): boolean {
  const names = ["DATABASE_URL", "SMTP_URL", "UPLOADTHING_TOKEN"] as const;
  const missing = names.filter((name) => !env[name]);
  if (missing.length === names.length) return false;
  const needed = [...missing, ...(env.MENDBAY_URL ? [] : ["MENDBAY_URL"])];
  if (needed.length > 0)
    throw new Plain(
      `Real services are named, so stand-ins stay off and these must be set too: ${needed.join(", ")}. ` +
        "Unset all of them to run with stand-ins.",
    );
  if (env.MENDBAY_DEMO === "1")
    throw new Plain("The demo door does not open beside real services: unset MENDBAY_DEMO.");
  return true;
}
