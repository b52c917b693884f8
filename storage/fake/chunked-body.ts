import { createHash } from "node:crypto";
import { S3Fault } from "./s3-fault.ts";

/** Of a chunk's or trailer's head; ours to bound what is kept while looking for its end. */
const LONGEST_LINE = 8 * 1024;

/** Says whether the next signature in the chain of chunks is right. */
export interface ChunkChain {
  checkChunk(signature: string, sha256Hex: string): Promise<void>;
  checkTrailer(signature: string, sha256Hex: string): Promise<void>;
}

/** Bytes taken out of a stream by count or by line. */
class Cursor {
  readonly #source: AsyncIterator<Uint8Array>;
  #rest: Buffer = Buffer.alloc(0);

  constructor(source: AsyncIterable<Uint8Array>) {
    this.#source = source[Symbol.asyncIterator]();
  }

  async #more(): Promise<Buffer> {
    const { value, done } = await this.#source.next();
    if (done) throw new S3Fault("IncompleteBody", "The body ended before its last chunk.");
    return Buffer.from(value.buffer, value.byteOffset, value.byteLength);
  }

  async *take(count: number): AsyncGenerator<Buffer> {
    while (count > 0) {
      if (this.#rest.byteLength === 0) this.#rest = await this.#more();
      const piece = this.#rest.subarray(0, count);
      this.#rest = this.#rest.subarray(piece.byteLength);
      count -= piece.byteLength;
      yield piece;
    }
  }

  async line(): Promise<string> {
    for (;;) {
      const end = this.#rest.indexOf("\r\n");
      if (end >= 0) {
        const line = this.#rest.toString("latin1", 0, end);
        this.#rest = this.#rest.subarray(end + 2);
        return line;
      }
      if (this.#rest.byteLength > LONGEST_LINE) throw new S3Fault("InvalidChunkSizeError", "The head of a chunk is too long.");
      this.#rest = Buffer.concat([this.#rest, await this.#more()]);
    }
  }

  /** Reads on to the end of the request, which must hold nothing more. */
  async end(): Promise<void> {
    if (this.#rest.byteLength > 0) throw new S3Fault("InvalidRequest", "Bytes follow the last chunk.");
    for (;;) {
      const { value, done } = await this.#source.next();
      if (done) return;
      if (value.byteLength > 0) throw new S3Fault("InvalidRequest", "Bytes follow the last chunk.");
    }
  }
}

/**
 * The bytes inside an `aws-chunked` framing.
 *
 * @param chain checks the signature of every chunk; without one the chunks are unsigned
 * @param trailers filled, names in lower case, by the time the last byte was given out
 */
export async function* decodeChunks(body: AsyncIterable<Uint8Array>, chain: ChunkChain | undefined, trailers: Map<string, string>): AsyncGenerator<Buffer> {
  const cursor = new Cursor(body);
  for (;;) {
    const [size = "", ...extensions] = (await cursor.line()).split(";");
    if (!/^[0-9a-f]{1,12}$/i.test(size.trim())) throw new S3Fault("InvalidChunkSizeError", `${size.slice(0, 40)} is not the size of a chunk.`);
    const bytes = parseInt(size, 16);
    const hash = chain && createHash("sha256");
    for await (const piece of cursor.take(bytes)) {
      hash?.update(piece);
      yield piece;
    }
    const signature = extensions.map((extension) => extension.trim()).find((extension) => extension.startsWith("chunk-signature="));
    if (chain && hash) await chain.checkChunk(signature?.slice("chunk-signature=".length) ?? "", hash.digest("hex"));
    if (bytes === 0) break;
    if ((await cursor.line()) !== "") throw new S3Fault("InvalidChunkSizeError", "A chunk is longer than its head says.");
  }
  let signed = "";
  for (let line = await cursor.line(); line !== ""; line = await cursor.line()) {
    const colon = line.indexOf(":");
    if (colon < 1) throw new S3Fault("InvalidRequest", "A trailer must be a name, a colon and a value.");
    const [name, value] = [line.slice(0, colon).trim().toLowerCase(), line.slice(colon + 1).trim()];
    if (name !== "x-amz-trailer-signature") signed += `${name}:${value}\n`;
    trailers.set(name, value);
  }
  if (chain && trailers.size > 0) await chain.checkTrailer(trailers.get("x-amz-trailer-signature") ?? "", createHash("sha256").update(signed).digest("hex"));
  await cursor.end();
}
