import { randomBytes } from "node:crypto";
import { readdir } from "node:fs/promises";
import http from "node:http";
import path from "node:path";
import { Readable } from "node:stream";
import { buffer } from "node:stream/consumers";
import { PutObjectCommand, S3Client } from "@aws-sdk/client-s3";
import { getSignedUrl } from "@aws-sdk/s3-request-presigner";
import { afterEach, beforeEach, expect, test } from "vitest";
import { startFakeStore } from "#storage/fake/server.ts";
import type { Store } from "#storage/client.server.ts";
import { ownStore, storeAt } from "./endpoint.ts";

// What only our own store can be made to do, and what our client makes of it.
let own: Awaited<ReturnType<typeof ownStore>>;
let store: Store;
let ahead = 0;

beforeEach(async () => {
  ahead = 0;
  own = await ownStore({ now: () => Date.now() + ahead });
  store = storeAt(own.fake.endpoint);
  await store.ensureBucket();
});
afterEach(async () => {
  store.close();
  await own.close();
});

const put = (key: string, body: Buffer | string, more = {}) => store.put(key, Buffer.from(body), { contentType: "text/plain", ...more });
const blobs = () => readdir(path.join(own.dir, "blobs"));
const MANY = 100;

test("a busy moment is waited out, a busy store is unreachable", async () => {
  own.fake.faults.add({ effect: { kind: "unavailable" }, times: 2 });
  await put("a", "a");
  expect(own.fake.faults.left()).toBe(0);
  own.fake.faults.add({ effect: { kind: "unavailable" }, times: MANY });
  await expect(put("b", "b")).rejects.toMatchObject({ reason: "unreachable" });
  await expect(store.get("a")).rejects.toMatchObject({ reason: "unreachable" });
  own.fake.faults.clear();
  expect(await store.head("b")).toBeUndefined();
});

test("a request that is cut off stores nothing, and is sent again", async () => {
  const bytes = randomBytes(500_000);
  own.fake.faults.add({ effect: { kind: "cut-request", afterBytes: 100_000 }, operation: "PutObject" });
  await put("cut", bytes);
  expect((await buffer(await store.get("cut"))).equals(bytes)).toBe(true);
  own.fake.faults.add({ effect: { kind: "cut-request", afterBytes: 100_000 }, operation: "PutObject", times: MANY });
  await expect(put("cut-always", bytes)).rejects.toMatchObject({ reason: "unreachable" });
  own.fake.faults.clear();
  expect(await store.head("cut-always")).toBeUndefined();
  await expect.poll(blobs).toHaveLength(1);
});

test("an object that stops in the middle is never taken for the whole", async () => {
  await put("cut", randomBytes(300_000));
  own.fake.faults.add({ effect: { kind: "cut-answer", afterBytes: 100_000 }, operation: "GetObject", times: 3 });
  await expect(store.hashStored("cut")).rejects.toMatchObject({ reason: "unreachable" });
  await expect(store.get("cut").then(buffer)).rejects.toThrow();
  await expect(store.getRange("cut", 0, 200_000)).rejects.toMatchObject({ reason: "unreachable" });
  expect((await store.hashStored("cut")).bytes).toBe(300_000);
});

test("a lost answer to storing once is not taken for another's object", async () => {
  own.fake.faults.add({ effect: { kind: "lose-answer" }, operation: "PutObject" });
  await put("once", "mine", { ifAbsent: true });
  own.fake.faults.add({ effect: { kind: "lose-answer" }, operation: "PutObject" });
  await expect(put("once", "other", { ifAbsent: true })).rejects.toMatchObject({ reason: "exists" });
  expect((await buffer(await store.get("once"))).toString()).toBe("mine");
});

test("lost answers to parts, joining and ending come to the same end", async () => {
  own.fake.faults.add({ effect: { kind: "lose-answer" }, operation: "CompleteMultipartUpload" });
  own.fake.faults.add({ effect: { kind: "lose-answer" }, operation: "UploadPart" });
  const whole = randomBytes(20 * 1024 * 1024);
  const sent = await store.put("long", Readable.from([whole]), { contentType: "model/stl" });
  expect(own.fake.faults.left()).toBe(0);
  expect(await store.hashStored("long")).toEqual(sent);
  const uploadId = await store.beginMultipart("ended", "model/stl");
  own.fake.faults.add({ effect: { kind: "lose-answer" }, operation: "AbortMultipartUpload" });
  await store.abortMultipart("ended", uploadId);
  own.fake.faults.add({ effect: { kind: "lose-answer" }, operation: "DeleteObject" });
  await store.remove("long");
  await expect.poll(blobs).toEqual([]);
});

