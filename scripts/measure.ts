// npm run -s measure -- FILE [--unit mm|in]: one JSON document of what the model is.
import { createHash } from "node:crypto";
import { closeSync, fstatSync, openSync, readSync, type Stats } from "node:fs";
import { basename, resolve } from "node:path";
import { Worker } from "node:worker_threads";
import { createStlMeasurer, type StlUnit } from "#app/geometry/measure-stl.ts";
import { UnreadableModel, type MeasureDocument } from "#app/geometry/measure-document.ts";
import { sniffModel, SNIFF_BYTES } from "#app/geometry/sniff-model.ts";

const USAGE = "usage: npm run -s measure -- FILE [--unit mm|in]";
const CHUNK_BYTES = 1 << 20;
/** From here on a second thread saves more time than it takes to start. */
const HASH_BESIDE_BYTES = 8 << 20;

/** What the person asked for can't be done; `message` is the line they read. */
class Refusal extends Error {}

interface Request {
  file: string;
  unit?: StlUnit;
}

function parseArguments(words: string[]): Request {
  const files: string[] = [];
  let unit: string | undefined;
  let onlyFiles = false;
  for (let at = 0; at < words.length; at++) {
    const word = words[at]!;
    if (onlyFiles || !word.startsWith("-")) files.push(word);
    else if (word === "--") onlyFiles = true;
    else if (word === "--unit") {
      unit = words[++at] ?? "";
    } else if (word.startsWith("--unit=")) unit = word.slice("--unit=".length);
    else throw new Refusal(`unknown option ${word}; ${USAGE}`);
  }
  if (unit !== undefined && unit !== "mm" && unit !== "in") throw new Refusal(`--unit must be mm or in, not "${unit}"; ${USAGE}`);
  const [file, second] = files;
  if (file === undefined) throw new Refusal(`no file named; ${USAGE}`);
  if (second !== undefined) throw new Refusal(`one file at a time: ${file}, ${second}; ${USAGE}`);
  return { file, unit };
}

async function measureFile({ file, unit }: Request): Promise<MeasureDocument> {
  const path = resolve(process.env.INIT_CWD ?? process.cwd(), file);
  const descriptor = openSync(path, "r");
  try {
    const before = fstatSync(descriptor);
    if (!before.isFile()) throw new UnreadableModel("is not a file; name an STL or STEP file");
    const head = Buffer.alloc(Math.min(SNIFF_BYTES, before.size));
    readSync(descriptor, head, 0, head.length, 0);
    const isStep = sniffModel(head, before.size) === "step";
    const measured = isStep
      ? await measureStepFile(descriptor, path, basename(file), before.size, unit)
      : await measureStlFile(descriptor, path, basename(file), before.size, unit);
    refuseChanged(before, fstatSync(descriptor));
    return measured;
  } finally {
    closeSync(descriptor);
  }
}

async function measureStlFile(descriptor: number, path: string, name: string, bytes: number, unit?: StlUnit): Promise<MeasureDocument> {
  const beside = bytes >= HASH_BESIDE_BYTES ? hashBeside(path) : null;
  // A refusal below must not leave a second, unheard one behind.
  beside?.hash.catch(() => {});
  try {
    const hash = beside ? null : createHash("sha256");
    const measurer = createStlMeasurer(bytes, { name, unit });
    for (const chunk of chunksOf(descriptor)) {
      hash?.update(chunk);
      measurer.push(chunk);
    }
    const document = measurer.finish(hash?.digest("hex") ?? "");
    if (beside) document.file.sha256 = await beside.hash;
    return document;
  } finally {
    await beside?.stop();
  }
}

async function measureStepFile(descriptor: number, path: string, name: string, bytes: number, unit?: StlUnit): Promise<MeasureDocument> {
  const hash = createHash("sha256");
  for (const chunk of chunksOf(descriptor)) hash.update(chunk);
  // Loaded here and only here: an STL must not wait for the kernel.
  const { measureStep } = await import("#app/kernel/measure-step.server.ts");
  const document = await measureStep(path, { name, sha256: hash.digest("hex"), bytes });
  if (unit !== undefined) document.warnings.push("A STEP file states its own unit; --unit was not used.");
  return document;
}

function hashBeside(path: string): { hash: Promise<string>; stop: () => Promise<unknown> } {
  const worker = new Worker(new URL("./sha256-worker.mjs", import.meta.url), { workerData: path, execArgv: [] });
  const hash = new Promise<string>((settle, fail) => {
    worker.once("message", settle);
    worker.once("error", fail);
  });
  return { hash, stop: () => worker.terminate() };
}

/** The file from its beginning in pieces; each is overwritten by the next. */
function* chunksOf(descriptor: number): Generator<Uint8Array> {
  const chunk = Buffer.allocUnsafe(CHUNK_BYTES);
  let position = 0;
  for (let read; (read = readSync(descriptor, chunk, 0, CHUNK_BYTES, position)) > 0; position += read) yield chunk.subarray(0, read);
}

function refuseChanged(before: Stats, after: Stats): void {
  if (before.size !== after.size || before.mtimeMs !== after.mtimeMs) throw new UnreadableModel("changed while it was read; try again");
}

/** The one line for a person, and what the shell is told: 2 for bad input, 1 for a fault of ours. */
function explain(error: unknown, file: string | undefined): { line: string; exitCode: number } {
  const named = (what: string) => `measure: ${file === undefined ? "" : `${file}: `}${what}`.replace(/\s+/g, " ");
  if (error instanceof Refusal) return { line: `measure: ${error.message}`, exitCode: 2 };
  if (error instanceof Error && error.name === "UnreadableModel") return { line: named(error.message), exitCode: 2 };
  const code = (error as NodeJS.ErrnoException).code;
  if (code === "ENOENT" || code === "ENOTDIR") return { line: named("no such file; check the path"), exitCode: 2 };
  if (code === "EACCES" || code === "EPERM") return { line: named("may not be read; check its permissions"), exitCode: 2 };
  if (code === "EISDIR") return { line: named("is a folder; name an STL or STEP file"), exitCode: 2 };
  if (error instanceof RangeError && /alloc|array length|buffer/i.test(error.message)) return { line: named("too large for the memory of this machine"), exitCode: 2 };
  return { line: named(`could not be measured (${error instanceof Error ? error.message : String(error)})`), exitCode: 1 };
}

// A reader that has seen enough (head, less) closes the pipe: nothing went wrong.
process.stdout.on("error", (error: NodeJS.ErrnoException) => {
  if (error.code !== "EPIPE") throw error;
});

let request: Request | undefined;
try {
  request = parseArguments(process.argv.slice(2));
  process.stdout.write(`${JSON.stringify(await measureFile(request), null, 2)}\n`);
} catch (error) {
  const { line, exitCode } = explain(error, request?.file);
  process.stderr.write(`${line}\n`);
  process.exitCode = exitCode;
}
