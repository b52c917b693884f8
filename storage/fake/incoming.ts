import { createHash } from "node:crypto";
import { amz, type Asked, type House } from "./asked.ts";
import type { Segment } from "./blobs.ts";
import { ALGORITHMS, algorithmNamed, startChecksum, type Algorithm, type Running } from "./checksums.ts";
import { decodeChunks } from "./chunked-body.ts";
import { S3Fault } from "./s3-fault.ts";

const LARGEST_PUT = 5 * 1024 ** 3;
/** Of what a client may send as XML; ours, S3 has limits by kind. */
const LARGEST_DOCUMENT = 4 * 1024 ** 2;

export interface Received {
  segment: Segment;
  md5Hex: string;
  checksums: Partial<Record<Algorithm, string>>;
}

/** The bytes a client means, out of whatever framing it sent them in. */
function unframed(asked: Asked): { bytes: AsyncIterable<Uint8Array>; length: number; trailers: Map<string, string> } {
  const trailers = new Map<string, string>();
  const chunked = asked.payload.kind === "chunked";
  const announced = chunked ? asked.headers["x-amz-decoded-content-length"] : asked.headers["content-length"];
  if (announced === undefined || !/^\d{1,15}$/.test(announced)) throw new S3Fault("MissingContentLength", "You must provide the Content-Length HTTP header.");
  const bytes = asked.payload.kind === "chunked" ? decodeChunks(asked.wire, asked.payload.chain, trailers) : asked.wire;
  return { bytes, length: Number(announced), trailers };
}

function contentMd5(asked: Asked): Buffer | undefined {
  const given = asked.headers["content-md5"];
  if (given === undefined) return undefined;
  const digest = Buffer.from(given, "base64");
  if (digest.byteLength !== 16) throw new S3Fault("InvalidDigest", "Content-MD5 must be 16 bytes in base 64.");
  return digest;
}

/** Checksums a request gives or announces, with the value where it comes before the body. */
function announcedChecksums(asked: Asked): Map<Algorithm, string | undefined> {
  const found = new Map<Algorithm, string | undefined>();
  for (const algorithm of ALGORITHMS) {
    const value = amz(asked, `x-amz-checksum-${algorithm}`);
    if (value !== undefined) found.set(algorithm, value);
  }
  const trailer = amz(asked, "x-amz-trailer")?.trim().toLowerCase();
  if (trailer) {
    if (!trailer.startsWith("x-amz-checksum-")) throw new S3Fault("InvalidRequest", "x-amz-trailer must name a checksum.");
    found.set(algorithmNamed(trailer.slice("x-amz-checksum-".length)), undefined);
  }
  return found;
}

/**
 * Writes the body to disk and checks everything that was said about it on the way.
 *
 * @throws S3Fault when length, MD5, SHA-256 or another checksum differ; nothing is kept then
 */
export async function receiveBody(asked: Asked, { catalog }: House, alsoCompute?: Algorithm): Promise<Received> {
  const { bytes, length, trailers } = unframed(asked);
  if (length > LARGEST_PUT) throw new S3Fault("EntityTooLarge", "One request may carry 5 GiB at most.");
  const expectedMd5 = contentMd5(asked);
  const announced = announcedChecksums(asked);
  const algorithms = new Set([...announced.keys(), ...(alsoCompute ? [alsoCompute] : [])]);
  const expectedSha = asked.payload.kind === "hashed" ? asked.payload.sha256Hex : undefined;
  const md5 = createHash("md5");
  const running = new Map<Algorithm, Running>();
  for (const algorithm of algorithms) running.set(algorithm, await startChecksum(algorithm));
  const signedSha = expectedSha === undefined ? undefined : createHash("sha256");

  async function* watched(): AsyncGenerator<Uint8Array> {
    let seen = 0;
    for await (const chunk of bytes) {
      seen += chunk.byteLength;
      if (seen > length) throw new S3Fault("InvalidRequest", "More bytes came than were announced.");
      md5.update(chunk);
      signedSha?.update(chunk);
      for (const one of running.values()) one.update(chunk);
      yield chunk;
    }
  }

  const { segment, finished } = await catalog.blobs.write(watched(), (count) => {
    if (count !== length) throw new S3Fault("IncompleteBody", `${length} bytes were announced and ${count} came.`);
    const md5Digest = md5.digest();
    if (expectedMd5 && !expectedMd5.equals(md5Digest)) throw new S3Fault("BadDigest", "The Content-MD5 you specified did not match what we received.");
    if (signedSha && signedSha.digest("hex") !== expectedSha) throw new S3Fault("XAmzContentSHA256Mismatch", "The provided 'x-amz-content-sha256' header does not match what was computed.");
    const checksums: Partial<Record<Algorithm, string>> = {};
    for (const [algorithm, one] of running) {
      const computed = one.digest().toString("base64");
      const given = announced.get(algorithm) ?? trailers.get(`x-amz-checksum-${algorithm}`);
      if (announced.has(algorithm) && given !== computed) throw new S3Fault("BadDigest", `The ${algorithm.toUpperCase()} you specified did not match the calculated checksum.`);
      checksums[algorithm] = computed;
    }
    return { md5Hex: md5Digest.toString("hex"), checksums };
  });
  return { segment, ...finished };
}

/** A body that is XML, checked as an object's would be. */
export async function receiveText(asked: Asked): Promise<string> {
  const { bytes } = unframed(asked);
  const chunks: Uint8Array[] = [];
  let count = 0;
  for await (const chunk of bytes) {
    count += chunk.byteLength;
    if (count > LARGEST_DOCUMENT) throw new S3Fault("EntityTooLarge", "The document is too long.");
    chunks.push(chunk);
  }
  const whole = Buffer.concat(chunks);
  const expectedMd5 = contentMd5(asked);
  if (expectedMd5 && !createHash("md5").update(whole).digest().equals(expectedMd5)) throw new S3Fault("BadDigest", "The Content-MD5 you specified did not match what we received.");
  if (asked.payload.kind === "hashed" && createHash("sha256").update(whole).digest("hex") !== asked.payload.sha256Hex) {
    throw new S3Fault("XAmzContentSHA256Mismatch", "The provided 'x-amz-content-sha256' header does not match what was computed.");
  }
  for (const [algorithm, given] of announcedChecksums(asked)) {
    if (given === undefined) continue;
    const running = await startChecksum(algorithm);
    running.update(whole);
    if (running.digest().toString("base64") !== given) throw new S3Fault("BadDigest", `The ${algorithm.toUpperCase()} you specified did not match the calculated checksum.`);
  }
  return whole.toString("utf8");
}
