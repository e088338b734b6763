import { defineConfig } from "vitest/config";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL(".", import.meta.url));
const alias = {
  "@": root.replace(/\/$/, ""),
  "server-only": `${root}node_modules/server-only/empty.js`,
};

export default defineConfig({
  resolve: { alias },
  oxc: { jsx: { runtime: "automatic" } },
  test: {
    reporters: ["default"],
    // Read when the logger is made, so before any test file could set it.
    env: { MENDBAY_LOG: "silent" },
    projects: [
      {
        resolve: { alias },
        test: { name: "core", include: ["tests/core/**/*.test.ts?(x)"], environment: "node" },
      },
      {
        resolve: { alias },
        test: {
          name: "shell",
          include: ["tests/shell/**/*.test.ts?(x)"],
          environment: "node",
          globalSetup: ["tests/shell/global.ts"],
          fileParallelism: true,
          maxWorkers: 2,
          testTimeout: 60_000,
          hookTimeout: 120_000,
        },
      },
    ],
  },
});
