import { createHash, randomBytes } from "node:crypto";
import { Readable } from "node:stream";
import { buffer } from "node:stream/consumers";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { StoredObject, StoredPart } from "#storage/client.server.ts";
import { ORIGIN, openEndpoint, storeAt, type Endpoint } from "./endpoint.ts";

// Holds for every S3-compatible store; see endpoint.ts for how to name one.
let at: Endpoint;
beforeAll(async () => { at = await openEndpoint(); });
afterAll(() => at.close());

const MIB = 1024 * 1024;
const sha = (bytes: Uint8Array) => createHash("sha256").update(bytes).digest("hex");
const key = (name: string) => at.prefix + name;
const put = (name: string, body: Uint8Array | Readable | string, more = {}) => at.store.put(key(name), typeof body === "string" ? Buffer.from(body) : body, { contentType: "text/plain", ...more });
const read = async (name: string) => buffer(await at.store.get(key(name)));
const listed = async (prefix: string) => {
  const found: StoredObject[] = [];
  for await (const object of at.store.list(prefix)) found.push(object);
  return found;
};

describe("storing and reading", () => {
  test("gives back what was put, with its size and hash", async () => {
    const bytes = randomBytes(100_000);
    expect(await put("plain", bytes, { sha256Hex: sha(bytes), bytes: 100_000 })).toEqual({ sha256: sha(bytes), bytes: 100_000 });
    expect((await read("plain")).equals(bytes)).toBe(true);
    expect(await at.store.hashStored(key("plain"))).toEqual({ sha256: sha(bytes), bytes: 100_000 });
    const head = await at.store.head(key("plain"));
    expect(head).toMatchObject({ key: key("plain"), bytes: 100_000, contentType: "text/plain", etag: expect.stringMatching(/^"[^"]+"$/) });
    expect(Math.abs(head!.modified.getTime() - Date.now())).toBeLessThan(5 * 60_000);
  });

  test("an empty object is one", async () => {
    await put("empty", "");
    expect(await read("empty")).toHaveLength(0);
    expect(await at.store.hashStored(key("empty"))).toEqual({ sha256: sha(Buffer.alloc(0)), bytes: 0 });
    expect(await at.store.getRange(key("empty"), 0, -1)).toHaveLength(0);
    expect(await put("empty-stream", Readable.from([]))).toEqual({ sha256: sha(Buffer.alloc(0)), bytes: 0 });
  });

  test.each(["ünï cödé (1) + 100% #&=?.stl", "a//b", "../../escape", ".", "tab\tand'quote\"", "日本/図面.step", "x".repeat(900)])("any name will do: %j", async (name) => {
    const odd = `odd/${name}`;
    await put(odd, name);
    expect((await read(odd)).toString()).toBe(name);
    expect((await listed(key(odd))).map((object) => object.key)).toEqual([key(odd)]);
    await at.store.remove(key(odd));
    expect(await at.store.head(key(odd))).toBeUndefined();
  });

  test("a range ends where the object does", async () => {
    await put("range", "0123456789");
    const range = async (from: number, to: number) => (await at.store.getRange(key("range"), from, to)).toString();
    expect([await range(0, 3), await range(8, 100), await range(9, 9), await range(4, 3)]).toEqual(["0123", "89", "9", ""]);
    await expect(at.store.getRange(key("range"), 10, 20)).rejects.toMatchObject({ reason: "invalid" });
    await expect(at.store.getRange(key("range"), -1, 2)).rejects.toThrow(RangeError);
  });

  test("what is not there is missing, and removing it is no fault", async () => {
    expect(await at.store.head(key("nothing"))).toBeUndefined();
    await expect(at.store.get(key("nothing"))).rejects.toMatchObject({ reason: "missing" });
    await expect(at.store.hashStored(key("nothing"))).rejects.toMatchObject({ reason: "missing" });
    await at.store.remove(key("nothing"));
  });

  test("a list has every key below the prefix, in order, over several pages", async () => {
    const names = Array.from({ length: 1_105 }, (_, i) => `list/${String(i).padStart(5, "0")}`);
    for (let i = 0; i < names.length; i += 50) await Promise.all(names.slice(i, i + 50).map((name) => put(name, name)));
    await put("listed-beside", "x");
    const found = await listed(key("list/"));
    expect(found.map((object) => object.key)).toEqual(names.map(key));
    expect(new Set(found.map(({ bytes }) => bytes))).toEqual(new Set([10]));
    expect(await listed(key("no such"))).toEqual([]);
  });
});

describe("nothing is stored that is not what was meant", () => {
  test("bytes with another hash or length are refused before they are sent, a stream before it is joined", async () => {
    await expect(put("wrong", "abc", { sha256Hex: sha(Buffer.from("abd")) })).rejects.toMatchObject({ reason: "corrupted" });
    await expect(put("wrong", "abc", { bytes: 4 })).rejects.toMatchObject({ reason: "corrupted" });
    const long = Readable.from([Buffer.alloc(9 * MIB, 1), Buffer.alloc(9 * MIB, 2)]);
    await expect(put("wrong", long, { sha256Hex: sha(Buffer.from("another")) })).rejects.toMatchObject({ reason: "corrupted" });
    expect(await at.store.head(key("wrong"))).toBeUndefined();
    expect((await at.store.listUnfinished(new Date(Date.now() + 60 * 60_000))).filter((upload) => upload.key === key("wrong"))).toEqual([]);
  });

  test("a stream that fails leaves nothing, and its own error is told", async () => {
    async function* failing() {
      yield Buffer.alloc(9 * MIB);
      yield Buffer.alloc(9 * MIB);
      throw new Error("the disk went away");
    }
    await expect(put("failing", Readable.from(failing()))).rejects.toThrow("the disk went away");
    expect(await at.store.head(key("failing"))).toBeUndefined();
  });

  test("an object is replaced, unless it is not to be", async () => {
    await put("once", "first", { ifAbsent: true });
    await expect(put("once", "second", { ifAbsent: true })).rejects.toMatchObject({ reason: "exists" });
    await expect(put("once", Readable.from(["second"]), { ifAbsent: true })).rejects.toMatchObject({ reason: "exists" });
    expect((await read("once")).toString()).toBe("first");
    await put("once", "third");
    expect((await read("once")).toString()).toBe("third");
  });

  test("of many who store once at the same time, one does", async () => {
    const tries = await Promise.allSettled(Array.from({ length: 12 }, (_, i) => put("race", `try ${i}`, { ifAbsent: true })));
    const won = tries.flatMap((one, i) => (one.status === "fulfilled" ? [i] : []));
    expect(won).toHaveLength(1);
    expect((await read("race")).toString()).toBe(`try ${won[0]}`);
  });
});

describe("in parts", () => {
  const send = async (name: string, uploadId: string, partNumber: number, body: Buffer, seconds = 60) => {
    const url = await at.store.presignPart(key(name), uploadId, partNumber, { seconds });
    return fetch(url, { method: "PUT", body: new Uint8Array(body) });
  };

  test("a browser sends parts in any order, again, and finds out what is there", async () => {
    const [one, two] = [randomBytes(5 * MIB), randomBytes(1_000)];
    const uploadId = await at.store.beginMultipart(key("parts"), "model/step");
    expect(await at.store.listParts(key("parts"), uploadId)).toEqual([]);
    expect((await send("parts", uploadId, 2, Buffer.from("to be sent again"))).status).toBe(200);
    const answer = await send("parts", uploadId, 2, two);
    expect((await send("parts", uploadId, 1, one)).status).toBe(200);
    const parts = await at.store.listParts(key("parts"), uploadId);
    expect(parts!.map(({ partNumber, bytes }) => [partNumber, bytes])).toEqual([[1, 5 * MIB], [2, 1_000]]);
    expect(parts![1]!.etag).toBe(answer.headers.get("etag"));
    expect(await at.store.head(key("parts"))).toBeUndefined();

    await at.store.completeMultipart(key("parts"), uploadId, parts!.toReversed());
    expect(await at.store.hashStored(key("parts"))).toEqual({ sha256: sha(Buffer.concat([one, two])), bytes: 5 * MIB + 1_000 });
    expect((await at.store.head(key("parts")))!.contentType).toBe("model/step");
    expect((await at.store.getRange(key("parts"), 5 * MIB - 2, 5 * MIB + 1)).equals(Buffer.concat([one.subarray(-2), two.subarray(0, 2)]))).toBe(true);
    expect(await at.store.listParts(key("parts"), uploadId)).toBeUndefined();
    // As after an answer that was lost.
    await at.store.completeMultipart(key("parts"), uploadId, parts!);
  });

  test("a part of another size than was signed for is refused", async () => {
    const uploadId = await at.store.beginMultipart(key("sized"), "model/step");
    const url = await at.store.presignPart(key("sized"), uploadId, 1, { seconds: 60, bytes: 10 });
    expect((await fetch(url, { method: "PUT", body: "0123456789x" })).status).toBe(403);
    expect((await fetch(url, { method: "PUT", body: "0123456789" })).status).toBe(200);
    await at.store.abortMultipart(key("sized"), uploadId);
  });

  test("unknown, small or misnamed parts are not joined", async () => {
    const uploadId = await at.store.beginMultipart(key("bad"), "model/step");
    await send("bad", uploadId, 1, Buffer.from("small"));
    await send("bad", uploadId, 2, Buffer.from("last"));
    const parts = (await at.store.listParts(key("bad"), uploadId))!;
    const join = (list: StoredPart[]) => at.store.completeMultipart(key("bad"), uploadId, list);
    await expect(join(parts)).rejects.toMatchObject({ reason: "invalid" });
    await expect(join([{ ...parts[0]!, etag: '"0123456789abcdef0123456789abcdef"' }])).rejects.toMatchObject({ reason: "invalid" });
    await expect(join([{ ...parts[0]!, partNumber: 7 }])).rejects.toMatchObject({ reason: "invalid" });
    await join([parts[1]!]);
    expect((await read("bad")).toString()).toBe("last");
  });

  test("an upload that was ended is gone, twice ended too", async () => {
    const uploadId = await at.store.beginMultipart(key("ended"), "model/step");
    await send("ended", uploadId, 1, Buffer.from("x"));
    const parts = (await at.store.listParts(key("ended"), uploadId))!;
    const unfinished = async (then: Date) => (await at.store.listUnfinished(then)).filter((upload) => upload.key === key("ended"));
    expect(await unfinished(new Date(Date.now() + 60 * 60_000))).toEqual([{ key: key("ended"), uploadId, begunAt: expect.any(Date) }]);
    expect(await unfinished(new Date(Date.now() - 60 * 60_000))).toEqual([]);
    await at.store.abortMultipart(key("ended"), uploadId);
    await at.store.abortMultipart(key("ended"), uploadId);
    expect(await unfinished(new Date(Date.now() + 60 * 60_000))).toEqual([]);
    expect(await at.store.listParts(key("ended"), uploadId)).toBeUndefined();
    expect((await send("ended", uploadId, 2, Buffer.from("x"))).status).toBe(404);
    await expect(at.store.completeMultipart(key("ended"), uploadId, parts)).rejects.toMatchObject({ reason: "missing" });
  });

  test("a long stream arrives whole", async () => {
    const pieces = Array.from({ length: 37 }, (_, i) => randomBytes(500_000 + i));
    const whole = Buffer.concat(pieces);
    expect(await put("stream", Readable.from(pieces), { sha256Hex: sha(whole), bytes: whole.byteLength })).toEqual({ sha256: sha(whole), bytes: whole.byteLength });
    expect(await at.store.hashStored(key("stream"))).toEqual({ sha256: sha(whole), bytes: whole.byteLength });
  });
});

describe("addresses for browsers", () => {
  const presign = (name: string, more = {}) => at.store.presignGet(key(name), { seconds: 60, filename: "Größe 1.pdf", contentType: "application/pdf", inline: false, ...more });

  test("fetch the object under the name and kind that we chose", async () => {
    await put("sheet", "%PDF");
    const answer = await fetch(await presign("sheet"));
    expect(await answer.text()).toBe("%PDF");
    expect(answer.headers.get("content-type")).toBe("application/pdf");
    expect(answer.headers.get("content-disposition")).toBe(`attachment; filename="Große 1.pdf"; filename*=UTF-8''Gr%C3%B6%C3%9Fe%201.pdf`.replace("Große", "Groe"));
    expect((await fetch(await presign("sheet", { inline: true }))).headers.get("content-disposition")).toMatch(/^inline; /);
    expect((await fetch(await presign("sheet"), { headers: { range: "bytes=1-2" } })).status).toBe(206);
  });

  test("say nothing else than was signed", async () => {
    await put("sheet", "%PDF");
    await put("other", "secret");
    const url = await presign("sheet");
    const status = async (address: string, init?: RequestInit) => (await fetch(address, init)).status;
    expect(await status(url.replace("/sheet?", "/other?"))).toBe(403);
    expect(await status(url.replace("X-Amz-Expires=60", "X-Amz-Expires=6000"))).toBe(403);
    expect(await status(url.replace("attachment", "inline"))).toBe(403);
    expect(await status(`${url}&response-cache-control=public`)).toBe(403);
    expect(await status(url.split("?")[0]!)).toBe(403);
    expect(await status(url, { method: "PUT", body: "mine" })).toBe(403);
    expect(await status(url, { method: "DELETE" })).toBe(403);
    expect(await status(url)).toBe(200);
  });

  test("end when they were said to", async () => {
    await put("sheet", "%PDF");
    const url = await presign("sheet", { seconds: 1 });
    await expect.poll(async () => (await fetch(url)).status, { timeout: 10_000, interval: 300 }).toBe(403);
  });

  test("work for pages of the app's origin, and of no other", async () => {
    await put("sheet", "%PDF");
    const uploadId = await at.store.beginMultipart(key("cors"), "model/step");
    const url = await at.store.presignPart(key("cors"), uploadId, 1, { seconds: 60 });
    const preflight = (origin: string, method = "PUT") => fetch(url, { method: "OPTIONS", headers: { origin, "access-control-request-method": method, "access-control-request-headers": "content-type" } });
    const asked = await preflight(ORIGIN);
    expect(asked.status).toBe(200);
    expect(asked.headers.get("access-control-allow-origin")).toBe(ORIGIN);
    expect(asked.headers.get("access-control-allow-headers")).toMatch(/content-type/i);
    expect((await preflight("https://evil.example")).status).toBe(403);
    expect((await preflight(ORIGIN, "DELETE")).status).toBe(403);
    const sent = await fetch(url, { method: "PUT", body: "x", headers: { origin: ORIGIN } });
    expect(sent.headers.get("access-control-allow-origin")).toBe(ORIGIN);
    expect(sent.headers.get("access-control-expose-headers")).toMatch(/etag/i);
    const got = await fetch(await presign("sheet"), { headers: { origin: "https://evil.example" } });
    expect(got.headers.get("access-control-allow-origin")).toBeNull();
    // A page must be able to read why it was refused.
    const refused = await fetch(url.replace("partNumber=1", "partNumber=2"), { method: "PUT", body: "x", headers: { origin: ORIGIN } });
    expect([refused.status, refused.headers.get("access-control-allow-origin")]).toEqual([403, ORIGIN]);
    await at.store.abortMultipart(key("cors"), uploadId);
  });
});

describe("faults are told apart", () => {
  test("a wrong secret is refused, a bucket that is not there is missing, nobody there is unreachable", async () => {
    const { settings } = at;
    const stranger = storeAt(settings.endpoint, { ...settings, secretAccessKey: "guessed" });
    await expect(stranger.get(key("plain"))).rejects.toMatchObject({ reason: "refused" });
    await expect(stranger.ensureBucket()).rejects.toMatchObject({ reason: "refused" });
    stranger.close();
    const lost = storeAt(settings.endpoint, { ...settings, bucket: `${settings.bucket}-not-there` });
    await expect(lost.put("a", Buffer.from("a"), { contentType: "text/plain" })).rejects.toMatchObject({ reason: "missing" });
    lost.close();
    const nobody = storeAt("http://127.0.0.1:9", { ...settings, endpoint: "http://127.0.0.1:9" });
    await expect(nobody.get("a")).rejects.toMatchObject({ reason: "unreachable" });
    await expect(nobody.put("a", Buffer.from("a"), { contentType: "text/plain" })).rejects.toMatchObject({ reason: "unreachable" });
    await expect(nobody.list("").next()).rejects.toMatchObject({ reason: "unreachable" });
    nobody.close();
  });
});
