import type { Vec3 } from "./measure-document.ts";

export const minus = (a: Vec3, b: Vec3): Vec3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
export const scaled = (a: Vec3, by: number): Vec3 => [a[0] * by, a[1] * by, a[2] * by];
export const dot = (a: Vec3, b: Vec3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
export const cross = (a: Vec3, b: Vec3): Vec3 => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
export const length = (a: Vec3): number => Math.hypot(a[0], a[1], a[2]);

/** `a` + `along` × `by` */
export function moved(a: Vec3, along: Vec3, by: number): Vec3 {
  return [a[0] + along[0] * by, a[1] + along[1] * by, a[2] + along[2] * by];
}

/** @throws RangeError for a vector without direction */
export function unit(a: Vec3): Vec3 {
  const size = length(a);
  if (!(size > 0)) throw new RangeError("a vector of length 0 has no direction");
  return scaled(a, 1 / size);
}

/** A unit vector at right angles to the unit vector `a`. */
export function square(a: Vec3): Vec3 {
  const [x, y, z] = a.map(Math.abs) as Vec3;
  return unit(cross(a, x <= y && x <= z ? [1, 0, 0] : y <= z ? [0, 1, 0] : [0, 0, 1]));
}

/** The same line for `a` and its opposite: the largest component is made negative, so that it points down, back or left. */
export function pointingDown(a: Vec3): Vec3 {
  // A hair of preference, so that rounding does not decide between equal components.
  const weights: Vec3 = [Math.abs(a[0]), Math.abs(a[1]) * (1 + 1e-9), Math.abs(a[2]) * (1 + 2e-9)];
  const largest = a[weights.indexOf(Math.max(...weights)) as 0 | 1 | 2];
  return largest > 0 ? scaled(a, -1) : a;
}
