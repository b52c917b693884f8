import { expect, test as base, type BrowserContext, type Page } from "@playwright/test";
import type { Role } from "../../app/domain/permissions.ts";
import signIns from "../../db/seeds/demo-sign-ins.json" with { type: "json" };

export { expect };

export interface People {
  /** This person of the demo, signed in, in a browser of their own. */
  as(role: Role, viewport?: { width: number; height: number }): Promise<Page>;
}

/** What a page may say on its console without failing its test. */
const expected = [/^Failed to load resource: the server responded with a status of (400|403|404|409|410)/, /GPU stall due to ReadPixels/, /GL Driver Message/];

/** Four people at once, each with cookies of their own; an error that nobody expected fails the test. */
export const test = base.extend<{ people: People }>({
  people: async ({ browser, baseURL }, use) => {
    const contexts: BrowserContext[] = [];
    const faults: string[] = [];
    await use({
      async as(role, viewport = { width: 1440, height: 900 }) {
        const context = await browser.newContext({ baseURL, viewport, acceptDownloads: true });
        contexts.push(context);
        const page = await context.newPage();
        page.on("pageerror", (error) => faults.push(`${role}: ${error.message}`));
        page.on("console", (message) => {
          if (message.type() === "error" && !expected.some((pattern) => pattern.test(message.text()))) faults.push(`${role}, ${page.url()}: ${message.text()}`);
        });
        await signIn(page, role);
        return page;
      },
    });
    for (const context of contexts) await context.close();
    expect(faults).toEqual([]);
  },
});

export async function signIn(page: Page, role: Role): Promise<void> {
  const { email, password } = signIns.find((one) => one.role === role)!;
  await page.goto("/sign-in");
  await page.getByLabel("E-mail").fill(email);
  await page.getByLabel("Password").fill(password);
  await page.getByRole("button", { name: "Sign in", exact: true }).click();
  await expect(page).not.toHaveURL(/sign-in/);
}
