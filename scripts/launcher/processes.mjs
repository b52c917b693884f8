import { spawn } from "node:child_process";
import fs from "node:fs";
import { setTimeout as sleep } from "node:timers/promises";
import { Refusal } from "./steps.mjs";

/**
 * When a process began, in clock ticks since the machine started; undefined when it is gone.
 * With its pid this names one process for good: pids are given out again.
 */
function beginOf(pid) {
  try {
    const stat = fs.readFileSync(`/proc/${pid}/stat`, "utf8");
    // The command stands in brackets and may hold blanks and brackets itself.
    const fields = stat.slice(stat.lastIndexOf(")") + 2).split(" ");
    return fields[0] === "Z" ? undefined : fields[19];
  } catch {
    return undefined;
  }
}

/** @returns {{ pid: number, begin: string | undefined }} */
export const identify = (pid) => ({ pid, begin: beginOf(pid) });

/** Whether the very process that `identify` named still runs. */
export const isRunning = (identity) => Boolean(identity?.begin) && beginOf(identity.pid) === identity.begin;

/** Ends a process by signal, with everything in its group if it does not obey in time. */
export async function endProcess(identity, { signal = "SIGTERM", patienceMs = 10_000 } = {}) {
  if (!isRunning(identity)) return;
  try { process.kill(identity.pid, signal); } catch { return; }
  for (const until = Date.now() + patienceMs; Date.now() < until; await sleep(25)) {
    if (!isRunning(identity)) return;
  }
  for (const target of [-identity.pid, identity.pid]) {
    try { process.kill(target, "SIGKILL"); } catch { /* gone by itself, or it led no group */ }
  }
  for (const until = Date.now() + 2_000; isRunning(identity) && Date.now() < until; ) await sleep(25);
}

/** The end of a file as text: what a child said last. */
export function lastLines(file, count = 25) {
  try {
    return fs.readFileSync(file, "utf8").trimEnd().split("\n").slice(-count).join("\n");
  } catch {
    return "";
  }
}

/**
 * Starts a child that goes on running. It writes to a file, not to a pipe of ours, so that it
 * can still be ended in order after we were killed; and it leads its own group, so that Ctrl-C
 * in a terminal reaches it only through us, in the right order.
 */
export function startChild({ name, command, args = [], env = process.env, cwd, logFile, account }) {
  const log = fs.openSync(logFile, "a", 0o600);
  const child = spawn(command, args, { cwd, env, stdio: ["ignore", log, log], detached: true, ...account });
  fs.closeSync(log);
  const handle = { name, logFile, identity: undefined, running: true, stopping: false, ended: undefined, stop: undefined };
  handle.ended = new Promise((resolve) => {
    child.once("error", (error) => { handle.running = false; resolve({ code: null, signal: null, error }); });
    child.once("exit", (code, signal) => { handle.running = false; resolve({ code, signal }); });
  });
  if (child.pid !== undefined) handle.identity = identify(child.pid);
  handle.stop = async (options) => {
    handle.stopping = true;
    if (handle.running) await endProcess(handle.identity, options);
    await handle.ended;
  };
  return handle;
}

/** "exit code 1", "SIGKILL": how a child came to its end. */
export const endInWords = ({ code, signal, error }) => (error ? error.message : signal ? `ended by ${signal}` : `exit code ${code}`);

/**
 * Waits until `isReady` says yes while the child lives.
 *
 * @throws Refusal with the last lines of its log when it ends before, or takes too long
 */
export async function untilReady(handle, isReady, { patienceMs = 60_000, everyMs = 40 } = {}) {
  let end;
  void handle.ended.then((how) => { end = how; });
  for (const until = Date.now() + patienceMs; ; await sleep(everyMs)) {
    if (await isReady()) return;
    if (end) throw new Refusal(`${handle.name} did not start (${endInWords(end)}). It said:\n${lastLines(handle.logFile)}`);
    if (Date.now() > until) throw new Refusal(`${handle.name} did not become ready within ${patienceMs / 1000} s. It said:\n${lastLines(handle.logFile)}`);
  }
}

/** Commands under way, so that an interrupted launcher can end them too. */
const underWay = new Set();

/** Ends every command that `runToEnd` still waits for. */
export async function endCommandsUnderWay(options) {
  await Promise.all([...underWay].map((identity) => endProcess(identity, options)));
}

/**
 * Runs a command to its end.
 *
 * @param {{ command: string, args?: string[], env?: NodeJS.ProcessEnv, cwd?: string, input?: string,
 *   show?: boolean, account?: { uid: number, gid: number } }} what
 *   `show` lets it write to our terminal; otherwise its output is returned
 * @returns {Promise<{ code: number | null, signal: string | null, output: string }>}
 */
export function runToEnd({ command, args = [], env = process.env, cwd, input, show = false, account }) {
  return new Promise((resolve, reject) => {
    const stream = show ? "inherit" : "pipe";
    const child = spawn(command, args, { cwd, env, stdio: [input === undefined ? "ignore" : "pipe", stream, stream], ...account });
    let output = "";
    for (const from of [child.stdout, child.stderr]) from?.setEncoding("utf8").on("data", (text) => { output += text; });
    if (input !== undefined) {
      child.stdin.on("error", () => {}); // it may end before it has read everything; its exit code says why
      child.stdin.end(input);
    }
    child.once("error", reject);
    if (child.pid === undefined) return;
    const identity = identify(child.pid);
    underWay.add(identity);
    child.once("close", (code, signal) => {
      underWay.delete(identity);
      resolve({ code, signal, output });
    });
  });
}

/** As `runToEnd`, and a failure becomes a Refusal that says what was tried and what it answered. */
export async function runOrRefuse(what, doing) {
  const { code, signal, output } = await runToEnd(what).catch((error) => ({ code: null, signal: null, output: error.message }));
  if (code !== 0) throw new Refusal(`${doing} failed (${signal ?? `exit code ${code}`}):\n${output.trimEnd().split("\n").slice(-40).join("\n")}`);
  return output;
}
