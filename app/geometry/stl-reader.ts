import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { commonMistake, isBinaryStl, sniffModel, SNIFF_BYTES, STL_RECORD_BYTES } from "#app/geometry/sniff-model.ts";
import { AsciiStlReader } from "#app/geometry/stl-ascii.ts";
import { BinaryStlReader } from "#app/geometry/stl-binary.ts";
import type { StlFacts, StlReader, TakeTriangles } from "#app/geometry/stl-triangles.ts";

/**
 * Reads an STL of either kind, told by content, from chunks of any size: a large file need never
 * lie in memory as a whole.
 *
 * @param totalBytes size of the whole file
 * @param take gets the triangles while the chunks arrive; they count only once `finish` has returned
 * @throws UnreadableModel from `push` or `finish`, with one line that says why and what to do
 */
export function createStlReader(totalBytes: number, take: TakeTriangles): StlReader {
  let reader: StlReader | null = null;
  let head: Uint8Array = new Uint8Array(0);
  let seen = 0;

  const begin = () => {
    reader = readerFor(head, totalBytes, take);
    reader.push(head);
    return reader;
  };
  return {
    push(chunk) {
      seen += chunk.length;
      if (reader) return reader.push(chunk);
      if (head.length === 0 && chunk.length >= SNIFF_BYTES) {
        head = new Uint8Array(chunk.buffer, chunk.byteOffset, chunk.byteLength);
      } else {
        const joined = new Uint8Array(head.length + chunk.length);
        joined.set(head);
        joined.set(chunk, head.length);
        head = joined;
      }
      if (head.length >= SNIFF_BYTES) {
        begin();
        head = new Uint8Array(0);
      }
    },
    finish() {
      if (seen !== totalBytes) throw new UnreadableModel(`only ${seen} of ${totalBytes} bytes arrived; upload it again`);
      return (reader ?? begin()).finish();
    },
  };
}

/** Corners that a file of this size can have at most, or about (text). To size tables before the first is read. */
export function expectedCorners(totalBytes: number, format: "single" | "double"): number {
  // The tersest facets of a text take about 100 bytes, the usual ones about 250.
  return 3 * Math.ceil(format === "single" ? totalBytes / STL_RECORD_BYTES : totalBytes / 200);
}

/**
 * Triangles of an STL for drawing.
 *
 * @returns nine single-precision numbers a triangle, in the file's unit
 * @throws UnreadableModel
 */
export function readStl(bytes: Uint8Array): { positions: Float32Array; format: StlFacts["format"]; warnings: string[] } {
  let positions = new Float32Array(0);
  let used = 0;
  const reader = createStlReader(bytes.length, (block) => {
    if (used + block.length > positions.length) {
      const precision = block instanceof Float32Array ? "single" : "double";
      const larger = new Float32Array(Math.max(used + block.length, positions.length * 2, 3 * expectedCorners(bytes.length, precision)));
      larger.set(positions);
      positions = larger;
    }
    positions.set(block, used);
    used += block.length;
  });
  reader.push(bytes);
  const { format, warnings } = reader.finish();
  return { positions: positions.subarray(0, used), format, warnings };
}

function readerFor(head: Uint8Array, totalBytes: number, take: TakeTriangles): StlReader {
  if (totalBytes === 0) throw new UnreadableModel("the file is empty; export or upload it again");
  const kind = sniffModel(head, totalBytes);
  if (kind === "stl") return isBinaryStl(head, totalBytes) ? new BinaryStlReader(head, totalBytes, take) : new AsciiStlReader(take);
  if (kind === "step") throw new UnreadableModel("it is a STEP file, not an STL");
  const mistake = commonMistake(head);
  throw new UnreadableModel(mistake ? `not a model: ${mistake}` : "neither an STL nor a STEP file; export the part again");
}
