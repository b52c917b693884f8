import { createHash } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import { whileLocked } from "./locks.mjs";
import { LOCAL, ROOT } from "./house.mjs";
import { runToEnd } from "./processes.mjs";
import { Refusal } from "./steps.mjs";

const BUILT_FROM = ["app", "db", "storage", "public", "package-lock.json", "tsconfig.json", "vite.config.ts", "react-router.config.ts"];
const MIGRATED_BY = ["db/migrate.ts", "db/protect.ts", "db/migrations", "app/jobs/queues.ts", "package-lock.json"];

function filesOf(at) {
  if (!fs.existsSync(at)) return [];
  if (!fs.statSync(at).isDirectory()) return [at];
  return fs.readdirSync(at).sort().flatMap((name) => filesOf(path.join(at, name)));
}

/** One hash over names and contents of files and folders: a change of any of them changes it. */
export function hashOf(places, root = ROOT) {
  const hash = createHash("sha256");
  for (const file of places.flatMap((place) => filesOf(path.join(root, place)))) {
    const content = fs.readFileSync(file);
    hash.update(`${path.relative(root, file)}\0${content.length}\0`).update(content);
  }
  return hash.digest("hex");
}

export const migrationsHash = () => hashOf(MIGRATED_BY);

/**
 * What node_modules lacks of the lock file; empty when it is complete. npm writes its own list
 * (`node_modules/.package-lock.json`) last, so an install cut off in between has none.
 */
export function missingPackages(root = ROOT) {
  const list = (file) => (fs.existsSync(file) ? JSON.parse(fs.readFileSync(file, "utf8")).packages : {});
  const installed = list(path.join(root, "node_modules/.package-lock.json"));
  return Object.entries(list(path.join(root, "package-lock.json")))
    .filter(([place, wanted]) => place !== "" && !wanted.link)
    // Packages for other systems are left out by npm and are not missed.
    .filter(([place, wanted]) => (installed[place] ? installed[place].version !== wanted.version : !wanted.optional && !wanted.devOptional))
    .map(([place]) => place);
}

/** Installs the locked packages if node_modules is not what the lock file says. */
export async function ensurePackages() {
  if (missingPackages().length === 0) return "in place";
  return whileLocked(path.join(LOCAL, "packages.lock"), async () => {
    if (missingPackages().length === 0) return "in place";
    const env = { ...process.env };
    delete env.NODE_ENV; // "production" leaves out what the build needs
    // Straight to the JavaScript of npm where we know it: the same npm that runs us.
    const npm = env.npm_execpath?.endsWith(".js") ? { command: process.execPath, args: [env.npm_execpath] } : { command: "npm", args: [] };
    const { code, output } = await runToEnd({ ...npm, args: [...npm.args, "ci", "--include=dev", "--no-audit", "--no-fund"], cwd: ROOT, env });
    if (code !== 0) throw new Refusal(`npm ci failed (exit code ${code}):\n${output.trimEnd().split("\n").slice(-30).join("\n")}`);
    return "installed from the lock file";
  });
}

/** The bundler prints its reason first and then long lists of modules. */
function fromFirstError(output) {
  const lines = output.trimEnd().split("\n");
  const first = Math.max(0, lines.findIndex((line) => /error|fail|could not/i.test(line)));
  return lines.slice(first, first + 25).join("\n");
}

const stampFile = () => path.join(ROOT, "build", "built-from");

function isBuilt(hash) {
  return fs.existsSync(path.join(ROOT, "build/server/index.js")) && fs.existsSync(stampFile()) && fs.readFileSync(stampFile(), "utf8") === hash;
}

/** Builds if anything changed that the build is made from. The stamp comes last: half a build has none. */
export async function ensureBuild({ show = false } = {}) {
  if (isBuilt(hashOf(BUILT_FROM))) return "up to date";
  return whileLocked(path.join(LOCAL, "build.lock"), async () => {
    const hash = hashOf(BUILT_FROM);
    if (isBuilt(hash)) return "up to date";
    fs.rmSync(stampFile(), { force: true });
    const { code, output } = await runToEnd({
      command: process.execPath, args: [path.join(ROOT, "node_modules/@react-router/dev/bin.js"), "build"], cwd: ROOT,
      env: { ...process.env, NODE_ENV: "production" }, show,
    });
    if (code !== 0) throw new Refusal(`The build failed (exit code ${code}):\n${fromFirstError(output)}`);
    fs.writeFileSync(stampFile(), hash);
    return "built";
  });
}
