#!/usr/bin/env node
// `npm test`: everything that has to hold, from a fresh clone, in one command.
//
//   npm test                              all suites
//   npm test -- pure                      one suite or several: typecheck lint pure integration build browser
//   npm test -- tests/unit/domain/gate    files whose path holds the text, in the suites they belong to
//   npm test -- pure gate -t "deposit"    what begins with a dash and what follows goes to the runner as it is
import path from "node:path";
import { installDebianPackages, isRoot, missingTestPackages } from "./launcher/debian.mjs";
import { ensureBuild, ensurePackages } from "./launcher/freshness.mjs";
import { prepareLocal, ROOT } from "./launcher/house.mjs";
import { readJson } from "./launcher/locks.mjs";
import { ensurePostgres } from "./launcher/postgres-binaries.mjs";
import { endCommandsUnderWay, runToEnd } from "./launcher/processes.mjs";
import { printFault, step } from "./launcher/steps.mjs";
import { onStop } from "./launcher/stop-signals.mjs";
import { playwrightCount, readArguments, vitestCount } from "./launcher/suites.mjs";
import { makeThrowAwayFolder, startThrowAwayCluster } from "./launcher/throw-away.mjs";

const inModules = (file) => path.join(ROOT, "node_modules", file);
const { suites, filters, passedOn } = readArguments(process.argv.slice(2));
const total = { passed: 0, failed: 0 };
let reports, cluster, stopping;

onStop(() => {
  console.error("\nInterrupted; tidying up …");
  void tidyUp().then(() => process.exit(130));
});

function tidyUp() {
  stopping ??= (async () => {
    // The runners understand Ctrl-C: browsers and servers they started end with them.
    await endCommandsUnderWay({ signal: "SIGINT", patienceMs: 40_000 });
    await cluster?.stop();
    reports?.remove();
  })();
  return stopping;
}

/** A command that is one check: it passes or it does not. */
async function check(...commands) {
  for (const args of commands) {
    const { code } = await runToEnd({ command: process.execPath, args, cwd: ROOT, env: cleanEnv(), show: true });
    if (code !== 0) return { passed: 0, failed: 1 };
  }
  return { passed: 1, failed: 0 };
}

/** NODE_ENV of whoever calls us would change what is tested. */
function cleanEnv(more = {}) {
  const env = { ...process.env, ...cluster?.env, ...more };
  delete env.NODE_ENV;
  return env;
}

async function vitest(project) {
  const report = path.join(reports.folder, `${project}.json`);
  const args = [inModules("vitest/vitest.mjs"), "run", "--project", project, "--reporter=default", "--reporter=json", `--outputFile.json=${report}`, ...filters, ...passedOn];
  const { code } = await runToEnd({ command: process.execPath, args, cwd: ROOT, env: cleanEnv(), show: true });
  return vitestCount(readJson(report), code);
}

async function playwright() {
  const report = path.join(reports.folder, "browser.json");
  const args = [inModules("@playwright/test/cli.js"), "test", "--reporter=list,json", ...filters, ...passedOn];
  const { code } = await runToEnd({ command: process.execPath, args, cwd: ROOT, env: cleanEnv({ PLAYWRIGHT_JSON_OUTPUT_NAME: report }), show: true });
  return playwrightCount(readJson(report), code);
}

async function build() {
  try {
    await step("Build", ensureBuild);
    return { passed: 1, failed: 0 };
  } catch (error) {
    printFault(error);
    return { passed: 0, failed: 1 };
  }
}

const run = {
  typecheck: () => check([inModules("@react-router/dev/bin.js"), "typegen"], [inModules("typescript/bin/tsc")]),
  lint: () => check([inModules("eslint/bin/eslint.js"), "--max-warnings", "0", "."]),
  pure: () => vitest("pure"),
  integration: () => vitest("integration"),
  build,
  browser: playwright,
};

async function prepare() {
  prepareLocal();
  await step("Packages", ensurePackages);
  const needsDatabase = suites.includes("integration") || suites.includes("browser");
  if (needsDatabase) await step("PostgreSQL", async () => `version ${(await ensurePostgres()).version}`);
  const missing = missingTestPackages();
  if (missing.length > 0) {
    const names = missing.map(({ name }) => name);
    if (isRoot()) await step("Debian packages", async () => { await installDebianPackages(names); return names.join(", "); });
    else console.log(`Missing here, and the tests that use them will fail: ${missing.map(({ name, use }) => `${name} (${use})`).join(", ")}. Install them with\n\n  sudo apt-get install --yes ${names.join(" ")}\n`);
  }
  reports = await makeThrowAwayFolder();
  if (needsDatabase) await step("Throw-away cluster", async () => { cluster = await startThrowAwayCluster(); });
}

const lines = [];
try {
  await prepare();
  for (const suite of suites) {
    if (stopping) break;
    console.log(`\n── ${suite} ──`);
    const from = performance.now();
    const { passed, failed: refused, skipped = 0 } = await run[suite]();
    // Where everything was installed nothing has a reason to be skipped.
    const failed = process.env.CI ? refused + skipped : refused;
    total.passed += passed;
    total.failed += failed;
    lines.push(`${suite.padEnd(12)}${String(passed).padStart(6)} passed ${String(failed).padStart(4)} failed${skipped ? ` ${skipped} skipped` : ""}  ${((performance.now() - from) / 1000).toFixed(1).padStart(7)} s`);
  }
} catch (error) {
  if (!stopping) printFault(error);
  total.failed += 1;
}
const interrupted = stopping !== undefined;
await tidyUp();
if (!interrupted) {
  console.log(`\n${lines.join("\n")}\n\n${total.passed} passed, ${total.failed} failed`);
  process.exitCode = total.failed > 0 ? 1 : 0;
}
