import { expect, test } from "@playwright/test";

// Against the local stand-in, which any browser can reach and nothing outside can.
test("somebody whose address GitHub has verified signs in to their account, a stranger does not", async ({ page }) => {
  await page.goto("/jobs");
  await page.getByRole("link", { name: "Sign in with GitHub" }).click();
  await page.getByLabel("Name").fill("Ines at GitHub");
  await page.getByLabel("E-mail").fill("ines@keld.example");
  await page.getByRole("button", { name: "Sign in as this person" }).click();
  await expect(page).toHaveURL(/\/jobs$/);
  await expect(page.getByRole("heading", { name: "Jobs", level: 1 })).toBeVisible();
  await page.context().clearCookies();

  await page.goto("/sign-in/github");
  await page.getByLabel("Name").fill("A Stranger");
  await page.getByLabel("E-mail").fill("stranger@nowhere.example");
  await page.getByRole("button", { name: "Sign in as this person" }).click();
  await expect(page.getByRole("heading", { name: "GitHub did not let you in" })).toBeVisible();

  await page.goto("/sign-in/github");
  await page.getByRole("button", { name: "Cancel" }).click();
  await expect(page.getByText("You cancelled the sign-in at GitHub.")).toBeVisible();
});
