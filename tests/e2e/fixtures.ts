import AxeBuilder from "@axe-core/playwright";
import { test as base, expect, type Page } from "@playwright/test";

/** Where the running system is; see global.ts. */
export type Running = {
  url: string;
  mailUrl: string;
  uploadUrl: string;
  databaseUrl: string;
  receiver: { host: string; port: number };
  dataDir: string;
};

type Fixtures = {
  running: Running;
  /** Console errors that a test provokes itself. A policy violation is never among them. */
  allowConsole: RegExp[];
  quiet: void;
};

const POLICY =
  /Content Security Policy|Content-Security-Policy|Refused to (load|execute|apply|connect|frame)/i;

/** Every test fails on a console error, an uncaught throw or a policy violation in any of its pages. */
export const test = base.extend<Fixtures>({
  running: async ({}, give) => {
    const found = process.env.MENDBAY_E2E;
    if (!found) throw new Error("The system does not run: start the tests by playwright's global setup.");
    await give(JSON.parse(found) as Running);
  },
  baseURL: async ({ running }, give) => {
    await give(running.url);
  },
  allowConsole: [[], { option: true }],
  quiet: [
    async ({ context, allowConsole }, give) => {
      const heard: string[] = [];
      context.on("console", (message) => {
        if (message.type() === "error" || POLICY.test(message.text()))
          heard.push(`${message.text()} (${message.location().url})`);
      });
      context.on("weberror", (thrown) => heard.push(String(thrown.error())));
      await give();
      const loud = heard.filter(
        (text) => POLICY.test(text) || !allowConsole.some((known) => known.test(text)),
      );
      expect(loud, "console errors").toEqual([]);
    },
    { auto: true },
  ],
});

export { expect };

/** WCAG 2.2 A and AA by axe, in light and dark: no violation on the page as it is now. */
export async function expectNoAxe(page: Page): Promise<void> {
  for (const colorScheme of ["light", "dark"] as const) {
    await page.emulateMedia({ colorScheme });
    const found = await new AxeBuilder({ page })
      .withTags(["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"])
      .analyze();
    const told = found.violations.map((v) => ({
      rule: v.id,
      help: v.help,
      at: v.nodes
        .slice(0, 5)
        .map((n) => `${n.target.join(" ")}: ${n.failureSummary?.split("\n")[1]?.trim() ?? ""}`),
    }));
    expect(told, `axe on ${new URL(page.url()).pathname}, ${colorScheme}`).toEqual([]);
  }
  await page.emulateMedia({ colorScheme: null });
}

/** Enters through the demo's door as the person with this address. */
export async function enterAs(page: Page, email: string): Promise<void> {
  await page.goto("/door");
  await page.locator(`form:has(input[name="email"][value="${email}"])`).getByRole("button").click();
  await page.waitForURL((url) => !/^\/(door|enter|api)/.test(url.pathname));
}
