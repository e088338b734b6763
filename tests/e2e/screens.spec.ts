import { mkdirSync } from "node:fs";
import type { Page } from "@playwright/test";
import { enterAs, expect, expectNoAxe, test } from "./fixtures";

const OUT = "test-results/screens";

/** As it is read by axe in light and dark, without a sideways scroll at 320, and pictured at both widths. */
async function judge(page: Page, name: string): Promise<void> {
  await page.waitForLoadState("networkidle");
  await page.setViewportSize({ width: 1440, height: 900 });
  await expectNoAxe(page);
  mkdirSync(OUT, { recursive: true });
  for (const width of [1440, 390]) {
    await page.setViewportSize({ width, height: width === 390 ? 844 : 900 });
    for (const colorScheme of ["light", "dark"] as const) {
      await page.emulateMedia({ colorScheme });
      await page.screenshot({ path: `${OUT}/${name}-${width}-${colorScheme}.png`, fullPage: true });
    }
  }
  await page.emulateMedia({ colorScheme: null });
  await expectNoAxe(page);
  await page.setViewportSize({ width: 320, height: 640 });
  const over = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  );
  expect(over, `${name} scrolls sideways at 320`).toBeLessThanOrEqual(0);
  await page.setViewportSize({ width: 1440, height: 900 });
}

const hrefs = (page: Page, selector: string) =>
  page.locator(selector).evaluateAll((all) => all.map((a) => a.getAttribute("href")!));

