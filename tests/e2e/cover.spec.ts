import { enterAs, expect, test } from "./fixtures";

/** Terms and decisions in a real browser: the editor with its preview, what if, and goodwill. */
test.describe("terms and decisions", () => {
  test.describe.configure({ mode: "serial", timeout: 180_000 });

  test("an admin drafts the next issue: bad periods are refused at the field, the change is compared and counted, and published for good", async ({
    page,
  }) => {
    await enterAs(page, "tobias@ostwick.example");
    await page.goto("/terms");
    await page
      .locator("section, li, div", { has: page.getByRole("heading", { name: "Refurbished terms" }) })
      .last()
      .getByRole("button", { name: "Draft the next issue" })
      .click();
    await expect(page.getByRole("heading", { level: 1, name: /draft of issue 2/ })).toBeVisible();

    await page.getByRole("link", { name: "Change clause 3.3" }).click();
    const period = page.getByLabel("Period", { exact: true });
    for (const [text, why] of [
      ["P0D", "A period must be longer than nothing."],
      ["P1.5M", "A period has whole parts only: write P45D, not P1.5M."],
      ["P-3M", "A period cannot be negative."],
    ] as const) {
      await period.fill(text);
      await page.getByRole("button", { name: /Keep this clause/ }).click();
      await expect(page.locator("#f-period-error")).toHaveText(why);
      await expect(period).toHaveValue(text);
    }
    await period.fill("P3M");
    await page.getByRole("button", { name: /Keep this clause/ }).click();
    await page.waitForURL((url) => !url.searchParams.has("clause"));
    await expect(page.getByRole("link", { name: "Change clause 3.3" })).toBeVisible();
    // Compared with the last issue, field by field.
    await expect(page.getByText(/6 months \(P6M\)/).first()).toBeVisible();
    await expect(page.getByText(/3 months \(P3M\)/).first()).toBeVisible();

    await page.getByRole("button", { name: "Count what it would do" }).click();
    await expect(page.getByText(/would be covered for a shorter time/).first()).toBeVisible({
      timeout: 120_000,
    });
    await expect(
      page
        .getByRole("region", { name: /^Units/ })
        .locator("tbody tr")
        .first(),
    ).toBeVisible();

    await page.getByRole("link", { name: /^Publish issue 2/ }).click();
    await expect(page.getByText("It can never be changed or taken back.")).toBeVisible();
    await page.getByRole("button", { name: "Publish issue 2" }).click();
    await expect(page.getByText(/it never changes/)).toBeVisible();
    await expect(page.getByRole("link", { name: /^Change clause/ })).toHaveCount(0);
  });

  test("goodwill is asked by an agent, granted by a manager, and lets the agent authorize just that", async ({
    browser,
    page,
  }) => {
    await enterAs(page, "noor@ostwick.example");
    // A ticket whose decision was no, and that nobody asked for yet.
    const list = (await (await page.request.get("/api/v1/tickets?on=all")).json()) as {
      groups: { rows: { number: number; rmaNumber: string | null; serial: string | null }[] }[];
    };
    let ticket: string | null = null;
    for (const row of list.groups.flatMap((g) => g.rows).filter((r) => r.serial && !r.rmaNumber)) {
      await page.goto(`/desk/${row.number}`);
      await expect(page.getByRole("heading", { name: "Record" })).toBeVisible();
      if ((await page.getByRole("link", { name: "Ask for goodwill" }).count()) === 0) continue;
      if ((await page.getByText(/^Not covered:/).count()) === 0) continue;
      ticket = `/desk/${row.number}`;
      break;
    }
    expect(ticket, "a ticket of the demo whose decision was no").not.toBeNull();
    await page.getByRole("link", { name: "Ask for goodwill" }).click();
    await page.getByLabel("The remedy you wish for").selectOption("repair");
    await page.getByLabel(/^Why/).fill("Too short");
    await page.getByRole("button", { name: "Ask a manager" }).click();
    await expect(page.locator("#f-reason-error")).toBeVisible();
    await page.getByLabel(/^Why/).fill("They keep forty of ours and the drive failed three weeks late.");
    await page.getByRole("button", { name: "Ask a manager" }).click();
    await expect(page.getByRole("status").filter({ hasText: "Kept" })).toBeVisible();

    const manager = await (await browser.newContext({ baseURL: new URL(page.url()).origin })).newPage();
    await enterAs(manager, "anneke@ostwick.example");
    await manager.goto("/goodwill");
    const form = manager
      .locator("li, article, section", { hasText: "They keep forty of ours" })
      .last()
      .locator("form");
    await form.getByRole("button", { name: "Grant it" }).click();
    await expect(manager.getByText("It is not answered yet")).toBeVisible();
    await form.getByLabel(/May cost us at most/).fill("150");
    await form.getByRole("button", { name: "Grant it" }).click();
    await expect(manager.locator("form", { hasText: "They keep forty of ours" })).toHaveCount(0);
    await manager.context().close();

    await page.goto(ticket!);
    await expect(page.getByText(/grants goodwill for/)).toBeVisible();
    await page.getByRole("button", { name: "Authorize an RMA" }).click();
    await page.getByRole("button", { name: "Authorize and mail the traveler" }).click();
    await expect(page.getByText(/RMA-\d+-[0-9A-Z] authorized/).first()).toBeVisible();
    await expect(page.getByText(/by goodwill/).first()).toBeVisible();
  });

  test("a fact tried moves the decision beside it, and nothing is kept", async ({ page }) => {
    await enterAs(page, "noor@ostwick.example");
    await page.goto("/desk/find?q=OW4420-7K3QX");
    await expect(page).toHaveURL(/\/desk\/\d+/);
    await expect(page.getByRole("heading", { name: "Record" })).toBeVisible();
    const entries = await page.locator(".entry").count();
    await page.getByRole("link", { name: "What if a fact were other?" }).last().click();
    await page.getByLabel("Claim day").fill("2199-01-01");
    await page.getByRole("button", { name: "Try these facts" }).click();
    const then = page.getByRole("region", { name: "With these facts" });
    await expect(then.getByText(/^Not covered:/)).toBeVisible();
    await expect(then.getByText(/now 1 January 2199/)).toBeVisible();
    await expect(page.getByRole("region", { name: "As it stands" }).getByText(/^Not covered:/)).toHaveCount(
      0,
    );
    await page.getByLabel("Period", { exact: true }).fill("P0D");
    await page.getByRole("button", { name: "Try these facts" }).click();
    await expect(page.locator("#f-period-error")).toHaveText("A period must be longer than nothing.");
    await page.goBack();
    await page.getByRole("link", { name: /^ticket \d+/ }).click();
    await expect(page.locator(".entry")).toHaveCount(entries);
  });
});

