import type { RecognisedHole } from "./holes.ts";
import type { MeasuredPattern, Vec3 } from "./measure-document.ts";
import { cross, dot, length, minus, moved, pointingDown, square } from "./vec3.ts";

/** Diameters and places that agree within this are alike, mm. */
const ALIKE_MM = 2e-3;
const PARALLEL = 1e-5;
/** Triples of more holes than this take too long to try; centres that other features give are tried anyway. */
const MOST_FOR_TRIPLES = 40;

/** An axis that may be the middle of a pattern: of a bore or of a round outside. */
export interface CentreAxis {
  solid: number;
  origin: Vec3;
  direction: Vec3;
}

interface Circle {
  x: number;
  y: number;
  radius: number;
  members: number[];
  equallySpaced: boolean;
  aroundFeature: boolean;
}

/**
 * Which equal holes (three or more) lie on a circle?
 *
 * Any three points lie on one, so a circle counts only where something speaks for it: all equal
 * holes of that face of the part lie on it and it is equally spaced or has four or more (four corners
 * of a rectangle are no circle); or it runs
 * around the axis of a round feature; or five or more are equally spaced.
 */
export function findCircles(holes: readonly RecognisedHole[], centres: readonly CentreAxis[]): MeasuredPattern[] {
  return alike(holes).flatMap((group) => {
    const axis = pointingDown(holes[group[0]!]!.axis);
    const east = square(axis);
    const north = cross(axis, east);
    const flat = (point: Vec3): [number, number] => [dot(point, east), dot(point, north)];
    const places = group.map((index) => flat(holes[index]!.at_mm));
    const features = centres.filter(({ solid, direction }) => solid === holes[group[0]!]!.solid && length(cross(direction, axis)) < PARALLEL).map(({ origin }) => flat(origin));
    const level = dot(holes[group[0]!]!.at_mm, axis);
    return circlesOf(places, features).map((circle): MeasuredPattern => ({
      kind: "circle",
      count: circle.members.length,
      diameter_mm: 2 * circle.radius,
      center_mm: moved(moved(moved([0, 0, 0], east, circle.x), north, circle.y), axis, level),
      axis,
      equallySpaced: circle.equallySpaced,
      holes: circle.members.map((member) => group[member]!),
    }));
  });
}

/** Holes of one diameter in one solid that start in one plane, in groups of three or more. */
function alike(holes: readonly RecognisedHole[]): number[][] {
  const groups: number[][] = [];
  holes.forEach((hole, index) => {
    const group = groups.find(([first]) => {
      const other = holes[first!]!;
      return (
        other.solid === hole.solid &&
        Math.abs(other.diameter_mm - hole.diameter_mm) < ALIKE_MM &&
        length(cross(other.axis, hole.axis)) < PARALLEL &&
        Math.abs(dot(minus(hole.at_mm, other.at_mm), other.axis)) < ALIKE_MM
      );
    });
    if (group) group.push(index);
    else groups.push([index]);
  });
  return groups.filter((group) => group.length >= 3);
}

function circlesOf(places: [number, number][], features: [number, number][]): Circle[] {
  let left = places.map((_, index) => index);
  const found: Circle[] = [];
  while (left.length >= 3) {
    const all = left.length === places.length;
    const best = candidates(places, left, features)
      .filter(({ members, equallySpaced, aroundFeature }) => {
        const count = members.length;
        if (aroundFeature) return equallySpaced || count >= 4;
        if (all && count === left.length) return equallySpaced || count > 4 || (count === 4 && !isRectangle(members.map((member) => places[member]!)));
        return equallySpaced && count >= 5;
      })
      .sort((a, b) => b.members.length - a.members.length || Number(b.equallySpaced) - Number(a.equallySpaced) || Number(b.aroundFeature) - Number(a.aroundFeature))[0];
    if (!best) break;
    found.push(best);
    left = left.filter((index) => !best.members.includes(index));
  }
  return found;
}

function candidates(places: [number, number][], left: number[], features: [number, number][]): Circle[] {
  const circles: Circle[] = [];
  for (const [x, y] of features) {
    const radii = left.map((index) => Math.hypot(places[index]![0] - x, places[index]![1] - y)).sort((a, b) => a - b);
    for (const [at, radius] of radii.entries()) {
      if (at > 0 && radius - radii[at - 1]! < ALIKE_MM / 2) continue;
      circles.push(circleAround(places, left, x, y, radius, true));
    }
  }
  if (left.length <= MOST_FOR_TRIPLES) {
    for (let i = 0; i < left.length; i++) {
      for (let j = i + 1; j < left.length; j++) {
        for (let k = j + 1; k < left.length; k++) {
          const centre = centreOf(places[left[i]!]!, places[left[j]!]!, places[left[k]!]!);
          if (centre) circles.push(circleAround(places, left, centre[0], centre[1], centre[2], false));
        }
      }
    }
  }
  return circles.filter(({ members, radius }) => members.length >= 3 && radius > ALIKE_MM);
}

function circleAround(places: [number, number][], left: number[], x: number, y: number, radius: number, aroundFeature: boolean): Circle {
  const members = left.filter((index) => Math.abs(Math.hypot(places[index]![0] - x, places[index]![1] - y) - radius) < ALIKE_MM);
  const angle = (index: number) => Math.atan2(places[index]![1] - y, places[index]![0] - x);
  members.sort((a, b) => angle(a) - angle(b));
  const share = (2 * Math.PI) / members.length;
  const equallySpaced = members.every((index, at) => {
    const gap = (angle(members[(at + 1) % members.length]!) - angle(index) + 4 * Math.PI) % (2 * Math.PI);
    return Math.abs(gap - share) * radius < 2 * ALIKE_MM;
  });
  return { x, y, radius, members, equallySpaced, aroundFeature };
}

/** Four points in order around their circle: a rectangle lies on one, and nobody would call it that. */
function isRectangle(corners: [number, number][]): boolean {
  const [[ax, ay], [bx, by], [cx, cy], [dx, dy]] = corners as [[number, number], [number, number], [number, number], [number, number]];
  return Math.hypot(ax + cx - bx - dx, ay + cy - by - dy) < 2 * ALIKE_MM;
}

/** Centre and radius of the circle through three points; null when they lie on a line. */
function centreOf([ax, ay]: [number, number], [bx, by]: [number, number], [cx, cy]: [number, number]): [number, number, number] | null {
  const [ux, uy, vx, vy] = [bx - ax, by - ay, cx - ax, cy - ay];
  const twice = 2 * (ux * vy - uy * vx);
  const [uu, vv] = [ux * ux + uy * uy, vx * vx + vy * vy];
  // Nearly on a line: the circle would be far larger than the part.
  if (Math.abs(twice) < 1e-3 * Math.max(uu, vv)) return null;
  const [x, y] = [(vy * uu - uy * vv) / twice, (ux * vv - vx * uu) / twice];
  return [ax + x, ay + y, Math.hypot(x, y)];
}
