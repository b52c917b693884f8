import type { TopoDS_Shape } from "replicad-opencascadejs";
import { findBores } from "#app/geometry/bores.ts";
import type { FaceRecord } from "#app/geometry/face-record.ts";
import { UnreadableModel, type Vec3 } from "#app/geometry/measure-document.ts";
import { dot } from "#app/geometry/vec3.ts";
import { faceRecords } from "./face-records.server.ts";
import type { TessellatedFace, TessellationIndex } from "./kernel-protocol.ts";
import { partsOf, type Kernel } from "./open-kernel.server.ts";
import { readStep } from "./read-step.server.ts";

/** Between neighbouring facets, in radians: keeps small fillets round where the chord alone would not. */
const FACET_ANGLE = 0.35;
/** Cosine of 2°: faces that meet at less look like one; drawing practice, no source. */
const SMOOTH = Math.cos(Math.PI / 90);
/** A part is drawn at least this fine, as a share of its diagonal, however small it is. */
const COARSEST = 1 / 100;

export interface Tessellation extends TessellationIndex {
  parts: Uint8Array[];
}

/**
 * Turns a STEP file into triangles and lines for drawing, in mm. Where there is no solid, what
 * surfaces the file has are drawn.
 *
 * @param wanted_mm how far a triangle may lie from the true surface
 */
export function tessellateInKernel(kernel: Kernel, path: string, wanted_mm: number, onProgress: (share: number, step: string) => void): Tessellation {
  onProgress(0.05, "reading");
  const { solids, triangulated, looseFaces } = readStep(kernel, path);
  const shapes = solids.length > 0 ? solids : [...triangulated, ...looseFaces];
  if (shapes.length === 0) throw new UnreadableModel("holds no solid and no surface to draw; if it refers to other files, export the assembly as one file");

  const chord_mm = Math.min(wanted_mm, diagonalOf(kernel, shapes) * COARSEST);
  const records = faceRecords(kernel, shapes);
  const inBore = new Set(findBores(records).flatMap(({ bores }) => bores.flatMap((bore) => bore.faces)));
  const faces: TessellatedFace[] = [];
  const blocks = { positions: [] as Float32Array[], normals: [] as Float32Array[], indices: [] as Uint32Array[], edges: [] as Float32Array[] };
  let [vertices, corners] = [0, 0];
  shapes.forEach((shape, index) => {
    onProgress(0.3 + (0.6 * index) / shapes.length, "meshing");
    const hasSurfaces = !triangulated.includes(shape);
    const own = records.flatMap((record, at) => (record.solid === index ? [{ record, at }] : []));
    const mesh = meshOf(kernel, shape, chord_mm, hasSurfaces ? smoothEdges(kernel, shape, own.map(({ record }) => record)) : null);
    mesh.groups.forEach(([first, count], at) => {
      const face = own[at];
      if (count > 0 && face) faces.push({ firstIndex: corners + first, indexCount: count, kind: face.record.kind, label: hasSurfaces ? labelOf(face.record, inBore.has(face.at)) : "facets" });
    });
    for (let i = 0; i < mesh.indices.length; i++) mesh.indices[i]! += vertices;
    blocks.positions.push(mesh.positions);
    blocks.normals.push(mesh.normals);
    blocks.indices.push(mesh.indices);
    blocks.edges.push(mesh.edges);
    vertices += mesh.positions.length / 3;
    corners += mesh.indices.length;
  });
  const length = (arrays: { length: number }[]) => arrays.reduce((sum, array) => sum + array.length, 0);
  return {
    positions: length(blocks.positions),
    normals: length(blocks.normals),
    indices: length(blocks.indices),
    edges: length(blocks.edges),
    chord_mm,
    faces,
    parts: Object.values(blocks).flat().map((array) => new Uint8Array(array.buffer, array.byteOffset, array.byteLength)),
  };
}

function diagonalOf(kernel: Kernel, shapes: TopoDS_Shape[]): number {
  const box = new kernel.Bnd_Box();
  for (const shape of shapes) kernel.BRepBndLib.Add(shape, box, true);
  const diagonal = box.IsVoid() ? 0 : Math.sqrt(box.SquareExtent());
  return diagonal > 0 ? diagonal : Infinity;
}

/**
 * Edges along which nothing bends: the seam of a round face, the line where a fillet runs into its
 * face. A drawing leaves them out.
 */
