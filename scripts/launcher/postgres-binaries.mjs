import fs from "node:fs";
import path from "node:path";
import { installDebianPackages, isRoot } from "./debian.mjs";
import { Refusal } from "./steps.mjs";

const DEBIAN_ROOT = "/usr/lib/postgresql";
/** Older ones miss what the migrations use (ICU as a database's own collation). */
const OLDEST_VERSION = 15;
const NEEDED = ["initdb", "postgres", "psql"];

const hasAll = (bin) => NEEDED.every((name) => fs.existsSync(path.join(bin, name)));

/** Every usable PostgreSQL server of this machine, the newest first. */
export function findPostgres() {
  const versions = fs.existsSync(DEBIAN_ROOT) ? fs.readdirSync(DEBIAN_ROOT) : [];
  return versions
    .map((version) => ({ version: Number(version), bin: path.join(DEBIAN_ROOT, version, "bin") }))
    .filter(({ version, bin }) => version >= OLDEST_VERSION && hasAll(bin))
    .sort((a, b) => b.version - a.version);
}

/**
 * The server binaries to use; installs Debian's when there are none and we are root.
 *
 * @param {number | undefined} version the major version that existing data was written by
 * @throws Refusal with the one command to type when they are missing and we may not install
 */
export async function ensurePostgres(version) {
  const fitting = () => findPostgres().find((found) => version === undefined || found.version === version);
  const found = fitting();
  if (found) return found;
  const debianPackage = version === undefined ? "postgresql" : `postgresql-${version}`;
  if (!isRoot()) {
    const why = version === undefined ? "PostgreSQL is not installed" : `The data here were written by PostgreSQL ${version}, which is not installed`;
    throw new Refusal(`${why}. Install it with this command, then start again:\n\n  sudo apt-get install --yes ${debianPackage}\n`);
  }
  await installPostgres(debianPackage);
  const installed = fitting();
  if (!installed) throw new Refusal(`${debianPackage} was installed, but ${DEBIAN_ROOT} has no PostgreSQL ${version ?? `${OLDEST_VERSION} or newer`}.`);
  return installed;
}

/** Debian's package starts a cluster of its own on install unless told not to; ours is enough. */
async function installPostgres(debianPackage) {
  const folder = "/etc/postgresql-common/createcluster.d";
  const note = path.join(folder, "spotblue-install.conf");
  fs.mkdirSync(folder, { recursive: true });
  fs.writeFileSync(note, "create_main_cluster = false\n");
  try {
    await installDebianPackages([debianPackage]);
  } finally {
    // Only this install is meant: who adds a version later gets Debian's own way again.
    fs.rmSync(note, { force: true });
  }
}
