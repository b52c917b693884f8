/** x, y or z as a place in a point. */
export type Axis = 0 | 1 | 2;

/**
 * Where does a plane across an axis cut a triangle mesh?
 *
 * A corner on the plane counts as above it, so that neighbours agree and the line of a closed mesh
 * is closed.
 *
 * @param positions x, y, z per vertex, mm
 * @param indices three per triangle
 * @param at where the plane stands on its axis, mm
 * @returns segments as x, y, z, x, y, z …; nothing where the plane misses the mesh
 */
export function sectionLine(positions: ArrayLike<number>, indices: ArrayLike<number>, axis: Axis, at: number): number[] {
  const segments: number[] = [];
  for (let t = 0; t + 2 < indices.length; t += 3) {
    const a = indices[t]! * 3;
    const b = indices[t + 1]! * 3;
    const c = indices[t + 2]! * 3;
    const aboveA = positions[a + axis]! >= at;
    const aboveB = positions[b + axis]! >= at;
    const aboveC = positions[c + axis]! >= at;
    if (aboveA === aboveB && aboveB === aboveC) continue;
    if (aboveA !== aboveB) cross(positions, a, b, axis, at, segments);
    if (aboveB !== aboveC) cross(positions, b, c, axis, at, segments);
    if (aboveC !== aboveA) cross(positions, c, a, axis, at, segments);
  }
  return segments;
}

function cross(positions: ArrayLike<number>, from: number, to: number, axis: Axis, at: number, segments: number[]): void {
  // From the lower end always, so that two triangles at one edge find the very same point.
  const [low, high] = positions[from + axis]! < positions[to + axis]! ? [from, to] : [to, from];
  const share = (at - positions[low + axis]!) / (positions[high + axis]! - positions[low + axis]!);
  for (let k = 0; k < 3; k++) segments.push(k === axis ? at : positions[low + k]! + share * (positions[high + k]! - positions[low + k]!));
}
