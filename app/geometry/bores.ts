import type { FaceRecord, FaceSide } from "./face-record.ts";
import type { Vec3 } from "./measure-document.ts";
import { cross, dot, length, minus, moved, pointingDown, square } from "./vec3.ts";

/** Two lines closer than this, over the length of a part, are one axis. */
export const SAME_MM = 1e-4;
/** About a millimetre in ten kilometres: files keep seven digits at least. */
const SAME_DIRECTION = 1e-6;
/** Heights closer than this are one. */
const LEVEL_MM = 1e-6;
/** Lower rings than this are where two roundings overlap by a hair, not bores. */
const LOWEST_MM = 1e-3;
/** A ring counts as complete when less of it is missing than rounding explains, in radians. */
const RING_GAP = 1e-3;

export interface Axis {
  solid: number;
  origin: Vec3;
  direction: Vec3;
}

/** Where a bore ends: between `low` and `high` its ring is no longer complete (a slanted or saddle-shaped mouth). */
export interface BoreEnd {
  /** Along the axis. */
  low: number;
  high: number;
  /** Edges it ends in. */
  edges: number[];
}

/** A stretch of a concave cylinder or cone that is complete around its axis. */
export interface Bore {
  kind: "cylinder" | "cone";
  /** Where the ring is complete, along the axis; from < to. */
  from: number;
  to: number;
  /** Radius at `from` and `to`, mm. */
  radii: [number, number];
  /** The end at `from` and the one at `to`. */
  ends: [BoreEnd, BoreEnd];
  /** Indices of its faces. */
  faces: number[];
}

export interface BoresOnAxis {
  axis: Axis;
  /** In the order along the axis. */
  bores: Bore[];
}

/** Which concave cylinders and cones go completely around an axis, joined across split faces, axis by axis? */
export function findBores(faces: readonly FaceRecord[]): BoresOnAxis[] {
  const byAxis: { axis: Axis; faces: number[] }[] = [];
  faces.forEach((face, index) => {
    if (!face.concave || (face.kind !== "cylinder" && face.kind !== "cone")) return;
    const known = byAxis.find(({ axis }) => axis.solid === face.solid && isOnAxis(face, axis));
    if (known) known.faces.push(index);
    else byAxis.push({ axis: { solid: face.solid, origin: face.origin, direction: pointingDown(face.direction) }, faces: [index] });
  });
  return byAxis
    .map(({ axis, faces: own }) => ({ axis, bores: sameSurfaces(faces, own, axis).flatMap((group) => completeStretches(faces, group, axis)) }))
    .filter(({ bores }) => bores.some(({ kind }) => kind === "cylinder"))
    .map(({ axis, bores }) => ({ axis, bores: bores.sort((a, b) => a.from + a.to - b.from - b.to) }));
}

/** Is the face turned around this axis (or a plane square to it)? */
export function isOnAxis(face: FaceRecord, axis: Axis): boolean {
  if (face.kind === "other") return false;
  const away = length(cross(minus(face.origin, axis.origin), axis.direction));
  if (face.kind === "sphere") return away < SAME_MM;
  if (length(cross(face.direction, axis.direction)) > SAME_DIRECTION) return false;
  return face.kind === "plane" || away < SAME_MM;
}

/** Height of a point along the axis. */
export function along(axis: Axis, point: Vec3): number {
  return dot(minus(point, axis.origin), axis.direction);
}

/** Distance of a point from the axis. */
export function fromAxis(axis: Axis, point: Vec3): number {
  const offset = minus(point, axis.origin);
  return length(moved(offset, axis.direction, -dot(offset, axis.direction)));
}

/** Faces of one cylinder or one cone belong together, whatever they were split into. */
function sameSurfaces(faces: readonly FaceRecord[], own: number[], axis: Axis): number[][] {
  const groups: { key: [number, number]; kind: string; faces: number[] }[] = [];
  for (const index of own) {
    const face = faces[index]!;
    const key = face.kind === "cylinder" ? ([face.radius_mm, 0] as [number, number]) : coneOf(face, axis);
    const known = groups.find((group) => group.kind === face.kind && Math.abs(group.key[0] - key[0]) < SAME_MM && Math.abs(group.key[1] - key[1]) < SAME_MM);
    if (known) known.faces.push(index);
    else groups.push({ key, kind: face.kind, faces: [index] });
  }
  return groups.map((group) => group.faces);
}

/** A cone as the line r = key[0] + key[1] × height, from the two boundary points that lie furthest apart along the axis. */
function coneOf(face: FaceRecord, axis: Axis): [number, number] {
  const profile = face.sides.flatMap(({ points }) => points.map((point) => [along(axis, point), fromAxis(axis, point)] as const));
  const low = profile.reduce((a, b) => (b[0] < a[0] ? b : a));
  const high = profile.reduce((a, b) => (b[0] > a[0] ? b : a));
  const slope = high[0] - low[0] > LEVEL_MM ? (high[1] - low[1]) / (high[0] - low[0]) : 0;
  return [low[1] - slope * low[0], slope];
}

interface UnrolledSide {
  /** Angle around the axis (not wrapped along a side) and height. */
  path: [angle: number, height: number][];
  low: number;
  high: number;
  edge: number;
}

