import AxeBuilder from "@axe-core/playwright";
import { fileURLToPath } from "node:url";
import type { Locator, Page } from "@playwright/test";
import sharp from "sharp";
import { expect, test } from "../support/browser.ts";

// A block with one bore of Ø 12.70, from an open repository: tests/support/models/step/README.md.
const block = fileURLToPath(new URL("../support/models/step/cube_hole.step", import.meta.url));

async function openDemoJob(page: Page): Promise<void> {
  await page.goto("/jobs");
  await page.getByRole("link", { name: "2026-001" }).click();
  await page.waitForURL(/\/jobs\/.+/);
}

/** A part of its own, so that no test finds what another left; ends on the files of its revision 1. */
async function addPart(page: Page, name: string): Promise<void> {
  await openDemoJob(page);
  await page.getByRole("link", { name: "Add a part" }).click();
  await page.getByLabel("Part", { exact: true }).fill(name);
  await page.getByLabel("Number").fill(`SHEET-${Date.now()}`);
  await page.getByRole("button", { name: "Add it, then drop its model" }).click();
  await page.waitForURL(/\/files$/);
  await page.waitForLoadState("networkidle");
}

/** The newest sheet of a part of the demo's job. */
async function openSheet(page: Page, part: string): Promise<void> {
  await openDemoJob(page);
  await page.getByRole("row", { name: part }).getByRole("link").first().click();
  await page.waitForURL(/\/revisions\//);
}

const stageOf = (page: Page) => page.getByRole("application");

async function waitForDrawing(page: Page): Promise<Locator> {
  await page.emulateMedia({ colorScheme: "light" });
  const stage = stageOf(page);
  await expect(stage.locator("canvas")).toBeVisible({ timeout: 60_000 });
  await expect(page.getByText("Loading the view")).toHaveCount(0, { timeout: 60_000 });
  await expect.poll(async () => (await inkOf(stage)).dark, { timeout: 60_000 }).toBeGreaterThan(200);
  return stage;
}

/** Pixels of a view by what they are: dark lines, and greys of lit and shaded faces. */
async function inkOf(stage: Locator): Promise<{ dark: number; tones: number }> {
  const { data, info } = await sharp(await stage.screenshot()).removeAlpha().greyscale().raw().toBuffer({ resolveWithObject: true });
  const tones = new Set<number>();
  let dark = 0;
  for (let i = 0; i < info.width * info.height; i++) {
    if (data[i]! < 90) dark++;
    tones.add(data[i]!);
  }
  return { dark, tones: tones.size };
}

test("a STEP dropped on a new part is measured, drawn, and its faces are named", async ({ people }) => {
  const page = await people.as("designer");
  await addPart(page, "Block with a bore");
  await page.locator("input[type=file]").setInputFiles(block);
  await page.getByRole("button", { name: "Upload cube_hole.step" }).click();
  await expect(page.getByText("one valid solid, 7 faces")).toBeVisible({ timeout: 90_000 });

  await page.getByRole("link", { name: "Open the sheet" }).click();
  const stage = await waitForDrawing(page);
  const drawn = await inkOf(stage);
  expect(drawn.tones).toBeGreaterThan(20);
  await expect(page.getByRole("heading", { level: 1, name: "Block with a bore, revision 1" })).toBeAttached();
  await expect(page.getByRole("row", { name: /12\.70 through plain/ })).toBeVisible();

  // A press on the block says what lies there.
  const said = page.getByRole("status").first();
  await page.getByRole("button", { name: "Front", exact: true }).click();
  await page.waitForTimeout(600);
  const box = (await stage.boundingBox())!;
  await page.mouse.click(box.x + box.width / 2, box.y + box.height / 2);
  await expect(said).toHaveText("plane");
  await page.getByRole("button", { name: "Faces", exact: true }).click();
  await page.getByRole("button", { name: "bore Ø 12.70" }).click();
  await expect(said).toHaveText("bore Ø 12.70");
  await page.mouse.click(box.x + 4, box.y + box.height / 2);
  await expect(said).toHaveText("Press a face to read what it is.");

  // Between two points of an edge of the block, in the front view level with each other.
  await page.getByRole("button", { name: "Measure", exact: true }).click();
  await page.mouse.click(box.x + box.width / 2 - 20, box.y + box.height / 2);
  await expect(said).toContainText("Press the second");
  await page.mouse.click(box.x + box.width / 2 + 20, box.y + box.height / 2);
  await expect(said).toContainText(/^\d+\.\d\d mm; along x \d+\.\d\d, y \d+\.\d\d, z \d+\.\d\d, read from the view/);
});

test("the sheet of the demo's flange: turned by keys, cut, quiet when idle, gone when left", async ({ people }) => {
  const page = await people.as("designer");
  await page.addInitScript(() => {
    const counted = window as unknown as { drawCalls: number; contexts: WebGL2RenderingContext[] };
    counted.drawCalls = 0;
    counted.contexts = [];
    for (const name of ["drawElements", "drawArrays", "drawElementsInstanced", "drawArraysInstanced"] as const) {
      const own = WebGL2RenderingContext.prototype[name] as (...given: unknown[]) => void;
      (WebGL2RenderingContext.prototype as unknown as Record<string, unknown>)[name] = function (this: unknown, ...given: unknown[]) {
        counted.drawCalls++;
        own.apply(this, given);
      };
    }
    const make = HTMLCanvasElement.prototype.getContext as (...given: unknown[]) => unknown;
    (HTMLCanvasElement.prototype as unknown as Record<string, unknown>).getContext = function (this: HTMLCanvasElement, ...given: unknown[]) {
      const context = make.apply(this, given);
      if (context instanceof WebGL2RenderingContext && !counted.contexts.includes(context)) counted.contexts.push(context);
      return context;
    };
  });
  await openSheet(page, "Filler flange");
  const stage = await waitForDrawing(page);
  const drawCalls = () => page.evaluate(() => (window as unknown as { drawCalls: number }).drawCalls);

  const before = await stage.screenshot();
  await stage.focus();
  await page.keyboard.press("ArrowLeft");
  await expect.poll(async () => (await stage.screenshot()).equals(before)).toBe(false);
  await page.keyboard.press("+");
  await page.keyboard.press("Shift+ArrowUp");
  await page.keyboard.press("Home");

  await page.getByRole("button", { name: "Section", exact: true }).click();
  const whole = await inkOf(stage);
  await page.getByRole("slider", { name: "Where the plane stands" }).fill("20");
  await expect.poll(async () => (await inkOf(stage)).dark).not.toBe(whole.dark);
  await page.getByRole("button", { name: "Other side" }).click();

  await page.waitForTimeout(1500);
  const settled = await drawCalls();
  expect(settled).toBeGreaterThan(0);
  await page.waitForTimeout(3000);
  expect(await drawCalls()).toBe(settled);

  await page.getByRole("link", { name: "Today" }).first().click();
  await page.waitForURL((url) => url.pathname === "/");
  await expect.poll(() => page.evaluate(() => (window as unknown as { contexts: WebGL2RenderingContext[] }).contexts.filter((one) => !one.isContextLost()).length)).toBe(0);
});

test("a browser that can't draw says so, and the measures stand beside it", async ({ people }) => {
  const page = await people.as("machinist");
  await page.addInitScript(() => {
    const make = HTMLCanvasElement.prototype.getContext as (...given: unknown[]) => unknown;
    (HTMLCanvasElement.prototype as unknown as Record<string, unknown>).getContext = function (this: unknown, kind: string, ...given: unknown[]) {
      return kind.startsWith("webgl") ? null : make.call(this, kind, ...given);
    };
  });
  await openSheet(page, "Filler flange");
  await expect(page.getByText("This browser can't draw in three dimensions")).toBeVisible();
  await expect(page.getByRole("img", { name: "Filler flange, revision 4" })).toBeVisible();
  await expect(page.getByRole("row", { name: /^Mass \d/ })).toBeVisible();
});

test("a branch is set aside with a reason, and taken up again", async ({ people }) => {
  const page = await people.as("designer");
  await addPart(page, "Damper arm");
  await page.goto(page.url().replace(/\/files$/, ""));
  await page.getByRole("link", { name: /^Add revision/ }).click();
  await page.waitForLoadState("networkidle");
  await page.getByRole("button", { name: "Add it, then drop its model" }).click();
  await expect(page.getByText("Say what changes, and why").first()).toBeVisible();
  await page.getByLabel("What changes, and why").fill("Tried with a second arm");
  await page.getByLabel("Branch").fill("two arms");
  await page.getByRole("button", { name: "Add it, then drop its model" }).click();
  await page.waitForURL(/\/files$/);
  await page.goto(page.url().replace(/\/files$/, ""));
  await page.waitForLoadState("networkidle");

  await page.getByRole("button", { name: "Set aside" }).click();
  const dialog = page.getByRole("dialog");
  await dialog.getByRole("button", { name: "Set aside" }).click();
  await expect(dialog.getByText("Say why it is set aside").first()).toBeVisible();
  await dialog.getByLabel("Why").fill("The second arm meets the frame");
  await dialog.getByRole("button", { name: "Set aside" }).click();
  await expect(page.getByText("Set aside: The second arm meets the frame")).toBeVisible();
  await page.getByRole("button", { name: "Take up again" }).click();
  await page.getByRole("dialog").getByRole("button", { name: "Take up again" }).click();
  await expect(page.getByText("Set aside: The second arm meets the frame")).toHaveCount(0);
});

test("the sheet and its files are usable without a mouse and by name", async ({ people }) => {
  const page = await people.as("designer");
  await openSheet(page, "Filler flange");
  await waitForDrawing(page);
  const faults = async () => (await new AxeBuilder({ page }).analyze()).violations.map(({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target.join(" ")).join(", ")}`);
  expect(await faults()).toEqual([]);
  await page.goto(`${page.url()}/files`);
  expect(await faults()).toEqual([]);
});
