import type { TessellatedFace, TessellationIndex } from "./kernel-protocol.ts";
import { runKernel, type KernelRun } from "./run-kernel.server.ts";

export interface StepMesh {
  /** x, y, z in mm, and unit normals. */
  positions: Float32Array;
  normals: Float32Array;
  indices: Uint32Array;
  faces: TessellatedFace[];
  /** Pairs of points along the edges of the part. */
  edges: Float32Array;
  /** How far a triangle lies from the true surface at most: as asked, or finer for a very small part. */
  chord_mm: number;
}

/**
 * The surface of a STEP model as triangles for drawing; never for measuring.
 *
 * @throws UnreadableModel when the file can't be read, or not within the limits
 * @throws RangeError when the chord is no positive length
 */
export async function tessellateStep(path: string, { chord_mm, ...run }: KernelRun & { chord_mm: number }): Promise<StepMesh> {
  if (!(chord_mm > 0 && Number.isFinite(chord_mm))) throw new RangeError("the chord must be a positive length in mm");
  const { result, bytes } = await runKernel<TessellationIndex>({ kind: "tessellate", path, chord_mm }, run);
  // Copied once, so that the numbers start where numbers may.
  const buffer = bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength) as ArrayBuffer;
  let at = 0;
  const take = (count: number) => ((at += count * 4), at - count * 4);
  return {
    positions: new Float32Array(buffer, take(result.positions), result.positions),
    normals: new Float32Array(buffer, take(result.normals), result.normals),
    indices: new Uint32Array(buffer, take(result.indices), result.indices),
    edges: new Float32Array(buffer, take(result.edges), result.edges),
    faces: result.faces,
    chord_mm: result.chord_mm,
  };
}
