/** What is known of an STL besides its triangles. */
export interface StlFacts {
  format: "stl-binary" | "stl-ascii";
  triangles: number;
  /** What a person should know about the file, one sentence each. */
  warnings: string[];
}

/**
 * Receives triangles as a file states them, unwelded: nine finite numbers each (three corners
 * x, y, z) in the file's own unit. Single precision from a binary file, double from a text file:
 * as stored, nothing is rounded. The array is used again for the next ones.
 */
export type TakeTriangles = (coordinates: Float32Array | Float64Array) => void;

/** Takes a file in pieces of any size, hands its triangles on, and tells the rest at the end. */
export interface StlReader {
  push(chunk: Uint8Array): void;
  finish(): StlFacts;
}

/** Triangles that are handed on at once: their corners stay in the near cache. */
export const BLOCK_TRIANGLES = 4096;
