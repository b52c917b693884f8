import path from "node:path";

/** Pure folders may use these and nothing else of npm: no I/O, no clock, no React. */
const PURE_PACKAGES = ["zod", "three-mesh-bvh", "three", "meshoptimizer", "@noble/hashes", "ml-matrix", "ml-levenberg-marquardt", "simple-statistics", "@stdlib"];
const pure = { folders: ["domain", "engineering", "geometry", "units"], packages: PURE_PACKAGES };
const server = { packages: "any", env: true };

/**
 * Which folder may import which: imports go down only. `units` stands for app/units.ts, `env`
 * for the environment; top-level entries of app/ (server.ts, root.tsx …) stand above the table.
 */
const MAY_IMPORT = {
  routes: { ...server, folders: ["routes", "http", "services", "data", "components", "domain", "engineering", "geometry", "units"] },
  http: { ...server, folders: ["http", "services", "data", "domain", "units"] },
  // The rate limiter is a library with its own table, and takes the connection itself.
  services: { ...server, folders: ["services", "data", "db", "storage", "jobs", "domain", "engineering", "geometry", "units"] },
  jobs: { ...server, folders: ["jobs", "services", "data", "storage", "kernel", "domain", "engineering", "geometry", "units"] },
  kernel: { ...server, folders: ["kernel", "geometry", "units"] },
  // Of geometry, data takes the shape of a stored measure.
  data: { ...server, folders: ["data", "domain", "geometry", "db", "units"] },
  storage: { ...server, folders: ["storage"] },
  components: { packages: "any", folders: ["components", "domain", "engineering", "geometry", "units"], browser: true },
  domain: pure,
  engineering: pure,
  geometry: pure,
  units: { ...pure, folders: [] },
};

/** Where a path of ours belongs: "data", "env", "units", "app" for a top-level entry, else the top folder. */
function placeOf(fromRoot) {
  const [top, folder, ...rest] = fromRoot.split("/");
  if (top !== "app") return top;
  if (rest.length > 0) return folder;
  if (/^(env|environment)\.server\.ts$/.test(folder)) return "env";
  return folder === "units.ts" ? "units" : "app";
}

const npmName = (source) => source.split("/").slice(0, source.startsWith("@") ? 2 : 1).join("/");

/** Path from the clone's root that an import means, undefined for an npm or Node module. */
function targetOf(source, fromRoot) {
  if (source.startsWith("#")) return source.slice(1);
  if (source.startsWith(".")) return path.posix.join(path.posix.dirname(fromRoot), source);
  return undefined;
}

/**
 * Why a file may not import a module; undefined when it may.
 *
 * @param {string} fromRoot the importing file, as a path from the clone's root
 * @param {string} source what stands in the import
 */
export function reasonAgainst(fromRoot, source) {
  const place = placeOf(fromRoot);
  const rule = MAY_IMPORT[place];
  if (!rule || source.includes("/+types/")) return undefined;
  const target = targetOf(source, fromRoot);
  if (target === undefined) {
    const isNode = source.startsWith("node:");
    if (rule.browser && isNode) return `app/${place} is drawn in browsers and can't import ${source}`;
    if (rule.packages !== "any" && (isNode || !rule.packages.includes(npmName(source)))) return `app/${place} is pure: ${source} is not on its short list of packages; hand in what it would give as an argument`;
    return undefined;
  }
  const targetPlace = placeOf(target);
  if (targetPlace === "env") return rule.env || place === "storage" ? undefined : `${place} can't read the environment; hand in what it needs as an argument`;
  if (rule.browser && /\.server(\.tsx?)?$/.test(target)) return `app/${place} is drawn in browsers and can't import the server's ${source}`;
  if (rule.folders.includes(targetPlace)) return undefined;
  return `imports go down only: ${place} may import ${rule.folders.join(", ") || "nothing of ours"}, not ${targetPlace}`;
}

/** @type {import("eslint").Rule.RuleModule} */
export const importDirections = {
  meta: { type: "problem", schema: [], messages: { against: "{{reason}}." } },
  create(context) {
    const fromRoot = path.relative(context.cwd, context.filename).split(path.sep).join("/");
    const check = (node) => {
      if (typeof node.source?.value !== "string") return;
      const reason = reasonAgainst(fromRoot, node.source.value);
      if (reason) context.report({ node: node.source, messageId: "against", data: { reason } });
    };
    return { ImportDeclaration: check, ExportNamedDeclaration: check, ExportAllDeclaration: check, ImportExpression: check };
  },
};
