import { createHash } from "node:crypto";
import type { Readable } from "node:stream";
import { UploadPartCommand, type S3Client } from "@aws-sdk/client-s3";
import type { StoredPart, multipartOf } from "./multipart.server.ts";
import { StoreError } from "./store-error.ts";

export interface PutOptions {
  contentType: string;
  /** What the bytes must be; refused as `corrupted` when they are not. */
  sha256Hex?: string;
  /** How many bytes must come; refused as `corrupted` when they do not. */
  bytes?: number;
  /** Refuse as `exists` instead of replacing an object. */
  ifAbsent?: boolean;
}

/** Held in memory at a time; S3 wants 5 MiB at least for every part but the last. */
const PART_BYTES = 8 * 1024 * 1024;

interface Sending {
  client: S3Client;
  Bucket: string;
  key: string;
  body: Readable;
  options: PutOptions;
  putBytes: (key: string, body: Uint8Array, options: PutOptions, digest: Buffer) => Promise<void>;
  multipart: ReturnType<typeof multipartOf>;
}

/**
 * Sends a stream of any length in parts, each of which can be sent again when the network fails;
 * a stream that fits in one part goes as one object. Nothing is stored unless all of it came.
 */
export async function putStream({ client, Bucket, key, body, options, putBytes, multipart }: Sending): Promise<{ sha256: string; bytes: number }> {
  const hash = createHash("sha256");
  const parts: StoredPart[] = [];
  const sent = { sha256: "", bytes: 0 };
  let uploadId: string | undefined;

  const sendPart = async (part: Buffer) => {
    uploadId ??= await multipart.beginMultipart(key, options.contentType);
    const PartNumber = parts.length + 1;
    // MD5, because a part may carry another checksum only if the upload was begun for it.
    const ContentMD5 = createHash("md5").update(part).digest("base64");
    const { ETag } = await client.send(new UploadPartCommand({ Bucket, Key: key, UploadId: uploadId, PartNumber, Body: part, ContentLength: part.byteLength, ContentMD5 }));
    parts.push({ partNumber: PartNumber, etag: ETag!, bytes: part.byteLength });
  };

  try {
    let last: Buffer = Buffer.alloc(0);
    for await (const part of inParts(body)) {
      hash.update(part);
      sent.bytes += part.byteLength;
      if (last.byteLength > 0) await sendPart(last);
      last = part;
    }
    const digest = hash.digest();
    sent.sha256 = digest.toString("hex");
    refuseOther(key, sent, options);
    if (!uploadId) {
      await putBytes(key, last, options, digest);
      return sent;
    }
    await sendPart(last);
    await multipart.completeMultipart(key, uploadId, parts, { ifAbsent: options.ifAbsent });
    return sent;
  } catch (error) {
    // What can't be thrown away now is found by the sweep of unfinished uploads.
    if (uploadId) await multipart.abortMultipart(key, uploadId).catch(() => undefined);
    throw error;
  }
}

/** Chunks of a stream gathered to whole parts; the last is shorter. */
async function* inParts(body: Readable): AsyncGenerator<Buffer> {
  let gathered: Buffer[] = [];
  let bytes = 0;
  for await (const chunk of body as AsyncIterable<Uint8Array | string>) {
    let rest = typeof chunk === "string" ? Buffer.from(chunk) : Buffer.from(chunk.buffer, chunk.byteOffset, chunk.byteLength);
    while (bytes + rest.byteLength >= PART_BYTES) {
      const room = PART_BYTES - bytes;
      yield Buffer.concat([...gathered, rest.subarray(0, room)]);
      gathered = [];
      bytes = 0;
      rest = rest.subarray(room);
    }
    if (rest.byteLength > 0) gathered.push(rest);
    bytes += rest.byteLength;
  }
  if (bytes > 0) yield Buffer.concat(gathered);
}

/** Refuses bytes that are not the ones announced. */
export function refuseOther(key: string, sent: { sha256: string; bytes: number }, { sha256Hex, bytes }: PutOptions): void {
  if (bytes !== undefined && bytes !== sent.bytes) throw new StoreError("corrupted", `Storing ${key}: ${sent.bytes} bytes came, ${bytes} were announced`);
  if (sha256Hex !== undefined && sha256Hex.toLowerCase() !== sent.sha256) throw new StoreError("corrupted", `Storing ${key}: the bytes have SHA-256 ${sent.sha256}, not ${sha256Hex}`);
}
