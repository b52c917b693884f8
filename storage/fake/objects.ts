import { createHash } from "node:crypto";
import { amz, keptHeaders, param, xmlAnswer, type Answer, type Asked, type House } from "./asked.ts";
import type { StoredObject } from "./catalog.ts";
import { refuseByState, refuseRead } from "./conditions.ts";
import { receiveBody, receiveText } from "./incoming.ts";
import { S3Fault } from "./s3-fault.ts";
import { branch, elements, leaf, parseRoot, textOf, xmlDocument } from "./xml.ts";

const LONGEST_KEY_BYTES = 1024;
const MOST_DELETED_AT_ONCE = 1000;

export function refuseKey(key: string): void {
  if (Buffer.byteLength(key) > LONGEST_KEY_BYTES) throw new S3Fault("KeyTooLongError", "Your key is too long");
}

export function findObject({ catalog }: House, bucket: string, key: string): StoredObject {
  const object = catalog.bucketNamed(bucket).objects.get(key);
  if (!object) throw new S3Fault("NoSuchKey", "The specified key does not exist.");
  return object;
}

export function checksumHeaders({ checksums, checksumType }: Pick<StoredObject, "checksums" | "checksumType">): Record<string, string> {
  const entries = Object.entries(checksums).map(([algorithm, value]) => [`x-amz-checksum-${algorithm}`, value] as const);
  return entries.length === 0 ? {} : { ...Object.fromEntries(entries), "x-amz-checksum-type": checksumType };
}

export async function putObject(asked: Asked, house: House): Promise<Answer> {
  const { catalog } = house;
  refuseKey(asked.key);
  // Refused before the body comes where that can be told already; decided again when it is stored.
  refuseByState(asked, catalog.bucketNamed(asked.bucket).objects.get(asked.key));
  const { segment, md5Hex, checksums } = await receiveBody(asked, house);
  const object: StoredObject = { key: asked.key, bytes: segment.bytes, etag: md5Hex, modified: house.now(), headers: keptHeaders(asked), checksums, checksumType: "FULL_OBJECT", segments: [segment] };
  try {
    await catalog.putObject(asked.bucket, object, (present) => refuseByState(asked, present));
  } catch (error) {
    await catalog.blobs.release(object.segments);
    throw error;
  }
  return { status: 200, headers: { ETag: `"${md5Hex}"`, ...checksumHeaders(object) } };
}

/** First and last byte that a Range header asks for; undefined when it is to be ignored. */
function rangeOf(header: string | undefined, bytes: number): { from: number; to: number } | undefined {
  const [, first, last] = /^bytes=(\d*)-(\d*)$/.exec(header ?? "") ?? [];
  if (first === undefined || last === undefined || (first === "" && last === "")) return undefined;
  const from = first === "" ? Math.max(bytes - Number(last), 0) : Number(first);
  const to = first === "" || last === "" ? bytes - 1 : Math.min(Number(last), bytes - 1);
  if (first !== "" && last !== "" && Number(last) < Number(first)) return undefined;
  if (from >= bytes || (first === "" && Number(last) === 0)) throw new S3Fault("InvalidRange", "The requested range is not satisfiable");
  return { from, to };
}

const OVERRIDES = ["content-type", "content-disposition", "content-language", "content-encoding", "cache-control", "expires"];

/** Answers GET and HEAD. */
export async function getObject(asked: Asked, house: House): Promise<Answer> {
  const version = param(asked, "versionId");
  if (version !== undefined && version !== "null") throw new S3Fault("NoSuchVersion", "This store keeps no versions.");
  const object = findObject(house, asked.bucket, asked.key);
  const notModified = refuseRead(asked, object);
  const fixed = { ETag: `"${object.etag}"`, "Last-Modified": new Date(object.modified).toUTCString(), "Accept-Ranges": "bytes" };
  if (notModified) return { status: 304, headers: fixed };
  const ifRange = asked.headers["if-range"];
  const range = ifRange !== undefined && ifRange !== fixed.ETag && ifRange !== fixed["Last-Modified"] ? undefined : rangeOf(asked.headers.range, object.bytes);
  const { from, to } = range ?? { from: 0, to: object.bytes - 1 };
  const headers: Record<string, string> = { ...object.headers, ...fixed, "Content-Length": String(to - from + 1) };
  if (range) headers["Content-Range"] = `bytes ${from}-${to}/${object.bytes}`;
  else if (amz(asked, "x-amz-checksum-mode")?.toUpperCase() === "ENABLED") Object.assign(headers, checksumHeaders(object));
  for (const name of OVERRIDES) {
    const value = param(asked, `response-${name}`);
    if (value !== undefined) headers[name] = value;
  }
  const status = range ? 206 : 200;
  if (asked.method === "HEAD") return { status, headers };
  const reader = house.catalog.blobs.open(object.segments);
  return { status, headers, body: reader.read(from, to + 1), close: reader.close };
}