test("a slow store is waited for", async () => {
  await put("slow", randomBytes(100_000));
  own.fake.faults.add({ effect: { kind: "slow", delayMs: 200, bytesPerSecond: 400_000 }, operation: "GetObject" });
  const begun = performance.now();
  expect((await store.hashStored("slow")).bytes).toBe(100_000);
  expect(performance.now() - begun).toBeGreaterThan(400);
});

test("a fault meets only what it was planned for", async () => {
  own.fake.faults.add({ effect: { kind: "unavailable" }, operation: "GetObject", keyBeginsWith: "here/", times: MANY });
  await put("here/a", "a");
  await put("there/a", "a");
  expect((await buffer(await store.get("there/a"))).toString()).toBe("a");
  await expect(store.get("here/a")).rejects.toMatchObject({ reason: "unreachable" });
});

test("faults can be planned from outside only where that is allowed", async () => {
  const plan = (endpoint: string) => fetch(`${endpoint}/_faults`, { method: "POST", body: JSON.stringify([{ effect: { kind: "unavailable" }, times: 2 }]) });
  expect((await plan(own.fake.endpoint)).status).toBe(404);
  expect(own.fake.faults.left()).toBe(0);
  const dir = path.join(own.dir, "another");
  const open = await startFakeStore({ port: 0, dir, accessKeyId: "k", secretAccessKey: "s", faultsByRequest: true });
  expect(await (await plan(open.endpoint)).json()).toEqual({ left: 2 });
  expect(await (await fetch(`${open.endpoint}/_faults`, { method: "DELETE" })).json()).toEqual({ left: 0 });
  await open.stop();
});

test("an address ends on the second, and a wrong clock is told as that", async () => {
  await put("timed", "timed");
  const url = await store.presignGet("timed", { seconds: 60, filename: "a", contentType: "text/plain", inline: false });
  const status = async () => (await fetch(url)).status;
  ahead = 58_000;
  expect(await status()).toBe(200);
  ahead = 62_000;
  expect(await status()).toBe(403);
  ahead = -16 * 60_000;
  expect(await status()).toBe(403);
});

test("bytes that are replaced or removed while they are read stay readable to the end", async () => {
  const first = randomBytes(8 * 1024 * 1024);
  await put("read", first);
  own.fake.faults.add({ effect: { kind: "slow", bytesPerSecond: 40_000_000 }, operation: "GetObject" });
  const reading = await store.get("read");
  await put("read", "second");
  await store.remove("read");
  expect((await buffer(reading)).equals(first)).toBe(true);
  await expect.poll(blobs).toEqual([]);
});

test("what does not come whole or well leaves no bytes behind", async () => {
  const plain = new S3Client({ endpoint: own.fake.endpoint, region: "us-east-1", forcePathStyle: true, credentials: { accessKeyId: "spotblue-test-key", secretAccessKey: "spotblue-test-secret" } });
  await expect(plain.send(new PutObjectCommand({ Bucket: "spotblue-test", Key: "bad", Body: "abc", ChecksumCRC32: "AAAAAA==" }))).rejects.toThrow();
  const url = await getSignedUrl(plain, new PutObjectCommand({ Bucket: "spotblue-test", Key: "gone", ContentLength: 5_000_000 }), { expiresIn: 60, signableHeaders: new Set(["content-length"]) });
  plain.destroy();
  const request = http.request(url, { method: "PUT", headers: { "content-length": "5000000" } }).on("error", () => undefined);
  request.write(Buffer.alloc(300_000));
  await expect.poll(blobs).toHaveLength(1);
  request.destroy();
  await expect.poll(blobs).toEqual([]);
  expect(await store.head("gone")).toBeUndefined();
});

test("a large upload that is refused is told why", async () => {
  const url = await store.presignPart("a", "no-such-upload", 1, { seconds: 60 });
  const answer = await fetch(url, { method: "PUT", body: new Uint8Array(20 * 1024 * 1024) });
  expect(answer.status).toBe(404);
  expect(await answer.text()).toContain("NoSuchUpload");
});

test("a folder is held by one store at a time", async () => {
  await expect(startFakeStore({ port: 0, dir: own.dir, accessKeyId: "k", secretAccessKey: "s" })).rejects.toThrow(/in use by another store/);
});
