import type { Vec3 } from "./measure-document.ts";
import { cross, dot, length, minus, moved, square, unit } from "./vec3.ts";

/** Free-form surfaces that stand for a cylinder follow it to rounding; approximations of something else don't. */
const EXACT_MM = 1e-5;
const SQUARE = 1e-6;

export interface Cylinder {
  origin: Vec3;
  direction: Vec3;
  radius_mm: number;
}

/**
 * Some programs write every surface free-form. Is this one truly a cylinder?
 *
 * @param points of the surface, well spread over it, mm
 * @param normals unit normals there
 * @returns null for anything but a cylinder
 */
export function cylinderThrough(points: readonly Vec3[], normals: readonly Vec3[]): Cylinder | null {
  const [point, normal] = [points[0], normals[0]];
  if (!point || !normal) return null;
  // The normal most nearly square to the first gives the axis best.
  const turns = normals.map((other) => length(cross(normal, other)));
  const far = turns.indexOf(Math.max(...turns));
  if (!(turns[far]! > 0.05)) return null;
  const direction = unit(cross(normal, normals[far]!));
  if (normals.some((other) => Math.abs(dot(other, direction)) > SQUARE)) return null;

  // The normals of a cylinder meet on its axis.
  const east = square(direction);
  const north = cross(direction, east);
  const flat = (vector: Vec3): [number, number] => [dot(vector, east), dot(vector, north)];
  const [[px, py], [nx, ny], [qx, qy], [mx, my]] = [flat(point), flat(normal), flat(points[far]!), flat(normals[far]!)];
  const alongNormal = ((qx - px) * my - (qy - py) * mx) / (nx * my - ny * mx);
  const origin = moved(point, normal, alongNormal);
  const radius = Math.abs(alongNormal);
  const isRound = points.every((other) => {
    const offset = minus(other, origin);
    return Math.abs(length(moved(offset, direction, -dot(offset, direction))) - radius) < EXACT_MM;
  });
  return isRound && radius > EXACT_MM ? { origin, direction, radius_mm: radius } : null;
}
