/** A point or vector as [x, y, z]. */
export type Vec3 = [number, number, number];

/** One recognised hole of a STEP model; lengths in mm, angles in degrees. */
export interface MeasuredHole {
  kind: "through" | "blind";
  diameter_mm: number;
  /** Full-diameter depth. */
  depth_mm: number;
  /** Unit vector that points into the material. */
  axis: Vec3;
  /** Centre of the entry. */
  at_mm: Vec3;
  entry: "plain" | "countersunk" | "counterbored" | "chamfered";
  entryDiameter_mm: number | null;
  entryAngle_deg: number | null;
}

export interface MeasuredPattern {
  kind: "circle";
  count: number;
  diameter_mm: number;
  center_mm: Vec3;
  axis: Vec3;
  equallySpaced: boolean;
  /** Indices into `holes`. */
  holes: number[];
}

export interface MeasuredMesh {
  triangles: number;
  degenerateTriangles: number;
  shells: number;
  openEdges: number;
  nonManifoldEdges: number;
  misorientedEdges: number;
  closed: boolean;
  oriented: boolean;
}

/**
 * What is known of a model file: the document that `npm run measure` prints and that is stored
 * with every model. Lengths are mm whatever the file's own unit is.
 */
export interface MeasureDocument {
  file: { name: string; bytes: number; sha256: string; format: "stl-binary" | "stl-ascii" | "step" };
  unit: { source: string; assumed: boolean };
  warnings: string[];
  /** Counts of the triangles of an STL; of a STEP, of its tessellation, or null where none was made. */
  mesh: MeasuredMesh | null;
  bounds_mm: { min: Vec3; max: Vec3; size: Vec3 } | null;
  area_mm2: number | null;
  volume_mm3: number | null;
  centroid_mm: Vec3 | null;
  /** Unit density, about the centroid. */
  inertia_mm5: [Vec3, Vec3, Vec3] | null;
  /** STEP only: area, volume, centroid and inertia are then exact, from the B-rep. */
  solid: null | { solids: number; faces: number; valid: boolean };
  holes: MeasuredHole[];
  patterns: MeasuredPattern[];
  smallestInsideRadius_mm: number | null;
  thinnestWall_mm: number | null;
}

/** The file is not a model that can be measured; `message` tells a person why, in one line. */
export class UnreadableModel extends Error {
  override name = "UnreadableModel";
}