test.describe("many serials at once", () => {
  test.describe.configure({ timeout: 180_000 });

  test("each line is answered, the bad ones hold up nothing, the CSV has all, and a customer reports several together", async ({
    page,
  }) => {
    await enterAs(page, "ifeoma@bramblegate.example");
    await page.goto("/equipment");
    await expect(page.getByRole("heading", { name: "Your equipment" })).toBeVisible();
    const hrefs = await page
      .locator('a[href^="/equipment/"]')
      .evaluateAll((all) => all.map((a) => decodeURIComponent(a.getAttribute("href")!.split("/")[2]!)));
    // Not the demo's own unit, by whose one ticket other tests find it.
    const own = [...new Set(hrefs.filter((h) => h !== "check" && h !== "OW4420-7K3QX"))].slice(0, 4);
    await page.getByRole("link", { name: "Check many serials at once" }).click();
    await page
      .getByLabel("Serials")
      .fill(
        [
          "serial number",
          ...own,
          "=HYPERLINK(1)",
          "hello world",
          own[0]!.toLowerCase().replaceAll("-", " "),
        ].join("\n"),
      );
    await page.getByRole("button", { name: "Check them" }).click();
    const table = page.getByRole("table", { name: "The lines checked" });
    await expect(table.getByRole("row")).toHaveCount(1 + own.length + 3);
    await expect(table.getByText("named in line 2 already")).toBeVisible();
    await expect(page.getByRole("heading", { level: 2, name: /of seven (is|are) covered on/ })).toBeVisible();

    // The same form as a file: every line once, formulas harmless.
    const coming = page.waitForEvent("download");
    await page.getByRole("button", { name: "Download as CSV" }).click();
    const file = await coming;
    expect(file.suggestedFilename()).toMatch(/^cover-\d{4}-\d\d-\d\d\.csv$/);
    const csv = await (await import("node:fs/promises")).readFile((await file.path())!, "utf8");
    expect(csv.split("\r\n").filter(Boolean)).toHaveLength(1 + own.length + 3);
    expect(csv).toContain("'=HYPERLINK(1)");

    // A filter is a part of the list; what was chosen stays chosen behind it.
    const box = table.getByRole("checkbox").first();
    await box.check();
    const two = table.getByRole("checkbox").nth(1);
    await two.check();
    await page.getByRole("button", { name: /not found$/ }).click();
    await expect(table.getByRole("checkbox")).toHaveCount(0);
    await page.getByRole("button", { name: /^all / }).click();
    await expect(box).toBeChecked();

    await page.getByRole("button", { name: "Report the fault" }).click();
    await expect(page.getByRole("heading", { name: "Nothing was reported yet" })).toBeVisible();
    await page.getByLabel("What do they do?").selectOption("restarts");
    await page.getByLabel("In your words").fill("They restart by themselves about once a day.");
    await page.getByLabel(/^One is swollen/).check();
    await page.getByLabel(/^I clear it/).check();
    await page.getByRole("button", { name: "Report the fault" }).click();
    await expect(page.getByText(/must not be shipped/).first()).toBeVisible();
    await expect(page.getByLabel("In your words")).toHaveValue(
      "They restart by themselves about once a day.",
    );
    await page.getByLabel(/^Batteries inside/).check();
    await page.getByRole("button", { name: "Report the fault" }).click();
    await page.waitForURL(/\/cases\/\d+/);
    await expect(page.getByText("They restart by themselves about once a day.").first()).toBeVisible();

    // One remedy for those whose clauses give the same; what is left over can be chosen next.
    await page.getByRole("link", { name: "Read the coverage decision" }).click();
    await expect(
      page.getByRole("navigation", { name: "Units of this case" }).getByRole("listitem"),
    ).toHaveCount(2);
    await page.getByRole("link", { name: "Choose how we make it good" }).click();
    await expect(page.getByRole("heading", { name: /^How shall we make (it|them) good/ })).toBeVisible();
    const chosen = (await page.getByRole("checkbox").count()) || 1;
    await page.getByRole("button", { name: "Get the RMA" }).click();
    await page.waitForURL(/\/rma\/RMA-/);
    await expect(page.locator(".prow").first().locator(".tag")).toHaveCount(chosen);
    if (chosen === 1) {
      await page.goBack();
      await expect(page.getByRole("heading", { name: "How shall we make it good?" })).toBeVisible();
    }
  });

  test("works without JavaScript", async ({ browser, baseURL }) => {
    const context = await browser.newContext({ baseURL, javaScriptEnabled: false });
    const page = await context.newPage();
    await enterAs(page, "ifeoma@bramblegate.example");
    await page.goto("/equipment/check");
    await page.getByLabel("Serials").fill("OW4420-7K3QX\nnot one");
    await page.getByRole("button", { name: "Check them" }).click();
    await expect(page.getByRole("table", { name: "The lines checked" }).getByRole("row")).toHaveCount(3);
    await context.close();
  });
});
