import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { commonMistake, isBinaryStl, sniffModel, SNIFF_BYTES } from "#app/geometry/sniff-model.ts";
import { AsciiStlReader } from "#app/geometry/stl-ascii.ts";
import { BinaryStlReader } from "#app/geometry/stl-binary.ts";
import type { StlTriangles, TriangleReader } from "#app/geometry/stl-triangles.ts";

/**
 * Reads an STL of either kind, told by content, from chunks of any size: a large file need never
 * lie in memory as a whole.
 *
 * @param totalBytes size of the whole file
 * @throws UnreadableModel from `push` or `finish`, with one line that says why and what to do
 */
export function createStlReader(totalBytes: number): TriangleReader {
  let reader: TriangleReader | null = null;
  let head: Uint8Array = new Uint8Array(0);
  let seen = 0;

  const begin = () => {
    reader = readerFor(head, totalBytes);
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

/** Triangles of a whole STL in memory, as stored. @throws UnreadableModel */
export function readStlTriangles(bytes: Uint8Array): StlTriangles {
  const reader = createStlReader(bytes.length);
  reader.push(bytes);
  return reader.finish();
}

/**
 * Triangles of an STL for drawing.
 *
 * @returns nine single-precision numbers a triangle, in the file's unit
 * @throws UnreadableModel
 */
export function readStl(bytes: Uint8Array): { positions: Float32Array; format: StlTriangles["format"]; warnings: string[] } {
  const { coordinates, format, warnings } = readStlTriangles(bytes);
  return { positions: coordinates instanceof Float32Array ? coordinates : new Float32Array(coordinates), format, warnings };
}

function readerFor(head: Uint8Array, totalBytes: number): TriangleReader {
  if (totalBytes === 0) throw new UnreadableModel("the file is empty; export or upload it again");
  const kind = sniffModel(head, totalBytes);
  if (kind === "stl") return isBinaryStl(head, totalBytes) ? new BinaryStlReader(head, totalBytes) : new AsciiStlReader(totalBytes);
  if (kind === "step") throw new UnreadableModel("it is a STEP file, not an STL");
  const mistake = commonMistake(head);
  throw new UnreadableModel(mistake ? `not a model: ${mistake}` : "neither an STL nor a STEP file; export the part again");
}
