import { Document, NodeIO, Primitive, type Accessor, type Buffer as GltfBuffer } from "@gltf-transform/core";
import { EXTMeshoptCompression, KHRMeshQuantization } from "@gltf-transform/extensions";
import { MeshoptEncoder } from "meshoptimizer";

export interface DrawnMesh {
  /** x, y, z in mm. */
  positions: Float32Array;
  /** Unit length. */
  normals: Float32Array;
  indices: Uint32Array;
  /** Pairs of points. */
  edges: Float32Array;
  /** Which triangles are one kind of face: [first index, count] of each face. */
  groups: { label: string; kind: string; faces: [first: number, count: number][] }[];
  /** How far what is drawn may lie from the model. */
  error_mm: number;
}

/**
 * A mesh as binary glTF.
 *
 * Node "model" has one primitive a group, with `extras` { label, kind, faces }: `faces` says which
 * [first index, count] of this primitive is one face, so that a single face can be picked and
 * marked. Node "edges" is one primitive of lines. The scene's `extras` has `unit` "mm" and `error_mm`.
 * Coordinates stay mm, rounded to a grid far finer than the chord, which is what makes them compress.
 */
export async function encodeGlb(mesh: DrawnMesh, chord_mm: number): Promise<Uint8Array> {
  await MeshoptEncoder.ready;
  const document = new Document();
  const buffer = document.createBuffer();
  const grid = gridOf(chord_mm);
  // Float32 lets a coordinate of metres hold the grid's hundredths of a millimetre exactly.
  const onGrid = (value: number) => Math.round(value / grid) * grid;

  const model = document.createMesh("model");
  for (const { label, kind, faces } of mesh.groups) {
    const part = takePart(mesh, faces, onGrid);
    model.addPrimitive(
      document
        .createPrimitive()
        .setAttribute("POSITION", accessor(document, buffer, "VEC3", part.positions))
        .setAttribute("NORMAL", accessor(document, buffer, "VEC3", part.normals).setNormalized(true))
        .setIndices(accessor(document, buffer, "SCALAR", part.indices))
        .setExtras({ label, kind, faces: part.faces }),
    );
  }
  const scene = document.createScene("part").setExtras({ unit: "mm", error_mm: mesh.error_mm });
  scene.addChild(document.createNode("model").setMesh(model));
  if (mesh.edges.length > 0) {
    const { positions, indices } = weldLines(mesh.edges, onGrid);
    const lines = document
      .createPrimitive()
      .setMode(Primitive.Mode.LINES!)
      .setAttribute("POSITION", accessor(document, buffer, "VEC3", positions))
      .setIndices(accessor(document, buffer, "SCALAR", indices))
      .setExtras({ label: "edges", kind: "edges" });
    scene.addChild(document.createNode("edges").setMesh(document.createMesh("edges").addPrimitive(lines)));
  }
  document.createExtension(KHRMeshQuantization).setRequired(true);
  document.createExtension(EXTMeshoptCompression).setRequired(true).setEncoderOptions({ method: EXTMeshoptCompression.EncoderMethod.QUANTIZE });
  const io = new NodeIO().registerExtensions([EXTMeshoptCompression, KHRMeshQuantization]).registerDependencies({ "meshopt.encoder": MeshoptEncoder });
  return io.writeBinary(document);
}

/** How far rounding to the grid moves a point at most, mm. */
export function roundingOf(chord_mm: number): number {
  return (gridOf(chord_mm) / 2) * Math.sqrt(3);
}

/** A power of two, so that rounded coordinates have few bits. */
function gridOf(chord_mm: number): number {
  return 2 ** Math.floor(Math.log2(chord_mm / 16));
}

function accessor(document: Document, buffer: GltfBuffer, type: "VEC3" | "SCALAR", array: Float32Array<ArrayBuffer> | Int8Array<ArrayBuffer> | Uint32Array<ArrayBuffer>): Accessor {
  return document.createAccessor().setType(type).setArray(array).setBuffer(buffer);
}

/**
 * The triangles of a group with vertices of their own; within each face in the order that
 * compresses best, the faces one after the other.
 */
function takePart(mesh: DrawnMesh, faces: [first: number, count: number][], onGrid: (value: number) => number) {
  const indices = new Uint32Array(faces.reduce((sum, [, count]) => sum + count, 0));
  const vertices: number[] = [];
  const own: [first: number, count: number][] = [];
  let used = 0;
  for (const [first, count] of faces) {
    const numberOf = new Map<number, number>();
    const local = mesh.indices.slice(first, first + count).map((vertex) => {
      const known = numberOf.get(vertex) ?? numberOf.size;
      numberOf.set(vertex, known);
      return known;
    });
    const [newNumber] = MeshoptEncoder.reorderMesh(local, true, true);
    const base = vertices.length;
    for (const [vertex, number] of numberOf) vertices[base + newNumber[number]!] = vertex;
    indices.set(local.map((number) => base + number), used);
    own.push([used, count]);
    used += count;
  }
  const positions = new Float32Array(vertices.length * 3);
  const normals = new Int8Array(vertices.length * 3);
  vertices.forEach((vertex, number) => {
    for (let axis = 0; axis < 3; axis++) {
      positions[number * 3 + axis] = onGrid(mesh.positions[vertex * 3 + axis]!);
      normals[number * 3 + axis] = Math.round(mesh.normals[vertex * 3 + axis]! * 127);
    }
  });
  return { positions, normals, indices, faces: own };
}

function weldLines(edges: Float32Array, onGrid: (value: number) => number) {
  const numberOf = new Map<string, number>();
  const positions: number[] = [];
  const indices: number[] = [];
  for (let i = 0; i < edges.length; i += 6) {
    const ends = [0, 3].map((at) => {
      const point = [0, 1, 2].map((axis) => onGrid(edges[i + at + axis]!));
      const key = point.join();
      const known = numberOf.get(key);
      if (known !== undefined) return known;
      positions.push(...point);
      numberOf.set(key, numberOf.size);
      return numberOf.size - 1;
    });
    if (ends[0] !== ends[1]) indices.push(...ends);
  }
  return { positions: new Float32Array(positions), indices: new Uint32Array(indices) };
}
