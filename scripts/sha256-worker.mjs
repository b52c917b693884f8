// Hashes a file beside the measuring of it: on a large STL the hash would cost as much as the
// reading. Plain JavaScript, so that the thread starts without a loader.
import { createHash } from "node:crypto";
import { closeSync, openSync, readSync } from "node:fs";
import { parentPort, workerData } from "node:worker_threads";

const hash = createHash("sha256");
const chunk = Buffer.allocUnsafe(1 << 20);
const file = openSync(workerData, "r");
for (let read; (read = readSync(file, chunk)) > 0; ) hash.update(chunk.subarray(0, read));
closeSync(file);
parentPort.postMessage(hash.digest("hex"));
