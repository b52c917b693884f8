#!/usr/bin/env node
// `npm start`: everything from a fresh clone to a served demo shop. Plain JavaScript without a
// dependency, since it is what installs the dependencies.
import fs from "node:fs";
import path from "node:path";
import { startCluster } from "./launcher/cluster.mjs";
import { ensureBuild, ensurePackages, migrationsHash } from "./launcher/freshness.mjs";
import { clusterFolder, givenSettings, LOCAL, LOGS, prepareLocal, ROOT } from "./launcher/house.mjs";
import { readJson, takeLock, writePrivately } from "./launcher/locks.mjs";
import { ensurePostgres } from "./launcher/postgres-binaries.mjs";
import { endCommandsUnderWay, endInWords, endProcess, identify, lastLines, runToEnd } from "./launcher/processes.mjs";
import { createStack, neededFakes } from "./launcher/stack.mjs";
import { printFault, Refusal, step } from "./launcher/steps.mjs";
import { onStop } from "./launcher/stop-signals.mjs";

const DATABASE = "spotblue";
const began = performance.now();
const lockFile = path.join(LOCAL, "launcher.lock");
let lock, cluster, stack, serving = false, stopping;

/** Stops whatever was started, last first. Asked twice, it is done once. */
function stopEverything() {
  stopping ??= (async () => {
    await endCommandsUnderWay();
    await stack?.stop();
    await cluster?.stop();
    lock?.release();
  })();
  return stopping;
}

async function leave(code) {
  await stopEverything();
  process.exit(code);
}

onStop(() => {
  console.log("\nStopping …");
  void leave(serving ? 0 : 130);
});

try {
  await start();
} catch (error) {
  // Ctrl-C ends the step under way, and that is no fault worth a word.
  if (!stopping) printFault(error);
  await leave(1);
}

async function start() {
  if (Number(process.versions.node.split(".")[0]) < 20) throw new Refusal(`Node 20 or newer is needed; this is ${process.version}.`);
  prepareLocal();
  lock = takeLock(lockFile);
  if (lock.holder) throw new Refusal(`Already running${lock.holder.url ? ` at ${lock.holder.url}` : ""} (process ${lock.holder.pid}). Stop that one first.`);
  await endLeftovers(lock.before);

  const given = givenSettings();
  const fakes = neededFakes(given);
  await step("Packages", ensurePackages);
  if (given.APP_MODE === "deployment") await step("Settings", () => checkSettings(given));
  if (fakes.database) {
    await step("PostgreSQL", async () => `version ${(await ensurePostgres()).version}`);
    await step("Database cluster", startOwnCluster);
  }
  const database = cluster ? cluster.urls(DATABASE) : { appUrl: given.DATABASE_URL, ownerUrl: given.DATABASE_OWNER_URL };
  stack = await createStack({ folder: LOCAL, given, database, onChange: noteRunning });
  const names = [fakes.store && "object store", fakes.mail && "mail catcher", fakes.github && "GitHub"].filter(Boolean);
  if (names.length > 0) await step("Stand-ins", async () => { await stack.startFakes(); return names.join(", "); });
  await step("Migrations", migrate);
  // Only into a cluster of our own: people with known passwords have no place in a shop's database.
  if (cluster) await step("Demo shop", seedOnce);
  await step("Build", ensureBuild);
  let url;
  const worker = stack.startWorker();
  await step("Web process", async () => { url = await stack.startWeb(); });
  await step("Worker", () => worker);
  noteRunning(url);
  serving = true;
  printWelcome(url);
  void stack.vitalEnd.then((what) => { console.error(`\n${what}\nStopping …`); return leave(1); });
}

/** What a launcher left running that was killed before it could stop it. */
async function endLeftovers(before) {
  const left = (before?.children ?? []).filter(({ pid, begin }) => identify(pid).begin === begin && begin);
  if (left.length > 0) await step("Ending what a crashed run left", async () => { await Promise.all(left.map((child) => endProcess(child))); return left.map(({ name }) => name).join(", "); });
}

/** In a deployment nothing is made up for what is missing: the app's own check names it all at once. */
async function checkSettings(given) {
  const { code, output } = await runToEnd({ command: process.execPath, args: ["--import", "tsx", "app/env.server.ts"], cwd: ROOT, env: given });
  if (code !== 0) throw new Refusal(output.trim());
}

async function startOwnCluster() {
  const logFile = path.join(LOGS, "postgresql.log");
  const dataDir = clusterFolder();
  const known = fs.existsSync(path.join(dataDir, "PG_VERSION"));
  cluster = await startCluster({ dataDir, secretsFile: path.join(LOCAL, "cluster.json"), logFile });
  void cluster.handle.ended.then((how) => {
    if (stopping || cluster.handle.stopping) return;
    console.error(`\nPostgreSQL ended unexpectedly (${endInWords(how)}). It said last:\n${lastLines(logFile)}\nStopping …`);
    return leave(1);
  });
  await cluster.createDatabase(DATABASE);
  return `${known ? "started" : "created"} on port ${cluster.port}`;
}

async function migrate() {
  const hash = migrationsHash();
  if (cluster?.notes.migratedBy === hash) return "up to date";
  await stack.migrate();
  cluster?.note({ migratedBy: hash });
  return "done";
}

async function seedOnce() {
  if (cluster.notes.seeded) return "there";
  await stack.seed();
  cluster.note({ seeded: new Date().toISOString() });
  return "seeded";
}

/** Notes in the lock who runs, so that the next start can end them should this one be killed. */
function noteRunning(url) {
  if (!stack || stopping) return;
  const kept = url ?? readJson(lockFile)?.url;
  writePrivately(lockFile, JSON.stringify({ ...identify(process.pid), url: kept, children: stack.running() }));
}

function printWelcome(url) {
  const seconds = ((performance.now() - began) / 1000).toFixed(1);
  console.log(`\nSpotblue is ready after ${seconds} s: ${url}\n`);
  const signIns = readJson(path.join(ROOT, "db/seeds/demo-sign-ins.json"));
  if (cluster && signIns) {
    const width = (key) => Math.max(...signIns.map((signIn) => signIn[key].length)) + 2;
    console.log("Sign in to the demo shop as");
    for (const { role, email, password } of signIns) console.log(`  ${role.padEnd(width("role"))}${email.padEnd(width("email"))}${password}`);
    console.log();
  }
  if (stack.fakes.mail) console.log(`Mail that the app sends is caught, never delivered: ${stack.settings.MAIL_CATCHER_URL}`);
  console.log(`Logs: ${path.relative(process.cwd(), LOGS) || "."}. Ctrl-C stops everything; the data stay.`);
}
