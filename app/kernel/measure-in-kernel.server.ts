import type { FaceRecord } from "#app/geometry/face-record.ts";
import { findHoles } from "#app/geometry/holes.ts";
import { findCircles } from "#app/geometry/patterns.ts";
import { faceRecords } from "./face-records.server.ts";
import { readStep, type ReadStep } from "./read-step.server.ts";
import { partsOf, type Kernel } from "./open-kernel.server.ts";
import type { StepMeasures } from "./kernel-protocol.ts";
import { firstFault, measureSolids } from "./solid-measures.server.ts";

const nothing = { bounds_mm: null, area_mm2: null, volume_mm3: null, centroid_mm: null, inertia_mm5: null, holes: [], patterns: [], smallestInsideRadius_mm: null, thinnestWall_mm: null };

/** Measures a STEP file within the kernel's process. */
export function measureInKernel(kernel: Kernel, path: string, onProgress: (share: number, step: string) => void): StepMeasures {
  onProgress(0.05, "reading");
  const read = readStep(kernel, path);
  const { text, solids } = read;
  const unit = { source: text.lengthUnits.map(({ name }) => name).join(" and ") || "mm", assumed: text.lengthUnits.length === 0 };
  const warnings = [...text.damage, ...unitWarnings(read), ...bodyWarnings(read)];
  const common = { unit, products: text.products, warnings };
  if (solids.length === 0) return { ...common, ...nothing, solid: { solids: 0, faces: 0, valid: false } };

  onProgress(0.3, "measuring");
  const measures = measureSolids(kernel, solids, (done) => onProgress(0.3 + (0.4 * done) / solids.length, "measuring"));
  onProgress(0.7, "checking");
  const fault = firstFault(kernel, solids);
  if (fault !== null) warnings.push(fault);
  onProgress(0.8, "finding holes");
  const features = findFeatures(kernel, read);
  if (features === null) warnings.push("Holes could not be recognised in this solid; take them from the drawing.");
  return { ...common, ...nothing, ...measures, ...features, solid: { solids: solids.length, faces: countFaces(kernel, solids), valid: fault === null } };
}

/** Null where the faces are too damaged to make sense of: the measures, already taken, stand all the same. */
function findFeatures(kernel: Kernel, { solids }: ReadStep): Pick<StepMeasures, "holes" | "patterns" | "smallestInsideRadius_mm"> | null {
  try {
    const faces = faceRecords(kernel, solids);
    const holes = findHoles(faces);
    return { holes, patterns: findCircles(holes, faces.filter(({ kind }) => kind === "cylinder")), smallestInsideRadius_mm: smallestInsideRadius(faces) };
  } catch (error) {
    // The kernel throws its own kinds, none of them an Error; a bug of ours must not hide among them.
    if (error instanceof TypeError || error instanceof ReferenceError) throw error;
    return null;
  }
}

function countFaces(kernel: Kernel, solids: ReadStep["solids"]): number {
  return solids.reduce((sum, solid) => sum + partsOf(kernel, solid, kernel.TopAbs_ShapeEnum.TopAbs_FACE).length, 0);
}

/** Of the hollow cylinders, fillets and balls: what limits the cutter. */
function smallestInsideRadius(faces: FaceRecord[]): number | null {
  const radii = faces.filter(({ concave, radius_mm }) => concave && radius_mm > 0).map(({ radius_mm }) => radius_mm);
  return radii.length > 0 ? radii.reduce((a, b) => Math.min(a, b)) : null;
}

function unitWarnings({ text }: ReadStep): string[] {
  if (text.lengthUnits.length === 0) return ["The file does not state its unit of length; millimetres are assumed. Compare a known length before you rely on any number."];
  if (text.lengthUnits.length > 1) return [`The file uses several units of length (${text.lengthUnits.map(({ name }) => name).join(", ")}); each part was converted from its own.`];
  return [];
}

function bodyWarnings({ solids, triangulated, looseFaces }: ReadStep): string[] {
  const faces = `${looseFaces.length} surface${looseFaces.length === 1 ? "" : "s"}`;
  if (solids.length > 0) {
    return [
      ...(triangulated.length > 0 ? [`${triangulated.length} of its bodies are only triangles (tessellated) and were left out.`] : []),
      ...(looseFaces.length > 0 ? [`${faces} outside the solid (construction or annotation) were left out of all measures.`] : []),
    ];
  }
  if (triangulated.length > 0) return ["The file holds only triangles (tessellated geometry), no solid: nothing was measured. Export it with exact geometry (B-rep)."];
  if (looseFaces.length > 0) return [`The file holds ${faces} but no closed solid: nothing was measured. Close the body in the CAD program and export it as a solid.`];
  return ["The file holds no solid and no surface: nothing was measured. If it refers to other files, export the assembly as one file."];
}
