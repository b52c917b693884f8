import { spawn, type ChildProcess } from "node:child_process";
import { createHash, randomBytes, randomInt } from "node:crypto";
import { once } from "node:events";
import { mkdtemp, readFile, readdir, rm } from "node:fs/promises";
import os from "node:os";
import path from "node:path";
import { createInterface } from "node:readline";
import { Readable } from "node:stream";
import { setTimeout as sleep } from "node:timers/promises";
import { fileURLToPath } from "node:url";
import { afterAll, beforeAll, expect, test } from "vitest";
import { StoreError } from "#storage/client.server.ts";
import { ownStore, storeAt } from "./endpoint.ts";

// Our own store as a process that is killed and started again.
const ROOT = fileURLToPath(new URL("../../../", import.meta.url));
const KEYS = { S3_ACCESS_KEY_ID: "spotblue-test-key", S3_SECRET_ACCESS_KEY: "spotblue-test-secret" };
const sha = (bytes: Uint8Array) => createHash("sha256").update(bytes).digest("hex");
let dir: string;
const children = new Set<ChildProcess>();

beforeAll(async () => { dir = await mkdtemp(path.join(os.tmpdir(), "store-killed-")); });
afterAll(async () => {
  for (const child of children) child.kill("SIGKILL");
  await rm(dir, { recursive: true, force: true });
});

async function start(folder: string, port: number): Promise<{ child: ChildProcess; port: number }> {
  const child = spawn(process.execPath, ["--import", "tsx", "storage/fake/serve.ts", "--port", String(port), "--dir", folder], { cwd: ROOT, env: { PATH: process.env.PATH, ...KEYS }, stdio: ["ignore", "pipe", "inherit"] });
  children.add(child);
  child.once("exit", () => children.delete(child));
  const [line] = (await once(createInterface(child.stdout!), "line")) as [string];
  const said = JSON.parse(line) as { ready: boolean; port: number };
  expect(said.ready).toBe(true);
  return { child, port: said.port };
}

async function end(child: ChildProcess, signal: NodeJS.Signals): Promise<number | null> {
  const ended = once(child, "exit");
  child.kill(signal);
  return ((await ended) as [number | null])[0];
}

test("whatever was acknowledged before a kill -9 is there afterwards with its hash, and nothing else is left over", async () => {
  const folder = path.join(dir, "killed");
  let running = await start(folder, 0);
  const { port } = running;
  const store = storeAt(`http://127.0.0.1:${port}`);
  await store.ensureBucket();
  const acknowledged = new Map<string, string>();
  const removed = new Set<string>();
  let stopped = false;

  // Each writer waits for its store to come back, as a browser or a worker would.
  async function writer(name: string): Promise<void> {
    for (let i = 0; !stopped; i++) {
      const key = `${name}/${i}`;
      const bytes = randomBytes(randomInt(1, i % 7 === 0 ? 9 * 1024 * 1024 : 200_000));
      try {
        await store.put(key, i % 3 === 0 ? Readable.from([bytes]) : bytes, { contentType: "model/stl" });
        acknowledged.set(key, sha(bytes));
        if (i % 5 === 4) {
          acknowledged.delete(key);
          await store.remove(key);
          removed.add(key);
        }
      } catch (error) {
        if (!(error instanceof StoreError && error.reason === "unreachable")) throw error;
        await sleep(50);
      }
    }
  }
  const writers = ["a", "b", "c", "d"].map(writer);
  for (let kill = 0; kill < 8; kill++) {
    await sleep(randomInt(150, 700));
    await end(running.child, "SIGKILL");
    running = await start(folder, port);
  }
  stopped = true;
  await Promise.all(writers);

  expect(acknowledged.size).toBeGreaterThan(20);
  for (const [key, hash] of acknowledged) expect((await store.hashStored(key)).sha256, key).toBe(hash);
  for (const key of removed) expect(await store.head(key), key).toBeUndefined();
  for (const { key, uploadId } of await store.listUnfinished(new Date(Date.now() + 60_000))) await store.abortMultipart(key, uploadId);
  store.close();

  expect(await end(running.child, "SIGTERM")).toBe(0);
  // The next start takes away what no answer ever told of.
  const last = await start(folder, port);
  await end(last.child, "SIGTERM");
  const objects = path.join(folder, "buckets", "spotblue-test", "objects");
  const held = new Set<string>();
  for (const name of await readdir(objects)) {
    for (const { blob } of (JSON.parse(await readFile(path.join(objects, name), "utf8")) as { segments: Array<{ blob: string }> }).segments) held.add(blob);
  }
  expect((await readdir(path.join(folder, "blobs"))).sort()).toEqual([...held].sort());
}, 120_000);

