import { randomBytes } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import { fileURLToPath } from "node:url";
import { startCluster, stopLeftoverServer, temporaryRoot } from "./cluster.mjs";
import { readJson, writePrivately } from "./locks.mjs";
import { endProcess, identify, isRunning, runOrRefuse } from "./processes.mjs";

const ROOT = fileURLToPath(new URL("../..", import.meta.url));
const AN_HOUR_MS = 3_600_000;
const PREFIX = "spotblue-throw-away-";
const dataDirOf = (folder) => path.join(folder, "cluster");

/** Ends and removes what test runs left behind that were killed before they could tidy up. */
async function sweepLeftovers(root) {
  for (const name of fs.readdirSync(root).filter((entry) => entry.startsWith(PREFIX))) {
    const folder = path.join(root, name);
    try {
      const { uid, mtimeMs } = fs.statSync(folder);
      if (uid !== process.getuid()) continue;
      const owner = readJson(path.join(folder, "owner.json"));
      // Without a note it may be one that somebody is making this very moment.
      if (owner ? isRunning(owner) : Date.now() - mtimeMs < AN_HOUR_MS) continue;
      await Promise.all((owner?.children ?? []).map((child) => endProcess(child)));
      await stopLeftoverServer(dataDirOf(folder));
      fs.rmSync(folder, { recursive: true, force: true });
    } catch (error) {
      if (error.code !== "ENOENT") throw error; // another run sweeps at the same time
    }
  }
}

/** A folder outside the clone that goes away with its maker. */
export async function makeThrowAwayFolder() {
  const root = temporaryRoot();
  await sweepLeftovers(root);
  const folder = fs.mkdtempSync(path.join(root, PREFIX));
  /** Notes who lives off this folder, to be ended with it should we be killed. */
  const note = (children = []) => writePrivately(path.join(folder, "owner.json"), JSON.stringify({ ...identify(process.pid), children }));
  note();
  fs.chmodSync(folder, 0o711); // the server's account walks through, and sees nothing
  return { folder, note, remove: () => fs.rmSync(folder, { recursive: true, force: true }) };
}

/**
 * A PostgreSQL cluster that is gone afterwards.
 *
 * @returns `env`: what tells `givenCluster` of a child process about it
 */
export async function startThrowAwayCluster() {
  const { folder, remove } = await makeThrowAwayFolder();
  try {
    const cluster = await startCluster({ dataDir: dataDirOf(folder), secretsFile: path.join(folder, "cluster.json"), logFile: path.join(folder, "postgresql.log"), throwAway: true });
    return {
      ...accessTo(cluster.adminUrl, cluster.notes.owner, cluster.notes.app),
      env: { TEST_PG_ADMIN_URL: cluster.adminUrl, TEST_PG_OWNER_PASSWORD: cluster.notes.owner, TEST_PG_APP_PASSWORD: cluster.notes.app },
      stop: async () => { await cluster.stop(); remove(); },
    };
  } catch (error) {
    remove();
    throw error;
  }
}

/** The cluster that an outer run named in TEST_PG_*, if it did. */
export function givenCluster(env = process.env) {
  if (!env.TEST_PG_ADMIN_URL) return undefined;
  return accessTo(env.TEST_PG_ADMIN_URL, env.TEST_PG_OWNER_PASSWORD, env.TEST_PG_APP_PASSWORD);
}

function accessTo(adminUrl, ownerPassword, appPassword) {
  const url = (user, password, database) => Object.assign(new URL(adminUrl), { username: user, password, pathname: `/${database}` }).href;
  return {
    adminUrl,
    urls: (database) => ({ ownerUrl: url("spotblue_owner", ownerPassword, database), appUrl: url("spotblue_app", appPassword, database) }),
  };
}

/** A database name that no other run uses. */
export const newDatabaseName = (kind) => `${kind}_${randomBytes(6).toString("hex")}`;

/** Brings a database to the present shape, in a process of its own. */
export async function migrateDatabase(ownerUrl) {
  await runOrRefuse({ command: process.execPath, args: ["--import", "tsx", "db/migrate.ts"], cwd: ROOT, env: { ...process.env, DATABASE_OWNER_URL: ownerUrl } }, "Migrating a database");
}
