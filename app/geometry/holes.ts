import { along, findBores, fromAxis, isOnAxis, SAME_MM, type Axis, type Bore, type BoresOnAxis } from "./bores.ts";
import type { FaceRecord } from "./face-record.ts";
import type { MeasuredHole, Vec3 } from "./measure-document.ts";
import { dot, moved, scaled } from "./vec3.ts";

/**
 * A cone that opens the mouth of a hole to at least this many diameters is a seat for a screw head,
 * below it an edge break. Of the right-angled ones: heads of countersunk screws are about two
 * thread diameters wide, chamfers of tapped holes a tenth more than the hole. Common practice, no source.
 */
const SEAT_FROM = { rightAngled: 1.6, other: 1.3 };
/** Below this a slope counts as level, sine of the angle. */
const LEVEL = 1e-6;

/** A hole, and how deep it reaches below its entry; `depth_mm` alone leaves out counterbore, countersink and chamfer. */
export interface RecognisedHole extends MeasuredHole {
  /** Index of the solid it is in. */
  solid: number;
  /** From the centre of the entry to the end of the full diameter. */
  reach_mm: number;
}

/**
 * Which holes do these faces make?
 *
 * A hole is a concave, complete cylinder; split faces are joined, and steps on one axis that meet
 * are one hole of the smallest diameter. Grooves around an island and closed cavities are none.
 * The axis of a hole that is alike at both ends points down (towards the negative of its largest component).
 */
export function findHoles(faces: readonly FaceRecord[]): RecognisedHole[] {
  const byEdge = new Map<string, number[]>();
  faces.forEach((face, index) => {
    for (const { edge } of face.sides) {
      const key = `${face.solid}/${edge}`;
      byEdge.set(key, [...(byEdge.get(key) ?? []), index]);
    }
  });
  const facesAt = (edge: number, solid: number) => byEdge.get(`${solid}/${edge}`) ?? [];
  const holes = findBores(faces).flatMap((found) => chains(faces, facesAt, found).flatMap((chain) => holeOf(faces, facesAt, found.axis, chain) ?? []));
  return holes.sort((a, b) => a.solid - b.solid || b.diameter_mm - a.diameter_mm || a.at_mm[2] - b.at_mm[2] || a.at_mm[1] - b.at_mm[1] || a.at_mm[0] - b.at_mm[0]);
}

type FacesAt = (edge: number, solid: number) => number[];

/** Bores on one axis that meet, in order along it. */
function chains(faces: readonly FaceRecord[], facesAt: FacesAt, { axis, bores }: BoresOnAxis): Bore[][] {
  const found: Bore[][] = [];
  for (const bore of bores) {
    const last = found.at(-1)?.at(-1);
    if (last && meet(faces, facesAt, axis, last, bore)) found.at(-1)!.push(bore);
    else found.push([bore]);
  }
  return found;
}

/** Do the upper end of one and the lower end of the next share an edge, or a shoulder around the axis? */
function meet(faces: readonly FaceRecord[], facesAt: FacesAt, axis: Axis, lower: Bore, upper: Bore): boolean {
  const target = new Set(upper.ends[0].edges);
  if (lower.ends[1].edges.some((edge) => target.has(edge))) return true;
  const [from, to] = [lower.ends[1].low - SAME_MM, upper.ends[0].high + SAME_MM];
  const between = (face: FaceRecord) => face.sides.every(({ points }) => points.every((point) => along(axis, point) > from && along(axis, point) < to));
  return shoulders(faces, facesAt, axis, lower, 1, between).some((index) => between(faces[index]!) && faces[index]!.sides.some(({ edge }) => target.has(edge)));
}

/** Faces around the axis reached from an end of a bore without leaving such faces. */
function shoulders(faces: readonly FaceRecord[], facesAt: FacesAt, axis: Axis, bore: Bore, end: 0 | 1, through: (face: FaceRecord) => boolean): number[] {
  const seen = new Set<number>(bore.faces);
  const reached: number[] = [];
  const queue = [...bore.ends[end].edges];
  const asked = new Set(queue);
  for (let edge; (edge = queue.pop()) !== undefined; ) {
    for (const index of facesAt(edge, axis.solid)) {
      const face = faces[index]!;
      if (seen.has(index) || !isOnAxis(face, axis)) continue;
      seen.add(index);
      reached.push(index);
      if (!through(face)) continue;
      for (const side of face.sides) {
        if (asked.has(side.edge)) continue;
        asked.add(side.edge);
        queue.push(side.edge);
      }
    }
  }
  return reached;
}

type EndState = "open" | "closed" | "island";

