import { fork, type ChildProcess } from "node:child_process";
import { readFile, stat } from "node:fs/promises";
import { createRequire } from "node:module";
import type { Readable } from "node:stream";
import { fileURLToPath, pathToFileURL } from "node:url";
import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { BINARY_PIPE, type KernelMessage, type KernelTask } from "./kernel-protocol.ts";

const MEMORY_LIMIT = 2 * 1024 ** 3;
const TIME_LIMIT_MS = 120_000;
/** Memory can grow by hundreds of megabytes a second; WebAssembly itself stops at four gigabytes. */
const WATCH_EVERY_MS = 50;

/**
 * Up to here a file is read before an optimising compiler has paid for itself: without it a small
 * part takes a third of the time, and a part of this size about as long.
 */
const UNOPTIMISED_BYTES = 2 * 1024 ** 2;

export interface KernelRun {
  /** Share done from 0 to 1, and what is being done. */
  onProgress?: (share: number, step: string) => void;
  /** Ends the process; the promise then rejects with the signal's reason. */
  signal?: AbortSignal;
  /** Resident memory of the process, in bytes. Watched where the system has /proc (Linux). */
  memoryLimit?: number;
  timeLimit_ms?: number;
}

export interface KernelAnswer<Result> {
  result: Result;
  bytes: Uint8Array;
}

/**
 * Does one task in a kernel process of its own, within limits, and ends the process.
 *
 * Whatever the file does to the kernel, this process lives on and gets an answer or a reason.
 *
 * @throws UnreadableModel when the file is refused, breaks the kernel, or exceeds a limit
 */
export async function runKernel<Result>(task: KernelTask, { onProgress, signal, memoryLimit = MEMORY_LIMIT, timeLimit_ms = TIME_LIMIT_MS }: KernelRun = {}): Promise<KernelAnswer<Result>> {
  signal?.throwIfAborted();
  const { size } = await stat(task.path);
  const child = startProcess(size <= UNOPTIMISED_BYTES ? ["--liftoff-only"] : []);
  const pieces: Uint8Array[] = [];
  let received = 0;
  const binary = child.stdio[BINARY_PIPE] as Readable;
  // A pipe that breaks when its process dies: the process's end says enough.
  binary.on("error", () => {});

  let ended = false;
  let timer: NodeJS.Timeout | undefined;
  let onAbort: (() => void) | undefined;
  try {
    const done = await new Promise<Extract<KernelMessage, { kind: "done" }>>((settle, fail) => {
      let answer: Extract<KernelMessage, { kind: "done" }> | undefined;
      // Once answer and bytes are here nothing is waited for: a kernel takes a second to put itself away.
      const settleWhenWhole = () => answer && received >= answer.bytes && settle(answer);
      binary.on("data", (piece: Uint8Array) => {
        pieces.push(piece);
        received += piece.length;
        settleWhenWhole();
      });
      child.on("message", (message: KernelMessage) => {
        if (message.kind === "progress") {
          try {
            onProgress?.(message.share, message.step);
          } catch (error) {
            fail(error);
          }
        } else if (message.kind === "refused") fail(new UnreadableModel(message.reason));
        else if (message.kind === "done") {
          answer = message;
          settleWhenWhole();
        }
      });
      child.on("error", fail);
      // "close" comes after message channel and pipe are read to their end; "exit" may come before.
      child.once("close", () => {
        ended = true;
        fail(new UnreadableModel("broke the geometry kernel while it was read; it is damaged or uses geometry that can't be read. Check and repair the part in the CAD program, and save it again as STEP"));
      });
      timer = setTimeout(() => fail(new UnreadableModel(`took longer than ${inWords(timeLimit_ms)} to read and was stopped; simplify the part, or split the assembly`)), timeLimit_ms);
      onAbort = () => fail(signal!.reason);
      signal?.addEventListener("abort", onAbort, { once: true });
      watchMemory(child, memoryLimit, () => ended, () => fail(new UnreadableModel(`needs more than ${Math.round(memoryLimit / 1024 ** 2)} MB of memory and was stopped; simplify the part, or split the assembly`)));
      child.send(task, (error) => error && fail(error));
    });
    const bytes = Buffer.concat(pieces);
    if (bytes.length !== done.bytes) throw new UnreadableModel("could not be read to its end; try again");
    return { result: done.result as Result, bytes };
  } finally {
    ended = true;
    clearTimeout(timer);
    if (onAbort) signal?.removeEventListener("abort", onAbort);
    child.kill("SIGKILL");
  }
}

function startProcess(engineOptions: string[]): ChildProcess {
  const require = createRequire(import.meta.url);
  return fork(fileURLToPath(new URL("./kernel-process.server.ts", import.meta.url)), [], {
    execArgv: [...engineOptions, "--import", pathToFileURL(require.resolve("tsx")).href],
    serialization: "advanced",
    stdio: ["ignore", "ignore", "ignore", "ipc", "pipe"],
    // It needs nothing of ours: no addresses, no secrets.
    env: { PATH: process.env.PATH, TMPDIR: process.env.TMPDIR, HOME: process.env.HOME },
  });
}

function watchMemory(child: ChildProcess, limit: number, ended: () => boolean, onExceeded: () => void): void {
  const look = async () => {
    if (ended()) return;
    const status = await readFile(`/proc/${child.pid}/status`, "utf8").catch(() => "");
    const resident = Number(/^VmRSS:\s+(\d+) kB/m.exec(status)?.[1] ?? 0) * 1024;
    if (resident > limit) return onExceeded();
    setTimeout(look, WATCH_EVERY_MS);
  };
  void look();
}

function inWords(ms: number): string {
  return ms >= 1000 ? `${Math.round(ms / 1000)} s` : `${ms} ms`;
}
