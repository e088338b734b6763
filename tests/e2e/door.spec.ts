import { expect, expectNoAxe, test } from "./fixtures";

test("the sign-in page can be used by everybody", async ({ page }) => {
  await page.goto("/sign-in");
  await expect(page.getByRole("heading", { level: 1 })).toBeVisible();
  await expectNoAxe(page);
  // Small screens: nothing is reached by scrolling sideways.
  await page.setViewportSize({ width: 320, height: 640 });
  const over = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  );
  expect(over).toBeLessThanOrEqual(0);
});

test("the demo's door can be used by everybody", async ({ page }) => {
  await page.goto("/door");
  await expect(page.getByRole("heading", { level: 1 })).toBeVisible();
  await expectNoAxe(page);
});

test("a page for staff leads to the sign-in page, and remembers where one wanted to go", async ({ page }) => {
  await page.goto("/desk?waiting=us");
  await expect(page).toHaveURL(/\/sign-in\?next=%2Fdesk%3Fwaiting%3Dus$/);
});

test.describe("what is not there", () => {
  test.use({ allowConsole: [/status of 404/] });

  test("is told in words, with a way on", async ({ page }) => {
    const answer = await page.goto("/no-such-page");
    expect(answer?.status()).toBe(404);
    await expect(page.getByRole("heading", { level: 1 })).toBeVisible();
    await expectNoAxe(page);
  });
});
