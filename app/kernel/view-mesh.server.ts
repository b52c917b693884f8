import { MeshoptSimplifier } from "meshoptimizer";
import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { readStl } from "#app/geometry/stl-reader.ts";
import { weldVertices } from "#app/geometry/weld-vertices.ts";
import { shadeByCreases } from "./creases.ts";
import { encodeGlb, roundingOf } from "./encode-glb.server.ts";
import type { KernelRun } from "./run-kernel.server.ts";
import { tessellateStep, type StepMesh } from "./tessellate-step.server.ts";

/** What a phone still turns; a larger mesh is drawn coarser, and says how much. */
const MOST_TRIANGLES = 400_000;
/** A part is drawn at least this fine, as a share of its diagonal, however small it is. */
const COARSEST = 1 / 100;
const MM_PER_UNIT = { mm: 1, in: 25.4 } as const;

export interface ViewMesh {
  /** Binary glTF 2.0 with EXT_meshopt_compression; coordinates are mm. */
  glb: Uint8Array;
  triangles: number;
  /** How far what is drawn may lie from the model, mm. */
  error_mm: number;
}

/**
 * A STEP model for the viewer: faces grouped by what they are, and the edges of the part as lines.
 *
 * @throws UnreadableModel as tessellateStep
 */
export async function viewMeshFromStep(path: string, { chord_mm, ...run }: KernelRun & { chord_mm: number }): Promise<ViewMesh> {
  let mesh: StepMesh;
  for (let chord = chord_mm; ; chord *= 2) {
    mesh = await tessellateStep(path, { chord_mm: chord, ...run });
    // A chord larger than this is no longer what makes the triangles many.
    if (mesh.indices.length <= MOST_TRIANGLES * 3 || chord > chord_mm * 32) break;
  }
  const error_mm = mesh.chord_mm + roundingOf(mesh.chord_mm);
  const groups = new Map<string, { label: string; kind: string; faces: [first: number, count: number][] }>();
  for (const { label, kind, firstIndex, indexCount } of mesh.faces) {
    const group = groups.get(`${kind}/${label}`) ?? { label, kind, faces: [] };
    group.faces.push([firstIndex, indexCount]);
    groups.set(`${kind}/${label}`, group);
  }
  const glb = await encodeGlb({ ...mesh, groups: [...groups.values()], error_mm }, mesh.chord_mm);
  return { glb, triangles: mesh.indices.length / 3, error_mm };
}

/**
 * An STL for the viewer: one group, smooth where facets meet at less than 30°, lines where they
 * meet at more. Simplified as far as the chord allows, and to 400,000 triangles in any case.
 *
 * @param bytes the whole file
 * @throws UnreadableModel as readStl
 */
export async function viewMeshFromStl(bytes: Uint8Array, { chord_mm: wanted_mm, unit = "mm" }: { chord_mm: number; unit?: keyof typeof MM_PER_UNIT }): Promise<ViewMesh> {
  if (!(wanted_mm > 0 && Number.isFinite(wanted_mm))) throw new RangeError("the chord must be a positive length in mm");
  const { positions } = readStl(bytes);
  for (let i = 0; i < positions.length; i++) positions[i]! *= MM_PER_UNIT[unit];
  const welded = weldVertices(positions);
  const indices = withoutRepeats(welded.indices);
  if (indices.length === 0) throw new UnreadableModel("holds no triangle with an area, nothing to draw; export the part again");
  const vertices = Float32Array.from(welded.vertices.subarray(0, welded.vertexCount * 3));
  const chord_mm = Math.min(wanted_mm, diagonalOf(vertices) * COARSEST);

  await MeshoptSimplifier.ready;
  let [kept, error] = MeshoptSimplifier.simplify(indices, vertices, 3, 0, chord_mm, ["ErrorAbsolute"]);
  if (kept.length > MOST_TRIANGLES * 3) [kept, error] = MeshoptSimplifier.simplify(indices, vertices, 3, MOST_TRIANGLES * 3, Number.MAX_VALUE, ["ErrorAbsolute"]);

  const shaded = shadeByCreases(kept, vertices);
  const error_mm = error + roundingOf(chord_mm);
  const glb = await encodeGlb({ ...shaded, groups: [{ label: "mesh", kind: "other", faces: [[0, kept.length]] }], error_mm }, chord_mm);
  return { glb, triangles: kept.length / 3, error_mm };
}

function diagonalOf(vertices: Float32Array): number {
  const size = [0, 1, 2].map((axis) => {
    let [low, high] = [Infinity, -Infinity];
    for (let i = axis; i < vertices.length; i += 3) {
      low = Math.min(low, vertices[i]!);
      high = Math.max(high, vertices[i]!);
    }
    return high - low;
  });
  return Math.hypot(...size);
}

/** Triangles that use a vertex twice draw nothing and join what is apart. */
function withoutRepeats(indices: Uint32Array): Uint32Array {
  const kept = new Uint32Array(indices.length);
  let used = 0;
  for (let i = 0; i < indices.length; i += 3) {
    const [a, b, c] = [indices[i]!, indices[i + 1]!, indices[i + 2]!];
    if (a === b || b === c || c === a) continue;
    kept[used++] = a;
    kept[used++] = b;
    kept[used++] = c;
  }
  return kept.slice(0, used);
}