function completeStretches(faces: readonly FaceRecord[], group: number[], axis: Axis): Bore[] {
  const unrolled = group.map((index) => faces[index]!.sides.filter(({ points }) => points.length > 1).map((side) => unroll(side, axis)));
  const levels = distinct(unrolled.flat().flatMap(({ low, high }) => [low, high]));
  const slabs = levels.slice(1).map((to, index) => {
    const from = levels[index]!;
    return { from, to, covered: unrolled.reduce((sum, sides) => sum + coverage(sides, (from + to) / 2), 0) };
  });
  const isComplete = (covered: number) => covered > 2 * Math.PI - RING_GAP;

  const stretches: Bore[] = [];
  for (let first = 0; first < slabs.length; first++) {
    if (!isComplete(slabs[first]!.covered)) continue;
    // A window (where another hole breaks in) does not end a bore; a gap without any wall does.
    let last = first;
    for (let next = first + 1; next < slabs.length && slabs[next]!.covered > RING_GAP; next++) if (isComplete(slabs[next]!.covered)) last = next;
    let mouthLow = first;
    while (mouthLow > 0 && slabs[mouthLow - 1]!.covered > RING_GAP && !isComplete(slabs[mouthLow - 1]!.covered)) mouthLow--;
    let mouthHigh = last;
    while (mouthHigh < slabs.length - 1 && slabs[mouthHigh + 1]!.covered > RING_GAP) mouthHigh++;
    const [from, to] = [slabs[first]!.from, slabs[last]!.to];
    if (to - from < LOWEST_MM) continue;
    const sides = unrolled.flat();
    const radiusAt = radiusOf(faces[group[0]!]!, axis);
    stretches.push({
      kind: faces[group[0]!]!.kind as "cylinder" | "cone",
      from,
      to,
      radii: [radiusAt(from), radiusAt(to)],
      ends: [endOf(sides, slabs[mouthLow]!.from, from), endOf(sides, to, slabs[mouthHigh]!.to)],
      faces: group,
    });
    first = mouthHigh;
  }
  return stretches;
}

function radiusOf(face: FaceRecord, axis: Axis): (height: number) => number {
  if (face.kind === "cylinder") return () => face.radius_mm;
  const [constant, slope] = coneOf(face, axis);
  return (height) => Math.max(0, constant + slope * height);
}

function endOf(sides: UnrolledSide[], low: number, high: number): BoreEnd {
  const edges = sides.filter((side) => side.low > low - LEVEL_MM * 10 && side.high < high + LEVEL_MM * 10).map(({ edge }) => edge);
  return { low, high, edges: [...new Set(edges)] };
}

function unroll({ points, edge }: FaceSide, axis: Axis): UnrolledSide {
  const east = square(axis.direction);
  const north = cross(axis.direction, east);
  const path: [number, number][] = [];
  for (const point of points) {
    const offset = minus(point, axis.origin);
    const [x, y] = [dot(offset, east), dot(offset, north)];
    const before = path.at(-1)?.[0];
    // On the axis (the tip of a cone) there is no angle: keep the last.
    let angle = Math.hypot(x, y) < LEVEL_MM ? (before ?? 0) : Math.atan2(y, x);
    if (before !== undefined) angle += 2 * Math.PI * Math.round((before - angle) / (2 * Math.PI));
    path.push([angle, dot(offset, axis.direction)]);
  }
  const first = path[0]!;
  if (path.length > 1 && fromAxis(axis, points[0]!) < LEVEL_MM) first[0] = path[1]![0];
  const heights = path.map(([, height]) => height);
  return { path, low: Math.min(...heights), high: Math.max(...heights), edge };
}

/**
 * How much of the full turn does one face cover at this height, in radians?
 *
 * Its boundary is walked with the face on the left; seen from the axis, a side that rises has the
 * face ahead in angle, one that falls has it behind.
 */
function coverage(sides: UnrolledSide[], height: number): number {
  const turn = 2 * Math.PI;
  const opens: number[] = [];
  const closes: number[] = [];
  let [low, high] = [Infinity, -Infinity];
  for (const { path, low: sideLow, high: sideHigh } of sides) {
    low = Math.min(low, sideLow);
    high = Math.max(high, sideHigh);
    for (let i = 1; i < path.length; i++) {
      const [[a0, h0], [a1, h1]] = [path[i - 1]!, path[i]!];
      if (h0 < height === h1 < height) continue;
      const angle = a0 + ((a1 - a0) * (height - h0)) / (h1 - h0);
      (h1 > h0 ? opens : closes).push(((angle % turn) + turn) % turn);
    }
  }
  // A face without a seam, between two closed edges.
  if (opens.length === 0 && closes.length === 0) return low < height && height < high ? turn : 0;
  return opens.reduce((sum, open) => {
    // The two sides of a seam lie at one angle; the face is what is between them the long way round.
    const gaps = closes.map((close) => (((close - open) % turn) + turn) % turn).map((gap) => (gap < 1e-7 ? turn : gap));
    return sum + Math.min(turn, ...gaps);
  }, 0);
}

function distinct(heights: number[]): number[] {
  const sorted = heights.sort((a, b) => a - b);
  return sorted.filter((height, index) => index === 0 || height - sorted[index - 1]! > LEVEL_MM);
}
