import { counted } from "#app/geometry/counted.ts";
import { countEdges } from "#app/geometry/edge-counts.ts";
import { guessUnits } from "#app/geometry/guess-unit.ts";
import { centroidAndInertia, massPropertiesOf, volumeAboutOrigin } from "#app/geometry/mass-properties.ts";
import { UnreadableModel, type MeasureDocument, type MeasuredMesh, type Vec3 } from "#app/geometry/measure-document.ts";
import { createStlReader, expectedCorners } from "#app/geometry/stl-reader.ts";
import type { StlFacts } from "#app/geometry/stl-triangles.ts";
import { createWelder, type WeldedMesh, type Welder } from "#app/geometry/weld-vertices.ts";

const MM_PER_UNIT = { mm: 1, in: 25.4 } as const;
export type StlUnit = keyof typeof MM_PER_UNIT;

/** Longer than any part: 100 m. Such a file is in another unit, or damaged. */
const SUSPICIOUS_MM = 1e5;
/** A volume below this share of area × size is rounding, as of a flat sheet that closes on itself. */
const NO_VOLUME = 1e-12;
/** Small enough to report progress from, large enough not to cost anything. */
const PIECE_BYTES = 1 << 20;
/** Share of the time that reading and welding take. */
const READING_SHARE = 0.6;

export interface MeasureStlOptions {
  name: string;
  /** Of the file's bytes, in hexadecimal. */
  sha256: string;
  /** Unit of the file's numbers; mm is assumed, and said to be, when it is not stated. */
  unit?: StlUnit;
  /** Called now and then with the share done, 0 to 1. */
  onProgress?: (share: number) => void;
}

/**
 * What is there to know about this STL?
 *
 * Volume, and centroid and inertia where the mesh is closed, follow the winding: an inside-out
 * part has a negative volume. The volume of a mesh that is not closed and oriented is taken about
 * the file's origin, as is usual, and a warning says that it means little; centroid and inertia of
 * an open mesh, or of one without volume, are null.
 *
 * @param bytes the whole file
 * @throws UnreadableModel with one line that says why and what to do
 */
export function measureStl(bytes: Uint8Array, { sha256, ...options }: MeasureStlOptions): MeasureDocument {
  const measurer = createStlMeasurer(bytes.length, options);
  for (let at = 0; at < bytes.length; at += PIECE_BYTES) measurer.push(bytes.subarray(at, at + PIECE_BYTES));
  return measurer.finish(sha256);
}

/**
 * The same for a file that comes in pieces, of which none is kept: ten million triangles take
 * about half a gigabyte.
 *
 * @param totalBytes size of the whole file
 */
export function createStlMeasurer(totalBytes: number, options: Omit<MeasureStlOptions, "sha256">) {
  let welder: Welder<Float32Array | Float64Array> | null = null;
  let seen = 0;
  const reader = createStlReader(totalBytes, (coordinates) => {
    const precision = coordinates instanceof Float32Array ? "single" : "double";
    welder ??= createWelder(precision, expectedCorners(totalBytes, precision));
    welder.add(coordinates);
  });
  return {
    push(chunk: Uint8Array): void {
      reader.push(chunk);
      seen += chunk.length;
      options.onProgress?.((READING_SHARE * seen) / totalBytes);
    },
    finish(sha256: string): MeasureDocument {
      const facts = reader.finish();
      // A reader that finishes has handed on at least one triangle.
      return describe(facts, welder!.finish(), totalBytes, { ...options, sha256 });
    },
  };
}

