import type { IncomingMessage } from "node:http";
import type { Catalog, KeptHeaders } from "./catalog.ts";
import { S3Fault } from "./s3-fault.ts";
import type { Keys, Payload, Signed } from "./signature.ts";

/** The store as its operations see it. */
export interface House {
  catalog: Catalog;
  keys: Keys;
  /** Milliseconds since 1970. */
  now: () => number;
}

/** One request, read and proven. */
export interface Asked {
  method: string;
  bucket: string;
  key: string;
  query: Signed["query"];
  headers: Signed["headers"];
  payload: Payload;
  /** The body as it comes over the wire. */
  wire: AsyncIterable<Uint8Array>;
}

export interface Answer {
  status: number;
  headers?: Record<string, string>;
  /** XML, or bytes as they are read. */
  body?: string | AsyncIterable<Uint8Array>;
  /** Called once the answer is sent or given up. */
  close?: () => Promise<void>;
}

export const xmlAnswer = (body: string, headers: Record<string, string> = {}): Answer => ({ status: 200, headers: { "Content-Type": "application/xml", ...headers }, body });

/** Bucket and key out of a path such as `/bucket/a/b.stl`, with its query. */
export function readAddress(url: string): { path: string; bucket: string; key: string; query: Signed["query"] } {
  const mark = url.indexOf("?");
  const query: Signed["query"] = {};
  try {
    const path = decodeURIComponent(mark < 0 ? url : url.slice(0, mark));
    for (const pair of mark < 0 ? [] : url.slice(mark + 1).split("&")) {
      if (pair === "") continue;
      const equals = pair.indexOf("=");
      const [name, value] = (equals < 0 ? [pair, ""] : [pair.slice(0, equals), pair.slice(equals + 1)]).map((text) => decodeURIComponent(text.replaceAll("+", " "))) as [string, string];
      const before = query[name];
      query[name] = before === undefined ? value : [before, value].flat();
    }
    const slash = path.indexOf("/", 1);
    return { path, query, bucket: path.slice(1, slash < 0 ? undefined : slash), key: slash < 0 ? "" : path.slice(slash + 1) };
  } catch {
    throw new S3Fault("InvalidURI", "The address can't be decoded.");
  }
}

/** Headers with names in lower case; what came several times is joined as S3 joins it. */
export function readHeaders(request: IncomingMessage): Record<string, string> {
  const headers: Record<string, string> = Object.create(null) as Record<string, string>;
  for (let i = 0; i < request.rawHeaders.length; i += 2) {
    const name = request.rawHeaders[i]!.toLowerCase();
    const value = request.rawHeaders[i + 1]!;
    headers[name] = headers[name] === undefined ? value : `${headers[name]},${value}`;
  }
  return headers;
}

/** A parameter of the query that is given once. */
export function param(asked: Pick<Asked, "query">, name: string): string | undefined {
  const value = asked.query[name];
  if (Array.isArray(value)) throw new S3Fault("InvalidArgument", `${name} is given more than once.`);
  return value;
}

/** A header of S3; presigned requests carry them in the address too. */
export function amz(asked: Asked, name: string): string | undefined {
  const given = asked.headers[name];
  if (given !== undefined) return given;
  const found = Object.keys(asked.query).find((key) => key.toLowerCase() === name);
  return found === undefined ? undefined : param(asked, found);
}

export function wholeNumber(text: string | undefined, otherwise: number, name: string, from: number, to: number): number {
  if (text === undefined || text === "") return otherwise;
  const value = /^\d{1,10}$/.test(text) ? Number(text) : NaN;
  if (!(value >= from && value <= to)) throw new S3Fault("InvalidArgument", `${name} must be a whole number from ${from} to ${to}.`);
  return value;
}

const KEPT = ["content-type", "cache-control", "content-disposition", "content-encoding", "content-language", "expires", "x-amz-storage-class"];

/** What an object keeps of the headers it was sent with. */
export function keptHeaders(asked: Asked): KeptHeaders {
  const kept: KeptHeaders = {};
  for (const name of KEPT) {
    const value = name.startsWith("x-amz-") ? amz(asked, name) : asked.headers[name];
    if (value !== undefined) kept[name] = value;
  }
  for (const [name, value] of [...Object.entries(asked.query), ...Object.entries(asked.headers)]) {
    if (name.toLowerCase().startsWith("x-amz-meta-") && typeof value === "string") kept[name.toLowerCase()] = value;
  }
  kept["content-type"] ??= "application/octet-stream";
  // The framing of the request is not the coding of the object.
  const coding = kept["content-encoding"]?.split(",").map((one) => one.trim()).filter((one) => one !== "aws-chunked" && one !== "").join(",");
  if (coding) kept["content-encoding"] = coding;
  else delete kept["content-encoding"];
  if (kept["x-amz-storage-class"] === "STANDARD") delete kept["x-amz-storage-class"];
  return kept;
}
