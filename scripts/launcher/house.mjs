import { createHash } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import { fileURLToPath } from "node:url";
import { isRoot } from "./debian.mjs";
import { Refusal } from "./steps.mjs";

/** The clone that this launcher belongs to. */
export const ROOT = fs.realpathSync(fileURLToPath(new URL("../..", import.meta.url)));
/** Everything that a start leaves behind and a person may delete to begin anew. */
export const LOCAL = path.join(ROOT, ".local");
export const LOGS = path.join(LOCAL, "logs");
const LARGEST_LOG_BYTES = 10_000_000;
/** Where root's clusters lie: `postgres` can't walk into a clone under root's home. */
const ROOTS_CLUSTERS = "/var/lib/spotblue";

/** Makes `.local/`, and refuses to mix the data of two accounts. */
export function prepareLocal() {
  if (fs.existsSync(LOCAL)) {
    const { uid } = fs.statSync(LOCAL);
    if (uid !== process.getuid()) {
      throw new Refusal(`.local/ belongs to ${uid === 0 ? "root" : `user ${uid}`}, who started here before. Start as the same user, or delete .local/ to begin anew (its data are then gone).`);
    }
  }
  for (const folder of [LOCAL, LOGS]) fs.mkdirSync(folder, { recursive: true, mode: 0o700 });
  for (const name of fs.readdirSync(LOGS).filter((entry) => entry.endsWith(".log"))) {
    const log = path.join(LOGS, name);
    // One generation is kept; a log that grows for a year helps nobody.
    if (fs.statSync(log).size > LARGEST_LOG_BYTES) fs.renameSync(log, `${log}.before`);
  }
}

/**
 * The data folder of this clone's cluster. An ordinary user's lies in `.local/`. Root's lies
 * under /var/lib/spotblue, named after the clone; `.local/cluster-path` says where.
 */
export function clusterFolder() {
  if (!isRoot()) return path.join(LOCAL, "cluster");
  const folder = path.join(ROOTS_CLUSTERS, `${path.basename(ROOT)}-${createHash("sha256").update(ROOT).digest("hex").slice(0, 12)}`);
  fs.mkdirSync(ROOTS_CLUSTERS, { recursive: true, mode: 0o755 });
  const note = path.join(LOCAL, "cluster-path");
  const [noted, clone] = fs.existsSync(note) ? fs.readFileSync(note, "utf8").split("\n") : [];
  // The clone was moved: its data come along. A copy of a clone that still stands gets its own.
  if (noted && noted !== folder && fs.existsSync(noted) && !fs.existsSync(clone) && !fs.existsSync(folder)) fs.renameSync(noted, folder);
  fs.writeFileSync(note, `${folder}\n${ROOT}\n`);
  return folder;
}

/** The settings a person gave: `.env` of the clone, and over it the environment. */
export function givenSettings() {
  const file = path.join(ROOT, ".env");
  return { ...(fs.existsSync(file) ? parseDotEnv(fs.readFileSync(file, "utf8")) : {}), ...process.env };
}

/** Lines `NAME=value`; a value may stand in quotes; `#` begins a line that says nothing. */
export function parseDotEnv(text) {
  const settings = {};
  for (const line of text.split(/\r?\n/)) {
    const match = /^\s*(?:export\s+)?([A-Za-z_][A-Za-z0-9_]*)\s*=\s*(.*?)\s*$/.exec(line);
    if (!match) continue;
    const [, name, value] = match;
    settings[name] = /^(["']).*\1$/.test(value) ? value.slice(1, -1) : value.replace(/\s+#.*$/, "");
  }
  return settings;
}
