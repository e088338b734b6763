import { defineConfig } from "@playwright/test";

export default defineConfig({
  testDir: "tests/e2e",
  testMatch: "**/*.spec.ts",
  outputDir: "test-results",
  globalSetup: "./tests/e2e/global.ts",
  // One browser: the application, its worker and the stand-ins share the machine with it.
  workers: 1,
  timeout: 180_000,
  expect: { timeout: 15_000 },
  forbidOnly: true,
  use: {
    actionTimeout: 20_000,
    screenshot: "only-on-failure",
    locale: "en-US",
    timezoneId: "Europe/London",
    launchOptions: {
      executablePath: process.env.MENDBAY_CHROMIUM ?? "/usr/bin/chromium",
      args: [
        "--no-sandbox",
        "--disable-gpu",
        "--disable-background-networking",
        "--disable-component-update",
        "--disable-sync",
      ],
    },
  },
});
