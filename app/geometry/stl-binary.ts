import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { promisedTriangles, recordsLookLikeTriangles, SNIFF_BYTES, STL_HEAD_BYTES, STL_RECORD_BYTES } from "#app/geometry/sniff-model.ts";
import { count, type StlTriangles, type TriangleReader } from "#app/geometry/stl-triangles.ts";

/**
 * Reads a binary STL: 80 bytes of header, a count, then per triangle normal, three corners and
 * two bytes that mean nothing here. Normals are not read: they follow from the winding.
 *
 * @param head at least the first 84 bytes; the same bytes are pushed again with the rest
 * @throws UnreadableModel when the count does not fit the size: never fewer triangles than the
 *   file holds, never memory by a count that the size does not back
 */
export class BinaryStlReader implements TriangleReader {
  readonly #promised: number;
  readonly #coordinates: Float32Array;
  readonly #record = new Uint8Array(STL_RECORD_BYTES);
  #recordBytes = 0;
  #skip = STL_HEAD_BYTES;
  #triangles = 0;
  /** First bytes after the last triangle, kept to tell padding from forgotten triangles. */
  readonly #tail = new Uint8Array(SNIFF_BYTES);
  #tailBytes = 0;
  #trailing = 0;

  constructor(head: Uint8Array, totalBytes: number) {
    this.#promised = promisedTriangles(head);
    const whole = Math.floor((totalBytes - STL_HEAD_BYTES) / STL_RECORD_BYTES);
    if (this.#promised === 0 && whole === 0) throw new UnreadableModel("the STL holds no triangles; export the part again");
    if (this.#promised > whole) {
      throw new UnreadableModel(
        `the header promises ${count(this.#promised, "triangle")}, the file holds ${count(whole, "whole one")}: it is cut off or damaged; export or upload it again`,
      );
    }
    this.#coordinates = new Float32Array(this.#promised * 9);
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
      this.#take(this.#record, 0, 1);
    }
    const records = Math.min(Math.floor((chunk.length - at) / STL_RECORD_BYTES), this.#promised - this.#triangles);
    this.#take(chunk, at, records);
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

  finish(): StlTriangles {
    if (this.#triangles < this.#promised) throw new UnreadableModel("the file ended before its last triangle; upload it again");
    const forgotten = Math.floor(this.#trailing / STL_RECORD_BYTES);
    if (forgotten > 0 && recordsLookLikeTriangles(this.#tail.subarray(0, this.#tailBytes), 0)) {
      throw new UnreadableModel(
        `the header counts ${count(this.#promised, "triangle")} but ${count(forgotten, "more follows", "more follow")}: the program that wrote it forgot the count; export the part again`,
      );
    }
    if (this.#promised === 0) throw new UnreadableModel("the STL holds no triangles; export the part again");
    const warnings = this.#trailing > 0 ? [`${count(this.#trailing, "byte")} after the last triangle left out.`] : [];
    return { format: "stl-binary", coordinates: this.#coordinates, warnings };
  }

  #take(bytes: Uint8Array, offset: number, records: number): void {
    const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    const to = this.#coordinates;
    let out = this.#triangles * 9;
    // 0 times a finite number is 0, times anything else NaN: one sum tells whether all are finite.
    let zero = 0;
    for (let record = 0, at = offset + 12; record < records; record++, at += STL_RECORD_BYTES) {
      const ax = view.getFloat32(at, true), ay = view.getFloat32(at + 4, true), az = view.getFloat32(at + 8, true);
      const bx = view.getFloat32(at + 12, true), by = view.getFloat32(at + 16, true), bz = view.getFloat32(at + 20, true);
      const cx = view.getFloat32(at + 24, true), cy = view.getFloat32(at + 28, true), cz = view.getFloat32(at + 32, true);
      to[out] = ax; to[out + 1] = ay; to[out + 2] = az;
      to[out + 3] = bx; to[out + 4] = by; to[out + 5] = bz;
      to[out + 6] = cx; to[out + 7] = cy; to[out + 8] = cz;
      zero += (ax + ay + az + bx + by + bz + cx + cy + cz) * 0;
      out += 9;
    }
    if (zero !== 0) this.#refuseNonFinite(this.#triangles, records);
    this.#triangles += records;
  }

  #refuseNonFinite(from: number, records: number): never {
    let at = from * 9;
    while (at < (from + records) * 9 && Number.isFinite(this.#coordinates[at])) at++;
    throw new UnreadableModel(
      `a corner of triangle ${(Math.floor(at / 9) + 1).toLocaleString("en-US")} is not a number (NaN or infinite); repair the mesh or export the part again`,
    );
  }
}
