// An entry of its own: one task, one answer, then the process ends and gives its memory back.
import { createWriteStream } from "node:fs";
import { Readable } from "node:stream";
import { pipeline } from "node:stream/promises";
import { Worker } from "node:worker_threads";
import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { measureInKernel } from "./measure-in-kernel.server.ts";
import { openKernel } from "./open-kernel.server.ts";
import { tessellateInKernel } from "./tessellate-in-kernel.server.ts";
import { BINARY_PIPE, type KernelMessage, type KernelTask } from "./kernel-protocol.ts";

// While the kernel computes, this thread hears nothing: a second one ends the process when its parent is gone.
new Worker(
  `const parent = process.ppid;
   setInterval(() => { if (process.ppid !== parent) process.kill(process.pid, "SIGKILL"); }, 1000);`,
  { eval: true, execArgv: [] },
).unref();

process.once("message", (task: KernelTask) => {
  void perform(task).then(() => process.exit(0));
});

async function perform(task: KernelTask): Promise<void> {
  const progress = (share: number, step: string) => process.send!({ kind: "progress", share, step } satisfies KernelMessage);
  try {
    progress(0, "starting");
    const kernel = await openKernel();
    if (task.kind === "measure") return await say({ kind: "done", result: measureInKernel(kernel, task.path, progress), bytes: 0 });
    const { parts, ...result } = tessellateInKernel(kernel, task.path, task.chord_mm, progress);
    const bytes = parts.reduce((sum, part) => sum + part.length, 0);
    await say({ kind: "done", result, bytes });
    await pipeline(Readable.from(parts), createWriteStream("", { fd: BINARY_PIPE }));
  } catch (error) {
    // Anything else is a trap of the kernel: it ends the process, and the parent finds the words.
    if (!(error instanceof UnreadableModel)) process.exit(70);
    await say({ kind: "refused", reason: error.message });
  }
}

function say(message: KernelMessage): Promise<void> {
  return new Promise((settle, fail) => process.send!(message, undefined, {}, (error) => (error ? fail(error) : settle())));
}
