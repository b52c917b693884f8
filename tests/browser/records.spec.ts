import { randomBytes } from "node:crypto";
import type { Page } from "@playwright/test";
import { expect, test } from "../support/browser.ts";

/** A job of its own, so that other specs are not disturbed. */
async function openJob(page: Page): Promise<{ jobUrl: string; partUrl: string }> {
  const mark = randomBytes(4).toString("hex");
  await page.goto("/customers/new");
  await page.getByLabel("Name").fill(`Customer ${mark}`);
  await page.getByRole("button", { name: "Add the customer" }).click();
  await page.waitForURL("/customers");
  await page.goto("/jobs/new");
  await page.getByLabel("Number").fill(`T-${mark}`);
  await page.getByLabel("Job", { exact: true }).fill("Filler cap");
  await page.getByLabel("Customer", { exact: true }).selectOption({ label: `Customer ${mark}` });
  await page.getByRole("button", { name: /job/i }).last().click();
  await page.waitForURL(/\/jobs\/[0-9a-f-]{36}$/);
  const jobUrl = new URL(page.url()).pathname;
  await page.getByRole("link", { name: "Add a part" }).click();
  await page.getByLabel("Part", { exact: true }).fill("Cap flange");
  await page.getByLabel("Flange").check();
  await page.getByRole("button", { name: /Add it/ }).click();
  await page.waitForURL(/\/revisions\/[0-9a-f-]{36}\/files$/);
  await page.goto(new URL(page.url()).pathname.replace("/files", ""));
  const partUrl = await page.getByRole("link", { name: "Cap flange", exact: true }).first().getAttribute("href");
  return { jobUrl, partUrl: partUrl! };
}

test("a designer states what must hold on a part, measures the hardware, and loses nothing to a second saver", async ({ people }) => {
  const page = await people.as("designer");
  const { jobUrl, partUrl } = await openJob(page);

  // Hardware comes in and is measured in inches, whatever the page shows.
  await page.goto(`${jobUrl}/mating-parts/new`);
  await page.getByLabel("Hardware").fill("Tank neck");
  await page.getByRole("button", { name: "Take it in" }).click();
  await page.waitForURL(/\/mating-parts\/[0-9a-f-]{36}$/);
  await page.getByLabel("What was measured").fill("Neck, inside");
  await page.getByLabel("Reading").fill("2 1/2 in");
  await page.getByRole("combobox", { name: "With" }).selectOption({ index: 1 });
  await page.getByRole("button", { name: "Add the measurement" }).click();
  const reading = page.getByRole("row", { name: /Neck, inside/ });
  await expect(reading).toContainText("63.5 mm");
  await expect(reading).toContainText("±");
  await reading.getByRole("button", { name: /Set aside/ }).click();
  await expect(reading).toContainText("(set aside)");

  // A class is turned into its limits (ISO 286-2:2010, table 6: 25 H7 is +21/0 µm); a refused form keeps what was typed.
  await page.goto(`${partUrl}/characteristics/new`);
  await page.getByLabel("Characteristic").fill("Pilot bore");
  await page.getByLabel("a fit class").check();
  await page.getByLabel("Nominal").fill("25");
  await page.getByLabel("Class", { exact: true }).fill("H7");
  await expect(page.getByText("ISO 286: 25 to 25.021")).toBeVisible();
  await page.getByRole("button", { name: "Add it", exact: true }).click();
  await expect(page.getByRole("alert")).toContainText("Give the limit that the print must hold");
  await expect(page.getByLabel("Class", { exact: true })).toHaveValue("H7");
  await page.getByLabel("Lower limit on the print").fill("25");
  await page.getByLabel("Upper limit on the print").fill("25.2");
  await page.getByRole("button", { name: "Add it", exact: true }).click();
  await page.waitForURL(partUrl);
  const bore = page.getByRole("row", { name: /Pilot bore/ });
  await expect(bore).toContainText("25 to 25.021 mm");
  await expect(bore).toContainText("25 to 25.2 mm");

  // Two pages of the same characteristic: the second saver sees both versions and decides.
  const address = (await page.getByRole("link", { name: "Pilot bore" }).getAttribute("href"))!;
  const other = await people.as("owner");
  await other.goto(address);
  await page.goto(address);
  await other.getByLabel("Class", { exact: true }).fill("H8");
  await other.getByRole("button", { name: "Save" }).click();
  await other.waitForURL(partUrl);
  await page.getByLabel("Characteristic").fill("Pilot bore, upper");
  await page.getByRole("button", { name: "Save" }).click();
  const conflict = page.getByRole("alert");
  await expect(conflict).toContainText("Nothing was saved yet");
  await expect(conflict.getByRole("row", { name: /Class/ })).toContainText("H8");
  await expect(conflict).toBeFocused();
  await expect(page.getByLabel("Characteristic")).toHaveValue("Pilot bore, upper");
  await page.getByRole("button", { name: "Save" }).click();
  await page.waitForURL(partUrl);
  // The page of the other is open and follows by itself.
  await expect(other.getByRole("row", { name: /Pilot bore, upper/ })).toContainText("25 to 25.021 mm");
});

test("money is the owner's: agreed, paid, given back only when confirmed; the designer is shown none of it", async ({ people }) => {
  const designer = await people.as("designer");
  const { jobUrl } = await openJob(designer);
  const owner = await people.as("owner");
  await owner.goto(`${jobUrl}/deposit`);
  await owner.getByLabel("agreed", { exact: true }).check();
  await owner.getByLabel("Amount, EUR").first().fill("731.50");
  await owner.getByRole("button", { name: "Save" }).click();
  await expect(owner.getByRole("heading", { level: 1 })).toContainText("EUR 731.50 of the deposit of EUR 731.50 is still to come");

  const pay = async (amount: string) => {
    await owner.getByLabel("Amount, EUR").last().fill(amount);
    await owner.getByLabel("How").fill("bank transfer");
    await owner.getByRole("button", { name: "Record the payment" }).click();
  };
  await pay("731.50");
  await expect(owner.getByRole("heading", { level: 1 })).toContainText("is paid");
  await pay("-31.50");
  await expect(owner.getByText("This is money given back")).toBeVisible();
  await expect(owner.getByRole("row", { name: /31\.50/ })).toHaveCount(1);
  await owner.getByRole("button", { name: "Yes, record it as given back" }).click();
  await expect(owner.getByRole("heading", { level: 1 })).toContainText("EUR 31.50 of the deposit");

  await designer.goto(jobUrl);
  await expect(designer.getByRole("heading", { level: 1 })).toContainText("Filler cap");
  expect(await designer.content()).not.toMatch(/731\.50|73150/);
  expect((await designer.goto(`${jobUrl}/deposit`))?.status()).toBe(403);
});
