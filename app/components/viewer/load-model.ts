import { Box3, type BufferGeometry, LineSegments, Mesh } from "three";
import { LineSegmentsGeometry } from "three/examples/jsm/lines/LineSegmentsGeometry.js";
import { MeshoptDecoder } from "three/examples/jsm/libs/meshopt_decoder.module.js";
import { GLTFLoader } from "three/examples/jsm/loaders/GLTFLoader.js";

/** Faces that are the same kind of thing: all bores of Ø 6.60. */
export interface FaceGroup {
  label: string;
  kind: string;
  geometry: BufferGeometry;
  /** Each face as [first, count] of the geometry's index. */
  faces: [first: number, count: number][];
}

/** A view mesh as it is drawn; lengths in mm. */
export interface ViewModel {
  groups: FaceGroup[];
  /** The edges of the part; null where there is none, as on a ball. */
  edges: LineSegmentsGeometry | null;
  box: Box3;
  /** How far what is drawn may lie from the model. */
  error_mm: number;
  dispose(): void;
}

/** The view can't be shown; `message` says why, for a person. */
export class ViewFault extends Error {
  override name = "ViewFault";
}

/**
 * Fetches a view mesh and unpacks it.
 *
 * @param say told the share of the bytes that are here, 0 to 1; null while their number is unknown
 * @throws ViewFault when it can't be fetched or read; the signal's reason when it was ended
 */
export async function loadModel(url: string, signal: AbortSignal, say: (share: number | null) => void): Promise<ViewModel> {
  const bytes = await fetchBytes(url, signal, say);
  const loader = new GLTFLoader().setMeshoptDecoder(MeshoptDecoder);
  try {
    const { scene } = await loader.parseAsync(bytes, "");
    signal.throwIfAborted();
    return toModel(scene);
  } catch (fault) {
    if (signal.aborted || fault instanceof ViewFault) throw fault;
    throw new ViewFault("The view of this model can't be unpacked. Load the page again; if it stays so, upload the model once more.");
  }
}

async function fetchBytes(url: string, signal: AbortSignal, say: (share: number | null) => void): Promise<ArrayBuffer> {
  const answer = await fetch(url, { signal }).catch((fault: unknown) => {
    if (signal.aborted) throw fault;
    throw new ViewFault("The view did not arrive: the connection failed. Load the page again.");
  });
  if (!answer.ok || !answer.body) throw new ViewFault(answer.status === 404 ? "The view of this model is not made yet." : "The view did not arrive: the store does not answer. Load the page again.");
  const total = Number(answer.headers.get("content-length")) || null;
  const chunks: Uint8Array[] = [];
  let received = 0;
  const reader = answer.body.getReader();
  for (let next = await reader.read(); !next.done; next = await reader.read()) {
    chunks.push(next.value);
    received += next.value.length;
    say(total === null ? null : Math.min(1, received / total));
  }
  return new Blob(chunks as BlobPart[]).arrayBuffer();
}

function toModel(scene: import("three").Group): ViewModel {
  const groups: FaceGroup[] = [];
  const lines: number[] = [];
  const box = new Box3();
  scene.updateMatrixWorld(true);
  scene.traverse((object) => {
    if (object instanceof LineSegments) {
      object.geometry.applyMatrix4(object.matrixWorld);
      const flat = object.geometry.index ? object.geometry.toNonIndexed() : object.geometry;
      const { array } = flat.getAttribute("position");
      for (let i = 0; i < array.length; i++) lines.push(array[i]!);
      object.geometry.dispose();
    } else if (object instanceof Mesh) {
      const geometry = object.geometry as BufferGeometry;
      geometry.applyMatrix4(object.matrixWorld);
      geometry.computeBoundingBox();
      box.union(geometry.boundingBox!);
      const { label, kind, faces } = geometry.userData as Partial<Pick<FaceGroup, "label" | "kind" | "faces">>;
      groups.push({ label: label ?? "face", kind: kind ?? "other", geometry, faces: faces ?? [[0, geometry.index?.count ?? 0]] });
    }
  });
  if (groups.length === 0) throw new ViewFault("There is nothing to draw in this model.");
  const edges = lines.length === 0 ? null : new LineSegmentsGeometry().setPositions(lines);
  const error = (scene.userData as { error_mm?: unknown }).error_mm;
  return {
    groups,
    edges,
    box,
    error_mm: typeof error === "number" ? error : 0,
    dispose() {
      for (const { geometry } of groups) geometry.dispose();
      edges?.dispose();
    },
  };
}