function smoothEdges(kernel: Kernel, shape: TopoDS_Shape, records: FaceRecord[]): Set<number> {
  const { TopAbs_FACE, TopAbs_EDGE } = kernel.TopAbs_ShapeEnum;
  const normalsOf = new Map<number, Vec3[]>();
  partsOf(kernel, shape, TopAbs_FACE).forEach((face, at) => {
    const sides = records[at]?.sides ?? [];
    const edges = partsOf(kernel, face, TopAbs_EDGE).filter((edge) => !kernel.BRep_Tool.Degenerated(kernel.TopoDS.Edge(edge)));
    sides.forEach(({ normal }, side) => {
      const hash = edgeHash(kernel, edges[side]!);
      normalsOf.set(hash, [...(normalsOf.get(hash) ?? []), normal]);
    });
  });
  // Two edges of one hash are taken for smooth only if both are.
  const isSmooth = ([first, ...others]: Vec3[]) => others.length > 0 && others.every((other) => dot(first!, other) > SMOOTH);
  return new Set([...normalsOf].flatMap(([hash, normals]) => (isSmooth(normals) ? [hash] : [])));
}

const edgeHash = (kernel: Kernel, edge: TopoDS_Shape) => kernel.ReplicadShapeHasher.HashCode(edge, 0x7fffffff);

/**
 * The kernel's arrays are copied: they move whenever its memory grows.
 *
 * @param leftOut edges that are not drawn; null where there are only triangles and no curves
 */
function meshOf(kernel: Kernel, shape: TopoDS_Shape, chord_mm: number, leftOut: Set<number> | null) {
  const mesh = kernel.ReplicadMeshExtractor.extract(shape, chord_mm, FACET_ANGLE, false);
  const floats = (pointer: number, size: number) => new Float32Array(kernel.wasmMemory.buffer, pointer, size).slice();
  const groups = new Int32Array(kernel.wasmMemory.buffer, mesh.getFaceGroupsPtr(), mesh.getFaceGroupsSize()).slice();
  const copied = {
    positions: floats(mesh.getVerticesPtr(), mesh.getVerticesSize()),
    normals: floats(mesh.getNormalsPtr(), mesh.getNormalsSize()),
    indices: new Uint32Array(kernel.wasmMemory.buffer, mesh.getTrianglesPtr(), mesh.getTrianglesSize()).slice(),
    groups: faceGroups(kernel, shape, groups),
  };
  mesh.delete();
  if (!leftOut) return { ...copied, edges: new Float32Array(0) };
  const lines = kernel.ReplicadEdgeMeshExtractor.extract(shape, chord_mm, FACET_ANGLE);
  const points = floats(lines.getLinesPtr(), lines.getLinesSize());
  const polylines = new Int32Array(kernel.wasmMemory.buffer, lines.getEdgeGroupsPtr(), lines.getEdgeGroupsSize()).slice();
  lines.delete();
  return { ...copied, edges: segments(points, polylines, leftOut) };
}

/** First index and count of each face's triangles, in the order of the shape's faces; 0 of a face that could not be meshed. */
function faceGroups(kernel: Kernel, shape: TopoDS_Shape, groups: Int32Array): [first: number, count: number][] {
  const hashes = partsOf(kernel, shape, kernel.TopAbs_ShapeEnum.TopAbs_FACE).map((face) => kernel.ReplicadShapeHasher.HashCode(face, 0x7fffffff));
  let next = 0;
  return hashes.map((hash) => {
    // Groups come as first, count, hash, in the order of the faces, with unmeshed ones left out.
    if (groups[next + 2] !== hash) return [0, 0];
    const found: [number, number] = [groups[next]!, groups[next + 1]!];
    next += 3;
    return found;
  });
}

/** Polylines, each as first, count, hash of its edge, as pairs of points. */
function segments(points: Float32Array, polylines: Int32Array, leftOut: Set<number>): Float32Array {
  const pairs: number[] = [];
  for (let i = 0; i < polylines.length; i += 3) {
    const [first, count, hash] = [polylines[i]!, polylines[i + 1]!, polylines[i + 2]!];
    if (leftOut.has(hash)) continue;
    for (let at = first; at < first + count - 1; at++) for (let n = at * 3; n < at * 3 + 6; n++) pairs.push(points[n]!);
  }
  return new Float32Array(pairs);
}

/** What a person at the bench calls this face. */
function labelOf(face: FaceRecord, isBore: boolean): string {
  const size = face.radius_mm;
  switch (face.kind) {
    case "cylinder":
      return isBore ? `bore Ø ${(2 * size).toFixed(2)}` : face.concave ? `inside radius R ${size.toFixed(2)}` : `outside Ø ${(2 * size).toFixed(2)}`;
    case "cone": {
      const side = face.sides[0];
      const angle = side ? (2 * Math.asin(Math.min(1, Math.abs(dot(side.normal, face.direction)))) * 180) / Math.PI : 0;
      return `cone ${angle.toFixed(1)}°`;
    }
    case "torus":
      return `${face.concave ? "inside" : "outside"} fillet R ${size.toFixed(2)}`;
    case "sphere":
      return `${face.concave ? "hollow" : "round"} sphere R ${size.toFixed(2)}`;
    case "plane":
      return "plane";
    default:
      return "free-form surface";
  }
}
