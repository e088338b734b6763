import type { Page } from "@playwright/test";
import { enterAs, expect, test } from "./fixtures";
import { photo } from "./story.data";

const hrefs = (page: Page, selector: string) =>
  page.locator(selector).evaluateAll((all) => all.map((a) => a.getAttribute("href")!));

test.describe("bad input is told in words, and nothing is lost", () => {
  test("files that are not what they say are refused, and the good one beside them stays", async ({
    page,
  }) => {
    await enterAs(page, "dana@lowmere.example");
    await page.goto("/equipment");
    await page
      .getByRole("button", { name: /^Report a fault of/ })
      .first()
      .click();
    await page.waitForURL(/\/2$/);
    await page.goto(page.url().replace(/2$/, "5"));
    const zip = Buffer.concat([Buffer.from("PK\u0003\u0004"), Buffer.alloc(400, 7)]);
    const program = Buffer.concat([
      Buffer.from("MZ"),
      Buffer.alloc(200),
      Buffer.from("PE\u0000\u0000"),
      Buffer.alloc(600),
    ]);
    await page.getByLabel(/Take or choose photos/).setInputFiles([
      { name: "empty.jpg", mimeType: "image/jpeg", buffer: Buffer.alloc(0) },
      { name: "logs.zip", mimeType: "application/zip", buffer: zip },
      { name: "holiday.jpg", mimeType: "image/jpeg", buffer: program },
      {
        name: "drawing.txt",
        mimeType: "text/plain",
        buffer: Buffer.from('<svg xmlns="http://www.w3.org/2000/svg"><script>1</script></svg>'),
      },
      { name: "good.jpg", mimeType: "image/jpeg", buffer: await photo("good") },
    ]);
    await expect(page.getByText("It is empty. Choose it again.")).toBeVisible();
    const kept = page.locator(".ups .up", { hasText: "Sent and looked at." });
    await expect(kept).toHaveCount(1, { timeout: 60_000 });
    await expect(kept).toContainText("good.jpg");
    for (const name of ["holiday.jpg", "drawing.txt"])
      await expect(page.locator(".up .st.bad").locator("..").filter({ hasText: name })).toBeVisible();
  });

  test("a serial with blanks and small letters is found; one with a zero for an O is suggested, never taken", async ({
    page,
  }) => {
    await enterAs(page, "noor@ostwick.example");
    await page.goto("/desk/find?q=ow4420%207k3qx");
    await expect(page).toHaveURL(/\/(desk\/\d+|ledger\/OW4420-7K3QX)$/);
    await page.goto("/desk/find?q=0W4420-7K3QX");
    await expect(page.getByRole("heading", { name: "Nothing answers to it." })).toBeVisible();
    await expect(page.getByLabel(/^the digit zero, the letter W/)).toBeVisible();
    await expect(page.getByRole("link", { name: "OW4420-7K3QX" })).toBeVisible();
  });

  test("a fault is reported to the end without JavaScript, and Back keeps the answers", async ({
    browser,
    baseURL,
  }) => {
    const context = await browser.newContext({ javaScriptEnabled: false, baseURL: baseURL! });
    const page = await context.newPage();
    await enterAs(page, "sam@pinnock.example");
    await page.goto("/equipment");
    await page
      .getByRole("button", { name: /^Report a fault of/ })
      .first()
      .click();
    await page.getByLabel("The whole unit, or I do not know").check();
    await page.getByRole("button", { name: "Next question" }).click();
    await page.getByRole("button", { name: "Next question" }).click();
    await expect(page.locator(".err", { hasText: "Choose what comes closest." })).toBeVisible();
    await page.getByLabel("It restarts by itself").check();
    await page.getByRole("button", { name: "Next question" }).click();
    await page.getByLabel("What happens, and when").fill("Every night at two.");
    await page.getByRole("button", { name: "Next question" }).click();
    await page.getByRole("link", { name: "Back", exact: true }).click();
    await expect(page.getByLabel("What happens, and when")).toHaveValue("Every night at two.");
    await page.getByRole("button", { name: "Next question" }).click();
    await page.getByRole("button", { name: "Next question" }).click();
    await page.getByLabel("A battery inside, and it looks as it should").check();
    await page.getByRole("button", { name: "Next question" }).click();
    await page.getByRole("button", { name: "Send the report" }).click();
    await expect(page).toHaveURL(/\/cases\/\d+\/decision$/);
    await expect(page.getByRole("heading", { level: 1 })).toBeVisible();
    await context.close();
  });

  test("what is another customer's is not found, like what does not exist", async ({ browser, baseURL }) => {
    const theirs = await browser.newContext({ baseURL: baseURL! });
    const own = await theirs.newPage();
    await enterAs(own, "ifeoma@bramblegate.example");
    await own.goto("/cases");
    const paths = [
      "/equipment/OW4420-7K3QX",
      (await hrefs(own, 'a[href^="/cases/"]'))[0]!,
      `${(await hrefs(own, 'a[href^="/cases/"]'))[0]!}/decision`,
      (await hrefs(own, 'a[href^="/rma/"]'))[0]!,
      "/api/v1/units/OW4420-7K3QX",
      "/api/v1/units/OW4420-7K3QX/cover",
    ];
    for (const path of paths)
      expect((await own.request.get(path)).status(), `${path} is their own`).toBe(200);
    await theirs.close();
    const context = await browser.newContext({ baseURL: baseURL! });
    const page = await context.newPage();
    await enterAs(page, "sam@pinnock.example");
    for (const path of [
      ...paths,
      "/equipment/NO-SUCH-UNIT",
      "/cases/1",
      "/rma/RMA-1-1",
      "/desk",
      "/dock",
      "/rates",
      "/ledger",
      "/api/v1/tickets",
    ]) {
      const answer = await page.request.get(path);
      const body = await answer.text();
      expect(body, path).not.toContain("Bramblegate");
      expect(answer.status() === 404 || /not here|not found/i.test(body), `${path} is not found`).toBe(true);
    }
    await context.close();
  });
});
