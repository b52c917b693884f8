import { counted } from "#app/geometry/counted.ts";
import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { promisedTriangles, recordsLookLikeTriangles, SNIFF_BYTES, STL_HEAD_BYTES, STL_RECORD_BYTES } from "#app/geometry/sniff-model.ts";
import { BLOCK_TRIANGLES, type StlFacts, type StlReader, type TakeTriangles } from "#app/geometry/stl-triangles.ts";

/**
 * Reads a binary STL: 80 bytes of header, a count, then per triangle normal, three corners and
 * two bytes that mean nothing here. Normals are not read: they follow from the winding.
 *
 * @param head at least the first 84 bytes; the same bytes are pushed again with the rest
 * @throws UnreadableModel when the count does not fit the size: never fewer triangles than the
 *   file holds, never memory by a count that the size does not back
 */
export class BinaryStlReader implements StlReader {
  readonly #promised: number;
  readonly #take: TakeTriangles;
  readonly #block = new Float32Array(BLOCK_TRIANGLES * 9);
  readonly #record = new Uint8Array(STL_RECORD_BYTES);
  #recordBytes = 0;
  #skip = STL_HEAD_BYTES;
  #triangles = 0;
  /** First bytes after the last triangle, kept to tell padding from forgotten triangles. */
  readonly #tail = new Uint8Array(SNIFF_BYTES);
  #tailBytes = 0;
  #trailing = 0;

  constructor(head: Uint8Array, totalBytes: number, take: TakeTriangles) {
    this.#take = take;
    this.#promised = promisedTriangles(head);
    const whole = Math.floor((totalBytes - STL_HEAD_BYTES) / STL_RECORD_BYTES);
    if (this.#promised === 0 && whole === 0) throw new UnreadableModel("the STL holds no triangles; export the part again");
    if (this.#promised > whole) {
      throw new UnreadableModel(
        `the header promises ${counted(this.#promised, "triangle")}, the file holds ${counted(whole, "whole one")}: it is cut off or damaged; export or upload it again`,
      );
    }
  }

  push(chunk: Uint8Array): void {
    let at = Math.min(this.#skip, chunk.length);
    this.#skip -= at;
    if (this.#recordBytes > 0) {
      const part = chunk.subarray(at, at + STL_RECORD_BYTES - this.#recordBytes);
      this.#record.set(part, this.#recordBytes);
      this.#recordBytes += part.length;
      at += part.length;
      if (this.#recordBytes < STL_RECORD_BYTES) return;
      this.#recordBytes = 0;
      this.#read(this.#record, 0, 1);
    }
    const records = Math.min(Math.floor((chunk.length - at) / STL_RECORD_BYTES), this.#promised - this.#triangles);
    for (let from = 0; from < records; from += BLOCK_TRIANGLES) {
      this.#read(chunk, at + from * STL_RECORD_BYTES, Math.min(BLOCK_TRIANGLES, records - from));
    }
    at += records * STL_RECORD_BYTES;
    const rest = chunk.subarray(at);
    if (this.#triangles < this.#promised) {
      this.#record.set(rest, 0);
      this.#recordBytes = rest.length;
    } else {
      const kept = rest.subarray(0, this.#tail.length - this.#tailBytes);
      this.#tail.set(kept, this.#tailBytes);
      this.#tailBytes += kept.length;
      this.#trailing += rest.length;
    }
  }

  finish(): StlFacts {
    if (this.#triangles < this.#promised) throw new UnreadableModel("the file ended before its last triangle; upload it again");
    const forgotten = Math.floor(this.#trailing / STL_RECORD_BYTES);
    if (forgotten > 0 && recordsLookLikeTriangles(this.#tail.subarray(0, this.#tailBytes), 0)) {
      throw new UnreadableModel(
        `the header counts ${counted(this.#promised, "triangle")} but ${counted(forgotten, "more follows", "more follow")}: the program that wrote it forgot the count; export the part again`,
      );
    }
    if (this.#promised === 0) throw new UnreadableModel("the STL holds no triangles; export the part again");
    const warnings = this.#trailing > 0 ? [`${counted(this.#trailing, "byte")} after the last triangle left out.`] : [];
    return { format: "stl-binary", triangles: this.#triangles, warnings };
  }

  /** @param records at most a block of them */
  #read(bytes: Uint8Array, offset: number, records: number): void {
    const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    const to = this.#block;
    // 0 times a finite number is 0, times anything else NaN: one sum tells whether all are finite.
    let zero = 0;
    for (let record = 0, at = offset + 12, out = 0; record < records; record++, at += STL_RECORD_BYTES, out += 9) {
      const ax = view.getFloat32(at, true), ay = view.getFloat32(at + 4, true), az = view.getFloat32(at + 8, true);
      const bx = view.getFloat32(at + 12, true), by = view.getFloat32(at + 16, true), bz = view.getFloat32(at + 20, true);
      const cx = view.getFloat32(at + 24, true), cy = view.getFloat32(at + 28, true), cz = view.getFloat32(at + 32, true);
      to[out] = ax; to[out + 1] = ay; to[out + 2] = az;
      to[out + 3] = bx; to[out + 4] = by; to[out + 5] = bz;
      to[out + 6] = cx; to[out + 7] = cy; to[out + 8] = cz;
      zero += (ax + ay + az + bx + by + bz + cx + cy + cz) * 0;
    }
    const read = to.subarray(0, records * 9);
    if (zero !== 0) {
      const triangle = this.#triangles + Math.floor(read.findIndex((value) => !Number.isFinite(value)) / 9) + 1;
      throw new UnreadableModel(`a corner of triangle ${triangle.toLocaleString("en-US")} is not a number (NaN or infinite); repair the mesh or export the part again`);
    }
    if (records > 0) this.#take(read);
    this.#triangles += records;
  }
}
