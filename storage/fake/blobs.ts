import { randomUUID } from "node:crypto";
import { createReadStream } from "node:fs";
import fs from "node:fs/promises";
import path from "node:path";
import { syncFolder } from "./durable.ts";

/** A run of stored bytes; an object made of parts has several. */
export interface Segment {
  blob: string;
  bytes: number;
}

const READ_AT_ONCE = 1 << 20;

export type Blobs = ReturnType<typeof blobsIn>;

/**
 * Files of bytes, each written once and named by chance. Whoever points to one holds it, readers
 * too; it is deleted when nobody does any more.
 */
export function blobsIn(folder: string) {
  const held = new Map<string, number>();
  const fileOf = (blob: string) => path.join(folder, blob);

  function hold(segments: readonly Segment[]): void {
    for (const { blob } of segments) held.set(blob, (held.get(blob) ?? 0) + 1);
  }

  async function release(segments: readonly Segment[]): Promise<void> {
    for (const { blob } of segments) {
      const others = (held.get(blob) ?? 1) - 1;
      if (others > 0) held.set(blob, others);
      else {
        held.delete(blob);
        await fs.rm(fileOf(blob), { force: true });
      }
    }
  }

  return {
    hold,
    release,

    /**
     * Writes the bytes and has them on disk before it returns; held for the caller.
     *
     * @param finish says whether all is well once the last byte came; nothing is kept when it throws
     */
    async write<T>(source: AsyncIterable<Uint8Array>, finish: (bytes: number) => T | Promise<T>): Promise<{ segment: Segment; finished: T }> {
      const segment = { blob: randomUUID(), bytes: 0 };
      const handle = await fs.open(fileOf(segment.blob), "wx");
      try {
        for await (const chunk of source) {
          for (let at = 0; at < chunk.byteLength; ) at += (await handle.write(chunk, at)).bytesWritten;
          segment.bytes += chunk.byteLength;
        }
        const finished = await finish(segment.bytes);
        await handle.sync();
        await syncFolder(folder);
        hold([segment]);
        return { segment, finished };
      } catch (error) {
        await fs.rm(fileOf(segment.blob), { force: true });
        throw error;
      } finally {
        await handle.close();
      }
    },

    /** Holds the segments for a reader, who must close; laid end to end, it reads from `from` to before `end`. */
    open(segments: readonly Segment[]): { read: (from: number, end: number) => AsyncGenerator<Buffer>; close: () => Promise<void> } {
      hold(segments);
      return {
        async *read(from, end) {
          let start = 0;
          for (const { blob, bytes } of segments) {
            const first = Math.max(from - start, 0);
            const last = Math.min(end - start, bytes) - 1;
            if (first <= last) yield* createReadStream(fileOf(blob), { start: first, end: last, highWaterMark: READ_AT_ONCE }) as AsyncIterable<Buffer>;
            start += bytes;
          }
        },
        close: () => release(segments),
      };
    },

    /** Deletes what nobody holds: bytes of requests that a crash cut off before they were answered. */
    async sweep(): Promise<void> {
      for (const name of await fs.readdir(folder)) if (!held.has(name)) await fs.rm(fileOf(name), { force: true });
    },
  };
}
