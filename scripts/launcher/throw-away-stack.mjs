#!/usr/bin/env node
// The whole product around an empty, seeded database of its own, for browser tests; gone when
// it is told to stop. `--port` is the web process's, `--mail-port` the page of caught mail.
// STACK_FILE, when set, receives the settings as JSON, for tests that look behind the page.
import fs from "node:fs";
import { parseArgs } from "node:util";
import pg from "pg";
import { ensureBuild } from "./freshness.mjs";
import { prepareLocal } from "./house.mjs";
import { endCommandsUnderWay } from "./processes.mjs";
import { createStack } from "./stack.mjs";
import { printFault, step } from "./steps.mjs";
import { onStop } from "./stop-signals.mjs";
import { givenCluster, makeThrowAwayFolder, newDatabaseName, startThrowAwayCluster } from "./throw-away.mjs";

const { values } = parseArgs({ options: { port: { type: "string" }, "mail-port": { type: "string" } } });
const database = newDatabaseName("browser");
let place, ownCluster, cluster, stack, stopping;

function stopEverything() {
  stopping ??= (async () => {
    await endCommandsUnderWay();
    await stack?.stop();
    if (ownCluster) await ownCluster.stop();
    else if (cluster) await asAdmin(`drop database if exists ${database} with (force)`).catch(() => {});
    place?.remove();
    if (process.env.STACK_FILE) fs.rmSync(process.env.STACK_FILE, { force: true });
  })();
  return stopping;
}

async function leave(code) {
  await stopEverything();
  process.exit(code);
}

async function asAdmin(statement) {
  const client = new pg.Client({ connectionString: cluster.adminUrl });
  await client.connect();
  await client.query(statement).finally(() => client.end());
}

onStop(() => void leave(0));

try {
  prepareLocal();
  place = await makeThrowAwayFolder();
  await step("Build", ensureBuild);
  cluster = givenCluster();
  if (!cluster) await step("Throw-away cluster", async () => { cluster = ownCluster = await startThrowAwayCluster(); });
  await asAdmin(`create database ${database} owner spotblue_owner`);
  stack = await createStack({
    folder: place.folder,
    // Nothing that a person configured for real may be touched by a test: only what Node needs is passed on.
    given: Object.fromEntries(["PATH", "HOME", "LANG", "TMPDIR"].map((name) => [name, process.env[name]])),
    database: cluster.urls(database),
    onChange: () => place.note(stack?.running()),
    ports: { web: Number(values.port ?? 0), store: 0, smtp: 0, mailPage: Number(values["mail-port"] ?? 0), github: 0 },
  });
  await step("Stand-ins", async () => { await stack.startFakes(); });
  await step("Migrations", async () => { await stack.migrate(); });
  await step("Demo shop", async () => { await stack.seed(); });
  await step("Worker", async () => { await stack.startWorker(); });
  await step("Web process", () => stack.startWeb());
  if (process.env.STACK_FILE) fs.writeFileSync(process.env.STACK_FILE, JSON.stringify({ ...stack.settings, DATABASE_OWNER_URL: cluster.urls(database).ownerUrl }), { mode: 0o600 });
  void stack.vitalEnd.then((what) => { console.error(what); return leave(1); });
} catch (error) {
  if (!stopping) printFault(error);
  await leave(1);
}
