import { randomBytes } from "node:crypto";
import os from "node:os";
import path from "node:path";
import { defineConfig, devices } from "@playwright/test";
import { freePorts } from "./scripts/launcher/ports.mjs";

// With BASE_URL the specs run against what is served there; without, against a whole stack of
// their own. Workers read this file again and must find the same ports: hence the environment.
const own = process.env.BASE_URL === undefined || process.env.STACK_PORTS !== undefined;
if (own && process.env.STACK_PORTS === undefined) {
  const [web, mail] = await freePorts(2);
  process.env.STACK_PORTS = `${web},${mail}`;
  process.env.BASE_URL = `http://127.0.0.1:${web}`;
  process.env.MAIL_CATCHER_URL = `http://127.0.0.1:${mail}`;
  process.env.STACK_FILE = path.join(os.tmpdir(), `spotblue-stack-${randomBytes(6).toString("hex")}.json`);
}
const [webPort, mailPort] = (process.env.STACK_PORTS ?? "").split(",");

export default defineConfig({
  testDir: "tests/browser",
  outputDir: "test-results",
  fullyParallel: false,
  workers: Number(process.env.BROWSER_WORKERS ?? 2),
  // A test that passes at the second try has found something.
  retries: 0,
  forbidOnly: Boolean(process.env.CI),
  // Pictures are drawn by software here: slow, and slower beside other work.
  timeout: 120_000,
  expect: { timeout: 15_000 },
  use: {
    baseURL: process.env.BASE_URL,
    // A button that is not there fails its step, not the whole test's time.
    actionTimeout: 20_000,
    trace: "retain-on-failure",
    screenshot: "only-on-failure",
    launchOptions: {
      executablePath: process.env.CHROMIUM_PATH ?? "/usr/bin/chromium",
      args: ["--no-sandbox", "--disable-background-networking", "--use-angle=swiftshader", "--enable-unsafe-swiftshader"],
    },
  },
  projects: [{ name: "desktop", use: { ...devices["Desktop Chrome"], viewport: { width: 1440, height: 900 } } }],
  ...(own
    ? {
        webServer: {
          command: `exec node scripts/launcher/throw-away-stack.mjs --port ${webPort} --mail-port ${mailPort}`,
          url: `${process.env.BASE_URL}/health`,
          reuseExistingServer: false,
          timeout: 300_000,
          stdout: "pipe",
          stderr: "pipe",
          gracefulShutdown: { signal: "SIGTERM", timeout: 20_000 },
        },
      }
    : {}),
});