/** What is beyond this end of a chain: the open, a bottom, or a bottom with an island in its middle (a groove)? */
function stateOf(faces: readonly FaceRecord[], facesAt: FacesAt, axis: Axis, bore: Bore, end: 0 | 1): EndState {
  const outward = scaled(axis.direction, end === 1 ? 1 : -1);
  const own = new Set(bore.faces);
  let [open, closed] = [0, 0];
  for (const edge of bore.ends[end].edges) {
    for (const index of facesAt(edge, axis.solid)) {
      if (own.has(index)) continue;
      const face = faces[index]!;
      const side = face.sides.find((one) => one.edge === edge)!;
      const slope = dot(side.normal, outward);
      const opens = Math.abs(slope) > LEVEL ? slope > 0 : leadsOutward(face, axis, bore.radii[end]);
      if (opens) open += lengthOf(side.points);
      else closed += lengthOf(side.points);
    }
  }
  // The tip of a cone has no edge.
  if (open === 0 && closed === 0) return "closed";
  if (open >= closed) return "open";
  // Not past a wall that rises again: what stands there is the island itself.
  const floor = shoulders(faces, facesAt, axis, bore, end, (face) => face.kind === "plane" || face.concave || face.kind === "torus");
  return floor.some((index) => isIsland(faces[index]!)) ? "island" : "closed";
}

const isIsland = (face: FaceRecord) => !face.concave && (face.kind === "cylinder" || face.kind === "cone");

/** A face that runs on from the bore without a corner: does it widen? */
function leadsOutward(face: FaceRecord, axis: Axis, radius: number): boolean {
  const points = face.sides.flatMap(({ points }) => points);
  return points.reduce((sum, point) => sum + fromAxis(axis, point) - radius, 0) > 0;
}

function lengthOf(points: Vec3[]): number {
  return points.slice(1).reduce((sum, point, index) => sum + Math.hypot(...point.map((value, axis) => value - points[index]![axis]!)), 0);
}

function holeOf(faces: readonly FaceRecord[], facesAt: FacesAt, axis: Axis, chain: Bore[]): RecognisedHole | null {
  const cylinders = chain.filter(({ kind }) => kind === "cylinder");
  if (cylinders.length === 0) return null;
  const states = [stateOf(faces, facesAt, axis, chain[0]!, 0), stateOf(faces, facesAt, axis, chain.at(-1)!, 1)] as const;
  if (states.includes("island") || !states.includes("open")) return null;

  const radius = Math.min(...cylinders.map(({ radii }) => radii[0]));
  const main = cylinders.filter(({ radii }) => radii[0] < radius + SAME_MM);
  const [from, to] = [main[0]!.from, main.at(-1)!.to];
  const steps = [chain.filter((bore) => bore.to < from + SAME_MM).reverse(), chain.filter((bore) => bore.from > to - SAME_MM)] as const;
  const mouths = [entryOf(steps[0], radius, 0), entryOf(steps[1], radius, 1)] as const;

  const through = states[0] === "open" && states[1] === "open";
  // The axis of the line points down, so its beginning is the upper end.
  const end = through ? (mouths[1].rank > mouths[0].rank ? 1 : 0) : states[0] === "open" ? 0 : 1;
  const mouth = (end === 0 ? chain[0]! : chain.at(-1)!).ends[end];
  const height = (mouth.low + mouth.high) / 2;
  const { entry, diameter, angle } = mouths[end];
  return {
    kind: through ? "through" : "blind",
    diameter_mm: 2 * radius,
    depth_mm: to - from,
    axis: end === 0 ? axis.direction : scaled(axis.direction, -1),
    at_mm: moved(axis.origin, axis.direction, height),
    entry,
    entryDiameter_mm: diameter,
    entryAngle_deg: angle,
    solid: axis.solid,
    reach_mm: end === 0 ? to - height : height - from,
  };
}

interface Entry {
  entry: MeasuredHole["entry"];
  diameter: number | null;
  angle: number | null;
  /** The more there is to it, the likelier the tool came from here. */
  rank: number;
}

/** What the steps between the full diameter and the surface make of the mouth; nearest to the full diameter first. */
function entryOf(steps: readonly Bore[], radius: number, end: 0 | 1): Entry {
  const wider = steps.filter(({ radii }) => Math.max(...radii) > radius + SAME_MM);
  const bore = wider.filter(({ kind }) => kind === "cylinder").at(-1);
  const cone = wider.find(({ kind, radii }) => kind === "cone" && radii[end] > radii[1 - end]!);
  const isSeat = bore !== undefined && cone !== undefined && wider.indexOf(cone) < wider.indexOf(bore) && bore.to - bore.from < cone.to - cone.from;
  if (bore && !isSeat) return { entry: "counterbored", diameter: 2 * bore.radii[end], angle: null, rank: 3e6 + bore.radii[end] };
  if (!cone) return { entry: "plain", diameter: null, angle: null, rank: 0 };
  const angle = (2 * Math.atan2(Math.abs(cone.radii[1] - cone.radii[0]), cone.to - cone.from) * 180) / Math.PI;
  const wide = cone.radii[end] / radius >= (Math.abs(angle - 90) < 0.5 ? SEAT_FROM.rightAngled : SEAT_FROM.other);
  return { entry: wide ? "countersunk" : "chamfered", diameter: 2 * cone.radii[end], angle, rank: (wide ? 2e6 : 1e6) + cone.radii[end] };
}
