import { createHash } from "node:crypto";
import { existsSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { runOnce } from "./child";

const FOLDERS = ["app", "components", "db", "emails", "fonts", "lib", "public"];
const FILES = [
  "instrumentation.ts",
  "next.config.ts",
  "package-lock.json",
  "postcss.config.mjs",
  "proxy.ts",
  "tsconfig.json",
];
/** Not part of what is served: a change there needs no new build. */
const OUTSIDE = ["lib/standins", "db/demo"];

function filesUnder(root: string, folder: string): string[] {
  if (OUTSIDE.includes(folder) || !existsSync(join(root, folder))) return [];
  return readdirSync(join(root, folder), { withFileTypes: true }).flatMap((entry) =>
    entry.isDirectory() ? filesUnder(root, `${folder}/${entry.name}`) : [`${folder}/${entry.name}`],
  );
}

/** One value for everything a build is made from. */
export function sourcesHash(root: string): string {
  const hash = createHash("sha256");
  const files = [
    ...FOLDERS.flatMap((f) => filesUnder(root, f)),
    ...FILES.filter((f) => existsSync(join(root, f))),
  ];
  for (const file of files.sort()) {
    const bytes = readFileSync(join(root, file));
    hash.update(`${file}\0${bytes.length}\0`).update(bytes);
  }
  return hash.digest("hex");
}

const markOf = (root: string) => join(root, ".next", "mendbay-sources");

/** True when what lies in `.next` was built from the sources as they are. */
export function isBuilt(root: string): boolean {
  if (!existsSync(join(root, ".next", "BUILD_ID")) || !existsSync(markOf(root))) return false;
  return readFileSync(markOf(root), "utf8") === sourcesHash(root);
}

/** Builds when the sources have changed since the last build. */
export async function ensureBuilt(root: string, logFile: string, say: (line: string) => void): Promise<void> {
  if (isBuilt(root)) return;
  say("Building the application …");
  rmSync(markOf(root), { force: true });
  const before = sourcesHash(root);
  await runOnce({
    name: "The build",
    args: ["node_modules/next/dist/bin/next", "build"],
    env: { NODE_ENV: "production", NEXT_TELEMETRY_DISABLED: "1" },
    cwd: root,
    logFile,
  });
  writeFileSync(markOf(root), before);
}
