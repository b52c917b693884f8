/** Triangles as an STL file states them, unwelded. */
export interface StlTriangles {
  format: "stl-binary" | "stl-ascii";
  /**
   * Nine numbers a triangle (three corners x, y, z) in the file's own unit, all finite.
   * Single precision from a binary file, double from a text file: as stored, nothing is rounded.
   */
  coordinates: Float32Array | Float64Array;
  /** What a person should know about the file, one sentence each. */
  warnings: string[];
}

/** Takes a file in pieces of any size and gives its triangles at the end. */
export interface TriangleReader {
  push(chunk: Uint8Array): void;
  finish(): StlTriangles;
}

export const count = (n: number, one: string, many = `${one}s`) => `${n.toLocaleString("en-US")} ${n === 1 ? one : many}`;
