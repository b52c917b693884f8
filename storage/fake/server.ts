import { randomUUID } from "node:crypto";
import http, { type IncomingMessage, type ServerResponse } from "node:http";
import type { AddressInfo } from "node:net";
import { setTimeout as sleep } from "node:timers/promises";
import { readAddress, readHeaders, type Answer, type Asked, type House } from "./asked.ts";
import { openCatalog } from "./catalog.ts";
import { corsHeaders, preflightHeaders } from "./cors.ts";
import { holdFolder } from "./hold-folder.ts";
import { Cut, plannedFaults, suffer, type Effect, type Fault, type Faults } from "./faults.ts";
import { operationOf } from "./operations.ts";
import { S3Fault } from "./s3-fault.ts";
import { proveRequest, type Payload } from "./signature.ts";
import { errorDocument } from "./xml.ts";

export interface FakeStoreSettings {
  /** 0 takes any. */
  port: number;
  dir: string;
  accessKeyId: string;
  secretAccessKey: string;
  region?: string;
  /** Milliseconds since 1970, for tests that can't wait until an address expires. */
  now?: () => number;
  /** Takes faults by `POST /_faults` (a list of them) and drops them by `DELETE /_faults`, for tests in other processes. */
  faultsByRequest?: boolean;
}

export interface FakeStore {
  port: number;
  endpoint: string;
  faults: Faults;
  /** Takes no more requests, ends those under way, and returns once all is on disk. */
  stop: () => Promise<void>;
}

const FAULTS_PATH = "/_faults";
/** A refused upload is read on for so long, so that the client comes to reading why. */
const READ_ON_BYTES = 64 * 1024 * 1024;
const PATIENCE_AT_STOP_MS = 10_000;
const IDLE_MS = 65_000;
const SILENCE_MS = 120_000;

/**
 * An object store that speaks S3, on loopback and in one folder: for people who try the product
 * and for tests. It checks signatures and checksums as strictly as S3, answers only when what it
 * was given is on disk, and fails on demand.
 */
export async function startFakeStore(settings: FakeStoreSettings): Promise<FakeStore> {
  const { accessKeyId, secretAccessKey, region = "us-east-1", now = Date.now } = settings;
  const release = await holdFolder(settings.dir);
  const house: House = { catalog: await openCatalog(settings.dir), keys: { accessKeyId, secretAccessKey, region }, now };
  const faults = plannedFaults();
  const server = http.createServer((request, response) => {
    void serveOne(house, faults, settings.faultsByRequest ?? false, request, response).catch(() => response.destroy());
  });
  server.keepAliveTimeout = IDLE_MS;
  // A large file over a slow line is no attack here; a line on which nothing comes is dead.
  server.requestTimeout = 0;
  server.timeout = SILENCE_MS;
  await new Promise<void>((resolve, reject) => {
    server.once("error", reject);
    server.listen(settings.port, "127.0.0.1", resolve);
  }).catch(async (error: unknown) => {
    await release();
    throw error;
  });
  const { port } = server.address() as AddressInfo;

  return {
    port,
    endpoint: `http://127.0.0.1:${port}`,
    faults,
    async stop() {
      const closed = new Promise<void>((resolve) => server.close(() => resolve()));
      server.closeIdleConnections();
      const patience = new AbortController();
      await Promise.race([closed, sleep(PATIENCE_AT_STOP_MS, undefined, { signal: patience.signal }).catch(() => undefined)]);
      patience.abort();
      server.closeAllConnections();
      await closed;
      await house.catalog.settle();
      await release();
    },
  };
}