/** The object that `x-amz-copy-source` names, and whether it is as the request wants it. */
export function copySource(asked: Asked, house: House): StoredObject {
  let source: string;
  try {
    source = decodeURIComponent((amz(asked, "x-amz-copy-source") ?? "").replace(/\?versionId=null$/, ""));
  } catch {
    throw new S3Fault("InvalidArgument", "x-amz-copy-source can't be decoded.");
  }
  const [, bucket, key] = /^\/?([^/]+)\/(.+)$/s.exec(source) ?? [];
  if (!bucket || !key) throw new S3Fault("InvalidArgument", "x-amz-copy-source must name a bucket and a key.");
  const object = findObject(house, bucket, key);
  const { "x-amz-copy-source-if-match": match, "x-amz-copy-source-if-none-match": noneMatch } = asked.headers;
  if (match !== undefined && match.replaceAll('"', "") !== object.etag) throw new S3Fault("PreconditionFailed", "The source is another one.");
  if (noneMatch !== undefined && noneMatch.replaceAll('"', "") === object.etag) throw new S3Fault("PreconditionFailed", "The source is that one.");
  return object;
}

export async function copyObject(asked: Asked, house: House): Promise<Answer> {
  const { catalog } = house;
  refuseKey(asked.key);
  const source = copySource(asked, house);
  const replace = amz(asked, "x-amz-metadata-directive")?.toUpperCase() === "REPLACE";
  if (!replace && catalog.bucketNamed(asked.bucket).objects.get(asked.key) === source) {
    throw new S3Fault("InvalidRequest", "This copy request is illegal because it is trying to copy an object to itself without changing the object's metadata.");
  }
  const object: StoredObject = { ...source, key: asked.key, modified: house.now(), headers: replace ? keptHeaders(asked) : source.headers };
  catalog.blobs.hold(object.segments);
  try {
    await catalog.putObject(asked.bucket, object, (present) => refuseByState(asked, present));
  } catch (error) {
    await catalog.blobs.release(object.segments);
    throw error;
  }
  return xmlAnswer(xmlDocument("CopyObjectResult", leaf("LastModified", new Date(object.modified).toISOString()), leaf("ETag", `"${object.etag}"`)));
}

export async function deleteObject(asked: Asked, { catalog }: House): Promise<Answer> {
  const ifMatch = asked.headers["if-match"];
  if (ifMatch !== undefined) refuseByState(asked, catalog.bucketNamed(asked.bucket).objects.get(asked.key));
  await catalog.removeObject(asked.bucket, asked.key);
  return { status: 204 };
}

export async function deleteObjects(asked: Asked, { catalog }: House): Promise<Answer> {
  const text = await receiveText(asked);
  // S3 refuses this one request unless its body is protected.
  const guarded = asked.headers["content-md5"] !== undefined || Object.keys(asked.headers).some((name) => name.startsWith("x-amz-checksum-")) || asked.headers["x-amz-trailer"] !== undefined || asked.payload.kind === "hashed";
  if (!guarded) throw new S3Fault("InvalidRequest", "Missing required header for this request: Content-MD5 or a checksum");
  const root = parseRoot(text, "Delete");
  const keys = elements(root, "Object").map((object) => textOf(object, "Key") ?? "");
  if (keys.length === 0 || keys.length > MOST_DELETED_AT_ONCE || keys.includes("")) throw new S3Fault("MalformedXML", "Name 1 to 1000 keys.");
  for (const key of keys) await catalog.removeObject(asked.bucket, key);
  const quiet = textOf(root, "Quiet") === "true";
  return xmlAnswer(xmlDocument("DeleteResult", ...(quiet ? [] : keys.map((key) => branch("Deleted", leaf("Key", key))))));
}

/** ETag of an object in parts: MD5 of the parts' MD5, and their number. */
export function etagOfParts(etags: readonly string[]): string {
  return `${createHash("md5").update(Buffer.from(etags.join(""), "hex")).digest("hex")}-${etags.length}`;
}
