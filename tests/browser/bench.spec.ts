import AxeBuilder from "@axe-core/playwright";
import sharp from "sharp";
import type { Page } from "@playwright/test";
import { expect, test as base } from "@playwright/test";
import { signIn } from "../support/browser.ts";

// Lost connections are part of what is tried here, and a browser notes them on its console: only faults of the page count.
const test = base.extend<{ faults: string[] }>({
  faults: [
    async ({ page }, use) => {
      const faults: string[] = [];
      page.on("pageerror", (error) => faults.push(error.message));
      await use(faults);
      expect(faults).toEqual([]);
    },
    { auto: true },
  ],
});

test.use({ viewport: { width: 390, height: 844 }, hasTouch: true });

/** A new print of the filler flange's second revision, which nothing else in the demo rests on. */
async function recordPrint(page: Page): Promise<string> {
  await page.goto("/jobs");
  await page.getByRole("rowheader", { name: "2026-001" }).getByRole("link").click();
  await page.getByRole("row", { name: "Filler flange" }).getByRole("link").first().click();
  await page.getByRole("navigation", { name: "Revisions of this part" }).getByRole("link", { name: /^2\b/ }).click();
  await expect(page.getByRole("heading", { name: "Filler flange, revision 2" })).toBeAttached();
  await page.goto(`${new URL(page.url()).pathname}/prints/new`);
  await page.getByLabel("Preset").selectOption({ index: 1 });
  await page.getByRole("button", { name: "Record the print" }).click();
  await expect(page.getByRole("heading", { name: /^Print 2\.\d+, whole$/ })).toBeVisible();
  return new URL(page.url()).pathname;
}

async function press(page: Page, ...keys: string[]): Promise<void> {
  for (const key of keys) await page.getByRole("button", { name: key, exact: true }).tap();
}

const read = async (page: Page, reading: string) => press(page, ...[...reading].map((figure) => (figure === "." ? "point" : figure)), "Save, next");

async function begin(page: Page): Promise<void> {
  await page.getByRole("link", { name: "Try it on" }).tap();
  await page.getByRole("button", { name: /^Tank ring/ }).tap();
}

test("tried on at the bench by keys: verdict at once, kept through a reload and a lost line, stored once", async ({ page, context }) => {
  await signIn(page, "designer");
  const print = await recordPrint(page);
  await begin(page);

  // A question, with its photo from the camera.
  await expect(page.getByText("Does it drop on by hand over all six studs?")).toBeVisible();
  const bytes = await sharp({ create: { width: 640, height: 480, channels: 3, background: "#8a7" } }).jpeg().toBuffer();
  await page.locator('input[type="file"]').setInputFiles({ name: "studs.jpg", mimeType: "image/jpeg", buffer: bytes });
  await expect(page.getByRole("list", { name: "Photos kept" }).getByRole("img")).toHaveCount(1);
  await press(page, "Yes");
  await expect(page.getByText("it fits")).toBeVisible();
  await press(page, "Next");

  // A size at three places; the instrument is picked once.
  await page.getByRole("button", { name: /^Caliper/ }).tap();
  await expect(page.getByText(/± 0\.03 mm, checked on the gauge block/)).toBeVisible();
  await read(page, "61.8");
  await press(page, "6", "2", "point", "0", "2");
  // 62.02 is 0.07 beyond the print limit of 61.95 that the demo states.
  await expect(page.getByText("fails by 0.07")).toBeVisible();
  await expect(page.getByRole("img", { name: /^Limits 61\.70 mm to 61\.95 mm\. Read 61\.80 mm, 62\.02 mm/ })).toBeVisible();
  await press(page, "Delete", "Delete", "Delete", "Delete", "Delete");
  await read(page, "61.9");

  // What was read is there after a reload, the photo too.
  await page.reload();
  await expect(page.getByRole("heading", { name: "Spigot in the ring" })).toBeVisible();
  await expect(page.getByRole("button", { name: "Change the first reading, 61.8 mm" })).toBeVisible();
  await press(page, "Reading in mm; change to in");
  // 2.4429 in is 62.04966 mm: 0.09966 mm, or 0.0039 in, beyond 61.95 mm (1 in = 25.4 mm).
  await press(page, "2", "point", "4", "4", "2", "9");
  await expect(page.getByText("fails by 0.0039")).toBeVisible();
  await press(page, "Save, next");
  await press(page, "Skip");

  // The end names the cause; the line is lost when it is given out of hand.
  await expect(page.getByRole("heading", { name: "One of two does not fit" })).toBeVisible();
  await page.getByRole("button", { name: /^The print / }).tap();
  await context.setOffline(true);
  await press(page, "Record the fit check");
  await expect(page.getByRole("heading", { name: "Kept on this phone. It waits for the connection." })).toBeVisible();

  // The line is back, but the first answer gets lost: the server has it, the phone does not know.
  let sent = 0;
  await page.route("**/api/fit-checks", async (route) => {
    sent++;
    if (sent > 1) return route.continue();
    await route.fetch();
    return route.abort("connectionreset");
  });
  await context.setOffline(false);
  await page.waitForURL(/\/fit-checks\/[0-9a-f-]{36}$/);
  expect(sent).toBeGreaterThanOrEqual(2);
  await expect(page.getByRole("heading", { name: "One of two does not fit" })).toBeVisible();
  await expect(page.getByRole("heading", { name: "Because of the print" })).toBeVisible();
  await expect(page.getByText("fails by 0.10 at one of three places")).toBeVisible();
  // The photo follows its fit check.
  await expect(page.getByRole("img", { name: "Photo: Drops over all studs" })).toBeVisible({ timeout: 60_000 });

  await page.goto(print);
  await expect(page.getByRole("link", { name: /^On Tank ring/ })).toHaveCount(1);
  expect(await page.evaluate(() => Object.keys(localStorage).filter((name) => name.startsWith("spotblue fit")))).toEqual([]);
});

test("the bench has big keys and no barriers", async ({ page }) => {
  await signIn(page, "designer");
  await recordPrint(page);
  await begin(page);
  await press(page, "Yes", "Next");
  await page.getByRole("button", { name: /^Caliper/ }).tap();
  await expect(page.getByRole("button", { name: "Save, next" })).toBeVisible();
  const sizes = await page.getByRole("button").evaluateAll((buttons) => buttons.map((button) => ({ name: button.textContent, ...button.getBoundingClientRect().toJSON() })) as Array<{ name: string; width: number; height: number }>);
  expect(sizes.filter(({ width, height }) => width < 44 || height < 44)).toEqual([]);
  for (const name of ["Save, next", "7", "0"]) expect((await page.getByRole("button", { name, exact: true }).boundingBox())!.height).toBeGreaterThanOrEqual(64);
  for (const theme of ["paper", "blueprint"]) {
    await page.evaluate((value) => (document.documentElement.dataset.theme = value), theme);
    expect((await new AxeBuilder({ page }).analyze()).violations.map(({ id, nodes }) => [id, nodes.map(({ html }) => html)])).toEqual([]);
  }
  expect(await page.evaluate(() => document.documentElement.scrollWidth - innerWidth)).toBe(0);
});
