import fs from "node:fs";
import { setTimeout as sleep } from "node:timers/promises";
import { identify, isRunning } from "./processes.mjs";

/** What a JSON file holds, undefined when it is missing or was cut off while being written. */
export function readJson(file) {
  try {
    return JSON.parse(fs.readFileSync(file, "utf8"));
  } catch (error) {
    if (error.code === "ENOENT" || error instanceof SyntaxError) return undefined;
    throw error;
  }
}

/** Writes a file whole or not at all, readable by its owner only. */
export function writePrivately(file, text) {
  const unfinished = `${file}.${process.pid}.new`;
  fs.writeFileSync(unfinished, text, { mode: 0o600 });
  fs.renameSync(unfinished, file);
}

/**
 * Takes a lock file, or says who holds it. A lock whose holder is gone is taken over.
 *
 * @returns {{ holder?: { pid: number }, before?: object, release: () => void }} `before`: what a
 *   holder that crashed had noted in the lock
 */
export function takeLock(file) {
  let before;
  for (;;) {
    try {
      fs.writeFileSync(file, JSON.stringify(identify(process.pid)), { flag: "wx", mode: 0o600 });
      return { before, release: () => fs.rmSync(file, { force: true }) };
    } catch (error) {
      if (error.code !== "EEXIST") throw error;
    }
    const noted = readJson(file);
    if (isRunning(noted)) return { holder: noted, release: () => {} };
    before = noted;
    fs.rmSync(file, { force: true });
  }
}

/** Does the work while no other process of this clone does work under the same lock. */
export async function whileLocked(file, work) {
  for (;;) {
    const lock = takeLock(file);
    if (lock.holder) { await sleep(250); continue; }
    try {
      return await work();
    } finally {
      lock.release();
    }
  }
}