test("it stops on being told to, finishing what is under way", async () => {
  const { child, port } = await start(path.join(dir, "told"), 0);
  const store = storeAt(`http://127.0.0.1:${port}`);
  await store.ensureBucket();
  const bytes = randomBytes(30 * 1024 * 1024);
  const putting = store.put("under-way", bytes, { contentType: "model/stl" });
  await sleep(150);
  const ended = end(child, "SIGTERM");
  await putting;
  store.close();
  expect(await ended).toBe(0);
  const again = await start(path.join(dir, "told"), 0);
  const back = storeAt(`http://127.0.0.1:${again.port}`);
  expect(await back.hashStored("under-way")).toEqual({ sha256: sha(bytes), bytes: bytes.byteLength });
  back.close();
  await end(again.child, "SIGTERM");
});

test("settings, parts and begun uploads are kept over a start", async () => {
  const first = await ownStore();
  const store = storeAt(first.fake.endpoint, { origins: ["http://127.0.0.1:4600"] });
  await store.ensureBucket();
  const uploadId = await store.beginMultipart("begun", "model/step");
  await fetch(await store.presignPart("begun", uploadId, 3, { seconds: 60 }), { method: "PUT", body: "part three" });
  await first.fake.stop();
  const { startFakeStore } = await import("#storage/fake/server.ts");
  const second = await startFakeStore({ port: first.fake.port, dir: first.dir, accessKeyId: KEYS.S3_ACCESS_KEY_ID, secretAccessKey: KEYS.S3_SECRET_ACCESS_KEY });
  const parts = await store.listParts("begun", uploadId);
  expect(parts).toEqual([{ partNumber: 3, etag: expect.any(String), bytes: 10 }]);
  const url = await store.presignPart("begun", uploadId, 4, { seconds: 60 });
  expect((await fetch(url, { method: "OPTIONS", headers: { origin: "http://127.0.0.1:4600", "access-control-request-method": "PUT" } })).status).toBe(200);
  await store.completeMultipart("begun", uploadId, parts!);
  expect((await store.hashStored("begun")).bytes).toBe(10);
  store.close();
  await second.stop();
  await rm(first.dir, { recursive: true });
});

test("half a gigabyte goes through without being held in memory", async () => {
  const { child, port } = await start(path.join(dir, "large"), 0);
  const store = storeAt(`http://127.0.0.1:${port}`);
  await store.ensureBucket();
  const piece = randomBytes(1024 * 1024);
  const total = 500;
  const hash = createHash("sha256");
  for (let i = 0; i < total; i++) hash.update(piece);
  const peak = async () => Number(/VmHWM:\s+(\d+) kB/.exec(await readFile(`/proc/${child.pid}/status`, "utf8"))![1]) / 1024;
  const before = await peak();
  // One request, as a client sends it that knows nothing of parts.
  const uploadId = await store.beginMultipart("large", "model/stl");
  const url = await store.presignPart("large", uploadId, 1, { seconds: 600 });
  async function* pieces() {
    for (let i = 0; i < total; i++) yield piece;
  }
  const sent = await fetch(url, { method: "PUT", body: Readable.toWeb(Readable.from(pieces())) as BodyInit, duplex: "half", headers: { "content-length": String(total * piece.byteLength) } } as RequestInit);
  expect(sent.status).toBe(200);
  await store.completeMultipart("large", uploadId, (await store.listParts("large", uploadId))!);
  const read = await store.hashStored("large");
  expect(read).toEqual({ sha256: hash.digest("hex"), bytes: total * piece.byteLength });
  expect((await peak()) - before).toBeLessThan(250);
  store.close();
  await end(child, "SIGTERM");
}, 120_000);