function describe(
  { format, triangles, warnings: found }: StlFacts,
  { indices, vertices, vertexCount }: WeldedMesh,
  bytes: number,
  { name, sha256, unit, onProgress }: MeasureStlOptions,
): MeasureDocument {
  const counts = countEdges(indices, vertexCount, (share) => onProgress?.(READING_SHARE + (0.9 - READING_SHARE) * share));
  const bounds = boundsOf(vertices);
  const middle = bounds.min.map((low, axis) => low + bounds.size[axis]! / 2) as Vec3;
  const sums = massPropertiesOf(vertices, indices, middle);
  if (sums.zeroAreaTriangles === triangles) {
    throw new UnreadableModel(`none of its ${counted(triangles, "triangle")} has an area: there is nothing to measure; export the part again`);
  }
  const mesh: MeasuredMesh = {
    triangles,
    degenerateTriangles: sums.zeroAreaTriangles,
    shells: counts.shells,
    openEdges: counts.openEdges,
    nonManifoldEdges: counts.nonManifoldEdges,
    misorientedEdges: counts.misorientedEdges,
    closed: counts.openEdges === 0 && counts.nonManifoldEdges === 0,
    oriented: counts.misorientedEdges === 0,
  };

  const largest = Math.max(...bounds.size);
  const volume = mesh.closed && mesh.oriented ? sums.volume : volumeAboutOrigin(sums);
  const hasVolume = Math.abs(sums.volume) > NO_VOLUME * sums.area * largest;
  const mass = mesh.closed && hasVolume ? centroidAndInertia(sums) : null;
  onProgress?.(1);

  const mm = MM_PER_UNIT[unit ?? "mm"];
  const scaled = (point: Vec3, factor: number) => point.map((part) => part * factor || 0) as Vec3;
  return {
    file: { name, bytes, sha256, format },
    unit: { source: unit ?? "mm", assumed: unit === undefined },
    warnings: [...found, ...warningsAbout(mesh, volume, hasVolume), ...sizeWarnings(largest, mm, unit)],
    mesh,
    bounds_mm: { min: scaled(bounds.min, mm), max: scaled(bounds.max, mm), size: scaled(bounds.size, mm) },
    area_mm2: sums.area * mm ** 2,
    volume_mm3: volume * mm ** 3 || 0,
    centroid_mm: mass && scaled(mass.centroid, mm),
    inertia_mm5: mass && (mass.inertia.map((row) => scaled(row, mm ** 5)) as [Vec3, Vec3, Vec3]),
    solid: null,
    holes: [],
    patterns: [],
    smallestInsideRadius_mm: null,
    thinnestWall_mm: null,
  };
}

function boundsOf(vertices: Float32Array | Float64Array): { min: Vec3; max: Vec3; size: Vec3 } {
  const min: Vec3 = [Infinity, Infinity, Infinity];
  const max: Vec3 = [-Infinity, -Infinity, -Infinity];
  for (let axis = 0; axis < 3; axis++) {
    let low = Infinity, high = -Infinity;
    for (let at = axis; at < vertices.length; at += 3) {
      const value = vertices[at]!;
      if (value < low) low = value;
      if (value > high) high = value;
    }
    min[axis] = low;
    max[axis] = high;
  }
  return { min, max, size: [max[0] - min[0], max[1] - min[1], max[2] - min[2]] };
}

function warningsAbout(mesh: MeasuredMesh, volume: number, hasVolume: boolean): string[] {
  const warnings: string[] = [];
  if (mesh.degenerateTriangles > 0) warnings.push(`${counted(mesh.degenerateTriangles, "triangle")} without area.`);
  if (!mesh.closed) {
    const open = mesh.openEdges > 0 ? counted(mesh.openEdges, "open edge") : "";
    const crowded = mesh.nonManifoldEdges > 0 ? counted(mesh.nonManifoldEdges, "edge with more than two triangles", "edges with more than two triangles") : "";
    warnings.push(`The surface is not closed (${[open, crowded].filter(Boolean).join(", ")}): its volume can't be relied on.`);
  }
  if (!mesh.oriented) {
    const edges = counted(mesh.misorientedEdges, "edge");
    warnings.push(`Triangles disagree about which side is outside (${edges}): volume and centroid can't be relied on.`);
  }
  if (mesh.closed && mesh.oriented && !hasVolume) warnings.push("The surface encloses no volume.");
  else if (mesh.closed && mesh.oriented && volume < 0) warnings.push("The surface is inside out: its volume is negative.");
  return warnings;
}

function sizeWarnings(largest: number, mm: number, unit: StlUnit | undefined): string[] {
  if (largest * mm > SUSPICIOUS_MM) return [`The part would be ${shortened((largest * mm) / 1000)} m long: is the unit right, is the file sound?`];
  if (unit !== undefined) return [];
  const guesses = guessUnits(largest).map((guess) =>
    guess === "in" ? `inches (it would be ${shortened(largest * 25.4)} mm long)` : `metres (${shortened(largest * 1000)} mm)`,
  );
  return guesses.length > 0 ? [`Millimetres are assumed; the part is then ${shortened(largest)} mm long. Perhaps its numbers are ${guesses.join(" or ")}.`] : [];
}

const shortened = (value: number) => (Math.abs(value) >= 1e6 ? value.toExponential(1) : Number(value.toPrecision(3)).toString());