test.describe("every screen can be used by everybody", () => {
  test.describe.configure({ timeout: 240_000 });

  test("at the door", async ({ page }) => {
    for (const [path, name] of [
      ["/sign-in", "sign-in"],
      ["/sign-in?error=Verification", "sign-in-error"],
      ["/sign-in/sent?email=a%40b.example", "sent"],
      ["/sign-in/confirm?email=a%40b.example&token=AAAAABBBBB", "confirm"],
      ["/sign-in/confirm", "confirm-cut"],
      ["/door", "door"],
    ] as const) {
      await page.goto(path);
      await judge(page, name);
    }
  });

  test("on the desk", async ({ page }) => {
    await enterAs(page, "noor@ostwick.example");
    await page.goto("/desk");
    await judge(page, "desk");
    await page.goto("/desk?q=no-such-thing-at-all");
    await judge(page, "desk-empty");
    await page.goto("/desk/find?q=OW4420-7K3OX");
    await judge(page, "found-none");
    await page.goto("/desk/find?q=VS-19F4");
    await judge(page, "found-many");
    await page.goto("/held");
    await judge(page, "held");
    await page.goto("/desk/find?q=OW4420-7K3QX");
    await expect(page).toHaveURL(/\/desk\/\d+/);
    await judge(page, "ticket");
    await page.getByRole("button", { name: "Decide again" }).click();
    await judge(page, "ticket-decide");
    await page.getByRole("link", { name: "What if a fact were other?" }).last().click();
    await page.getByLabel("Claim day").fill("2199-01-01");
    await page.getByRole("button", { name: "Try these facts" }).click();
    await expect(page.getByRole("region", { name: "With these facts" })).toBeVisible();
    await judge(page, "what-if");
    await page.goto("/goodwill");
    await judge(page, "goodwill-own");
    await page.goto("/desk");
    const proposed = await hrefs(page, '.q-row:has-text("unit proposed") a.fault');
    await page.goto(proposed[0]!);
    await judge(page, "ticket-proposed");
    await page.getByRole("button", { name: "Ask for evidence" }).click();
    await judge(page, "ticket-ask");
  });

  test("in the ledger and among the terms", async ({ page }) => {
    await enterAs(page, "tobias@ostwick.example");
    for (const [path, name] of [
      ["/ledger", "ledger"],
      ["/ledger?q=zzzzzz", "ledger-empty"],
      ["/ledger/OW4420-7K3QX", "unit"],
      ["/ledger/import", "import"],
      ["/ledger/import?error=none", "import-error"],
      ["/terms", "terms"],
      ["/terms/notices", "notices"],
      ["/terms/calendar", "calendar"],
      ["/terms/new", "terms-new"],
      ["/ledger/check", "check"],
      ["/goodwill?state=declined&month=2001-01", "goodwill-none"],
    ] as const) {
      await page.goto(path);
      await judge(page, name);
    }
    await page.goto("/terms/calendar");
    await page.getByLabel("Holidays, one a line").fill("2026-12-25, Christmas Day\nthe day after");
    await page.getByRole("button", { name: "Set these holidays" }).click();
    await expect(page.getByRole("heading", { name: "No holiday was changed" })).toBeVisible();
    await expect(page.getByLabel("Holidays, one a line")).toHaveValue(/the day after/);
    await judge(page, "calendar-error");
    await page.goto("/terms/notices");
    await page.getByLabel("Title").fill("Whatever the terms say");
    await page
      .getByLabel("In two to four plain sentences")
      .fill("Beyond these terms you have no rights at all.");
    await page.getByRole("button", { name: "Keep this notice" }).click();
    await expect(page.getByText(/takes away what the law may give/).first()).toBeVisible();
    await judge(page, "notices-error");
    await page.goto("/ledger/check");
    await page.getByLabel("Serials").fill("OW4420-7K3QX\nOW4420-7K3OX\nhello world\nOW4420-7K3QX");
    await page.getByRole("button", { name: "Check them" }).click();
    await expect(page.getByRole("table", { name: "The lines checked" })).toBeVisible();
    await judge(page, "check-done");
    await page.goto("/ledger/import");
    await page.goto((await hrefs(page, '.plist a[href^="/ledger/import/"]'))[0]!);
    await judge(page, "import-done");
    await page.goto("/ledger/import");
    await page.getByLabel("Shipments as CSV").setInputFiles({
      name: "wrong.csv",
      mimeType: "text/csv",
      buffer: Buffer.from(
        "order,account code,account name,buyer kind,country,serial,model,kind,family,condition,ship date,terms\nO1,A,A,business,GB,OW2210-AAAAA,OW-2210,system,system,new,31.12.2025,OW-STD\nO1,A,A,maybe,GBR,12E45,OW-2210,thing,box,old,2025-01-01,NONE\n",
      ),
    });
    await page.getByRole("button", { name: "Read it" }).click();
    await expect(page.getByText("0 of 2 rows can be added.")).toBeVisible();
    await judge(page, "import-problems");
    await page.goto("/terms");
    await page.goto((await hrefs(page, ".termslist a"))[0]!);
    await judge(page, "terms-version");
    await page.goto("/terms");
    await page
      .locator("section", { has: page.getByRole("heading", { name: "Standard terms" }) })
      .getByRole("button", { name: "Draft the next issue" })
      .click();
    await expect(page.getByRole("heading", { level: 1, name: /draft of issue/ })).toBeVisible();
    await judge(page, "terms-draft");
    await page.getByRole("link", { name: "Change clause 3.3" }).click();
    await page.getByLabel("Period", { exact: true }).fill("P1.5M");
    await page.getByRole("button", { name: /Keep this clause/ }).click();
    await expect(page.locator("#f-period-error")).toBeVisible();
    await judge(page, "terms-clause-error");
    await page.goto(page.url().replace(/[?#].*$/, ""));
    await page.getByText("Throw this draft away").click();
    await page.getByRole("button", { name: "Throw it away" }).click();
    await page.waitForURL(/\/terms$/);
  });

  test("at dock and bench", async ({ page }) => {
    await enterAs(page, "piotr@ostwick.example");
    await page.goto("/dock");
    await judge(page, "dock");
    const it = page.locator(".exp .it").first();
    const [rma, serial] = [
      (await it.locator(".d .m").textContent())!.trim(),
      (await it.locator(".tag").textContent())!.trim(),
    ];
    const scan = async (text: string) => {
      await page.locator("#scan").fill(text);
      await page.keyboard.press("Enter");
    };
    await scan(rma);
    await expect(page.getByText(`${rma}: now scan the serial`)).toBeVisible();
    await judge(page, "dock-rma");
    await scan(`${serial.slice(0, -1)}8`);
    await expect(page.getByRole("heading", { name: /^Stop\./ })).toBeVisible();
    await judge(page, "dock-stop");
    await page.getByRole("button", { name: "Scan the label again" }).click();
    await scan(serial);
    await expect(page.getByText("Right unit. Take it in.")).toBeVisible();
    await judge(page, "dock-right");
    await page.getByRole("button", { name: "Next parcel" }).click();
    await scan("NO-SUCH-SERIAL-1");
    await expect(page.getByText("No RMA for NO-SUCH-SERIAL-1.")).toBeVisible();
    await judge(page, "dock-unknown");
    await page.goto("/bench");
    await judge(page, "bench");
    await page.goto((await hrefs(page, ".benchrow")).at(-1)!);
    await judge(page, "bench-out");
    await page.goto("/bench");
    await page.goto((await hrefs(page, 'section[aria-label="To test"] .benchrow:has-text("not begun")'))[0]!);
    await judge(page, "bench-in");
    await page.getByLabel("Scan the unit in").fill((await page.locator(".tag.big").textContent())!.trim());
    await page.getByRole("button", { name: "Begin the test" }).click();
    await expect(page.locator(".steps")).toBeVisible();
    await judge(page, "bench-test");
  });

  test("among the failure rates", async ({ page }) => {
    await enterAs(page, "anneke@ostwick.example");
    await page.goto("/goodwill");
    await judge(page, "goodwill");
    await page.goto("/rates");
    await judge(page, "rates");
    await page.goto("/rates?by=model");
    await judge(page, "rates-model");
  });

  test("in the portal", async ({ page }) => {
    await enterAs(page, "ifeoma@bramblegate.example");
    for (const [path, name] of [
      ["/equipment", "equipment"],
      ["/equipment?q=zzzz", "equipment-empty"],
      ["/equipment/OW4420-7K3QX", "equipment-unit"],
      ["/cases", "cases"],
      ["/equipment/check", "portal-check"],
    ] as const) {
      await page.goto(path);
      await judge(page, name);
    }
    await page.goto("/equipment/check");
    await page.getByLabel("Serials").fill("OW4420-7K3QX\nOW2210-NOPE1");
    await page.getByRole("button", { name: "Check them" }).click();
    await expect(page.getByRole("table", { name: "The lines checked" })).toBeVisible();
    await judge(page, "portal-check-done");
    await page.goto("/cases");
    const cases = await hrefs(page, 'a[href^="/cases/"]');
    await page.goto(cases[0]!);
    await judge(page, "case");
    const seen = new Set<string>();
    for (const at of cases) {
      const answer = await page.request.get(`${at}/decision`);
      if (answer.status() !== 200) continue;
      const kind = /You are covered|A person is looking|not covered under our warranty/.exec(
        await answer.text(),
      )?.[0];
      if (!kind || seen.has(kind)) continue;
      seen.add(kind);
      await page.goto(`${at}/decision`);
      await judge(page, `decision-${seen.size}`);
    }
    expect(seen.size, "kinds of letters seen").toBeGreaterThanOrEqual(2);
    await page.goto("/cases");
    await page.goto((await hrefs(page, 'a[href^="/rma/"]'))[0]!);
    await judge(page, "rma");
    await page.goto("/equipment");
    await page.getByRole("button", { name: "Report a fault", exact: true }).click();
    await page.waitForURL(/\/report\/.+\/1$/);
    await judge(page, "report-1");
    await page.getByRole("button", { name: "Next question" }).click();
    await expect(page.locator(".esum")).toBeFocused();
    await judge(page, "report-1-error");
    await page.locator('input[name="unitId"]').first().check();
    await page.getByRole("button", { name: "Next question" }).click();
    await page.waitForURL(/\/2$/);
    await judge(page, "report-2");
    await page.getByLabel("Drive bay 1").check();
    await page.getByRole("button", { name: "Next question" }).click();
    await page.waitForURL(/\/3$/);
    await judge(page, "report-3");
    await page.getByLabel("A drive has failed or drops out").check();
    await page.getByRole("button", { name: "Next question" }).click();
    await page.waitForURL(/\/4$/);
    await judge(page, "report-4");
    await page.getByLabel("What happens, and when").fill("Gone since Monday.");
    await page.getByRole("button", { name: "Next question" }).click();
    await page.waitForURL(/\/5$/);
    await judge(page, "report-5");
    await page.getByRole("button", { name: "Next question" }).click();
    await page.waitForURL(/\/6$/);
    await judge(page, "report-6");
    await page.getByLabel("No battery in it").check();
    await page.getByRole("button", { name: "Next question" }).click();
    await page.waitForURL(/\/7$/);
    await judge(page, "report-7");
    await page.getByRole("button", { name: "Send the report" }).click();
    await page.waitForURL(/\/decision$/);
    await judge(page, "decision-new");
    if (await page.getByRole("link", { name: "Choose how we make it good" }).isVisible()) {
      await page.getByRole("link", { name: "Choose how we make it good" }).click();
      await judge(page, "remedy");
    }
  });
});
