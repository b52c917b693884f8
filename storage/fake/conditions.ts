import type { Asked } from "./asked.ts";
import type { StoredObject } from "./catalog.ts";
import { S3Fault } from "./s3-fault.ts";

function names(header: string, object: StoredObject): boolean {
  return header.split(",").map((one) => one.trim().replace(/^W\//, "").replaceAll('"', "")).some((one) => one === "*" || one === object.etag);
}

/** Whether a write may go on, by what lies at the key. */
export function refuseByState(asked: Asked, present: StoredObject | undefined): void {
  const { "if-none-match": noneMatch, "if-match": match } = asked.headers;
  if (noneMatch !== undefined && present && names(noneMatch, present)) throw new S3Fault("PreconditionFailed", "At least one of the pre-conditions you specified did not hold: If-None-Match");
  if (match === undefined) return;
  if (!present) throw new S3Fault("NoSuchKey", "The specified key does not exist.");
  if (!names(match, present)) throw new S3Fault("PreconditionFailed", "At least one of the pre-conditions you specified did not hold: If-Match");
}

/**
 * Conditions of a read, in the order of RFC 9110 section 13.2.2.
 *
 * @returns whether the reader has it already
 */
export function refuseRead(asked: Asked, object: StoredObject): boolean {
  const { "if-match": match, "if-none-match": noneMatch, "if-modified-since": since, "if-unmodified-since": unless } = asked.headers;
  // The header counts whole seconds.
  const modified = Math.floor(object.modified / 1000) * 1000;
  if (match !== undefined ? !names(match, object) : unless !== undefined && modified > Date.parse(unless)) throw new S3Fault("PreconditionFailed", "At least one of the pre-conditions you specified did not hold");
  return noneMatch !== undefined ? names(noneMatch, object) : since !== undefined && modified <= Date.parse(since);
}