async function serveOne(house: House, faults: Faults, faultsByRequest: boolean, request: IncomingMessage, response: ServerResponse): Promise<void> {
  const requestId = randomUUID().replaceAll("-", "").slice(0, 16).toUpperCase();
  response.setHeader("x-amz-request-id", requestId);
  response.setHeader("Server", "spotblue-store");
  let effect: Effect | undefined;
  let answer: Answer;
  let cors: Record<string, string> = {};
  try {
    if (faultsByRequest && request.url === FAULTS_PATH) return await takeFaults(faults, request, response);
    const address = readAddress(request.url ?? "/");
    const method = request.method ?? "GET";
    const headers = readHeaders(request);
    const rules = house.catalog.findBucket(address.bucket)?.cors;
    if (method === "OPTIONS") {
      const asks = { origin: headers.origin, method: headers["access-control-request-method"], headers: headers["access-control-request-headers"] };
      return void response.writeHead(200, { ...preflightHeaders(rules, asks), "Content-Length": "0" }).end();
    }
    cors = corsHeaders(rules, headers.origin, method);
    const { name, run } = operationOf({ ...address, method, headers });
    effect = faults.meet(name, address.key);
    if (effect?.kind === "slow") await sleep(effect.delayMs ?? 0);
    // A form carries its signature inside.
    const payload: Payload = name === "PostObject" ? { kind: "unsigned" } : await proveRequest({ ...address, method, headers }, house.keys, house.now());
    if (effect?.kind === "unavailable") throw new S3Fault("SlowDown", "Please reduce your request rate.");
    const asked: Asked = { ...address, method, headers, payload, wire: bodyOf(request, effect) };
    answer = await run(asked, house);
    if (effect?.kind === "lose-answer") {
      await answer.close?.();
      throw new Cut();
    }
  } catch (error) {
    if (error instanceof Cut || request.socket.destroyed) return void request.socket.destroy();
    const fault = error instanceof S3Fault ? error : new S3Fault("InternalError", "We encountered an internal error. Please try again.");
    if (!(error instanceof S3Fault)) console.error(`${request.method} failed:`, error);
    answer = { status: fault.status, headers: { "Content-Type": "application/xml" }, body: errorDocument(fault.code, fault.message, (request.url ?? "").split("?")[0]!, requestId) };
  }
  await send(request, response, { ...answer, headers: { ...answer.headers, ...cors } }, effect);
}

/** The body, which stays open when reading it is given up, so that an answer can follow. */
function bodyOf(request: IncomingMessage, effect: Effect | undefined): AsyncIterable<Uint8Array> {
  const plain = { [Symbol.asyncIterator]: () => request.iterator({ destroyOnReturn: false }) as AsyncIterator<Uint8Array> };
  if (effect?.kind === "cut-request") return suffer(plain, { cutAfter: effect.afterBytes });
  if (effect?.kind === "slow" && effect.bytesPerSecond) return suffer(plain, { perSecond: effect.bytesPerSecond });
  return plain;
}

async function send(request: IncomingMessage, response: ServerResponse, answer: Answer, effect: Effect | undefined): Promise<void> {
  try {
    const headers: Record<string, string> = { ...answer.headers };
    const { body = "" } = answer;
    const bare = request.method === "HEAD" || answer.status === 304;
    if (typeof body === "string" && !bare && answer.status !== 204) headers["Content-Length"] = String(Buffer.byteLength(body));
    if (bare && typeof body === "string" && body !== "") delete headers["Content-Type"];
    if (!request.complete) headers.Connection = "close";
    response.writeHead(answer.status, headers);
    if (!bare && body !== "") {
      const bytes = typeof body === "string" ? once(body) : body;
      const sent = effect?.kind === "cut-answer" ? suffer(bytes, { cutAfter: effect.afterBytes }) : effect?.kind === "slow" && effect.bytesPerSecond ? suffer(bytes, { perSecond: effect.bytesPerSecond }) : bytes;
      for await (const chunk of sent) await write(response, chunk);
    }
    response.end();
    readOn(request);
  } catch {
    // Too late for an answer: the client must see that this one is not whole.
    request.socket.destroy();
  } finally {
    await answer.close?.();
  }
}

async function* once(text: string): AsyncGenerator<Uint8Array> {
  yield Buffer.from(text);
}

/** Waits for room, so that an object is never held in memory whole. */
async function write(response: ServerResponse, chunk: Uint8Array): Promise<void> {
  if (response.destroyed) throw new Cut();
  if (response.write(chunk)) return;
  await new Promise<void>((resolve, reject) => {
    const drained = () => { response.off("close", gone); resolve(); };
    const gone = () => { response.off("drain", drained); reject(new Cut()); };
    response.once("drain", drained);
    response.once("close", gone);
  });
}

function readOn(request: IncomingMessage): void {
  if (request.complete) return;
  let left = READ_ON_BYTES;
  request.on("data", (chunk: Buffer) => {
    left -= chunk.byteLength;
    if (left < 0) request.socket.destroy();
  });
  request.on("error", () => undefined);
  request.resume();
}

async function takeFaults(faults: Faults, request: IncomingMessage, response: ServerResponse): Promise<void> {
  if (request.method === "DELETE") faults.clear();
  else if (request.method === "POST") {
    const chunks: Buffer[] = [];
    for await (const chunk of request as AsyncIterable<Buffer>) chunks.push(chunk);
    for (const fault of JSON.parse(Buffer.concat(chunks).toString("utf8")) as Fault[]) faults.add(fault);
  }
  response.writeHead(200, { "Content-Type": "application/json" }).end(JSON.stringify({ left: faults.left() }));
}
