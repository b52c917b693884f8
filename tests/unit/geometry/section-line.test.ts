import fc from "fast-check";
import { expect, test } from "vitest";
import { sectionLine, type Axis } from "#app/geometry/section-line.ts";

/** A box from 0,0,0 as eight corners and twelve triangles. */
function box(x: number, y: number, z: number) {
  const positions = [0, 1, 2, 3, 4, 5, 6, 7].flatMap((corner) => [corner & 1 ? x : 0, corner & 2 ? y : 0, corner & 4 ? z : 0]);
  const indices = [0, 2, 1, 1, 2, 3, 4, 5, 6, 5, 7, 6, 0, 1, 4, 1, 5, 4, 2, 6, 3, 3, 6, 7, 0, 4, 2, 2, 4, 6, 1, 3, 5, 3, 7, 5];
  return { positions, indices };
}

function ends(line: number[]): string[][] {
  const segments: string[][] = [];
  for (let i = 0; i < line.length; i += 6) segments.push([line.slice(i, i + 3).join(), line.slice(i + 3, i + 6).join()]);
  return segments;
}

const length = (line: number[]) => {
  let sum = 0;
  for (let i = 0; i < line.length; i += 6) sum += Math.hypot(line[i]! - line[i + 3]!, line[i + 1]! - line[i + 4]!, line[i + 2]! - line[i + 5]!);
  return sum;
};

test("a box of 10 × 20 × 30 is cut along the outline of its faces", () => {
  const { positions, indices } = box(10, 20, 30);
  expect(length(sectionLine(positions, indices, 0, 5))).toBeCloseTo(2 * (20 + 30), 9);
  expect(length(sectionLine(positions, indices, 1, 5))).toBeCloseTo(2 * (10 + 30), 9);
  expect(length(sectionLine(positions, indices, 2, 5))).toBeCloseTo(2 * (10 + 20), 9);
});

test("beside the box there is nothing to cut", () => {
  const { positions, indices } = box(10, 20, 30);
  expect(sectionLine(positions, indices, 0, -0.1)).toEqual([]);
  expect(sectionLine(positions, indices, 0, 10.1)).toEqual([]);
  expect(sectionLine([], [], 0, 0)).toEqual([]);
});

test("the line of a closed mesh is closed, also through its corners: every point is reached twice", () => {
  const extent = fc.integer({ min: 1, max: 50 });
  fc.assert(
    fc.property(extent, extent, extent, fc.constantFrom<Axis[]>(0, 1, 2), fc.integer({ min: 0, max: 50 }), (x, y, z, axis, at) => {
      const { positions, indices } = box(x, y, z);
      const line = sectionLine(positions, indices, axis, at);
      const reached = new Map<string, number>();
      for (const end of ends(line).flat()) reached.set(end, (reached.get(end) ?? 0) + 1);
      for (const times of reached.values()) expect(times % 2).toBe(0);
      for (let i = axis; i < line.length; i += 3) expect(line[i]).toBe(at);
    }),
  );
});
