import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { measureStl } from "#app/geometry/measure-stl.ts";
import type { MeasureDocument } from "#app/geometry/measure-document.ts";
import { asciiStl, binaryStl, box, prism, sphere, torus } from "./solids.ts";

const options = { name: "part.stl", sha256: "0".repeat(64), unit: "mm" } as const;
const measure = (bytes: Uint8Array): MeasureDocument => measureStl(bytes, options);
const relative = (value: number, want: number) => Math.abs(value / want - 1);

describe("solids whose measures have a closed form", () => {
  test("a box", () => {
    const { mesh, bounds_mm, area_mm2, volume_mm3, centroid_mm, inertia_mm5, warnings } = measure(asciiStl(box(40, 25, 6)));
    expect(mesh).toEqual({ triangles: 12, degenerateTriangles: 0, shells: 1, openEdges: 0, nonManifoldEdges: 0, misorientedEdges: 0, closed: true, oriented: true });
    expect(bounds_mm).toEqual({ min: [0, 0, 0], max: [40, 25, 6], size: [40, 25, 6] });
    expect(area_mm2).toBeCloseTo(2 * (40 * 25 + 25 * 6 + 6 * 40), 9);
    expect(volume_mm3).toBeCloseTo(6000, 9);
    centroid_mm!.forEach((value, axis) => expect(value).toBeCloseTo([20, 12.5, 3][axis]!, 10));
    // Textbook: m (b² + c²) / 12.
    expect(inertia_mm5![0][0]).toBeCloseTo((6000 * (25 ** 2 + 6 ** 2)) / 12, 6);
    expect(inertia_mm5![1][1]).toBeCloseTo((6000 * (40 ** 2 + 6 ** 2)) / 12, 6);
    expect(inertia_mm5![2][2]).toBeCloseTo((6000 * (40 ** 2 + 25 ** 2)) / 12, 6);
    expect(Math.abs(inertia_mm5![0][1])).toBeLessThan(1e-6);
    expect(warnings).toEqual([]);
  });

  test.each([3, 4, 17, 1000])("a prism over a regular polygon of %i corners", (n) => {
    const radius = 30, height = 12;
    const measured = measure(asciiStl(prism(n, radius, height)));
    const base = (n / 2) * radius ** 2 * Math.sin((2 * Math.PI) / n);
    expect(relative(measured.volume_mm3!, base * height)).toBeLessThan(1e-12);
    expect(relative(measured.area_mm2!, 2 * base + n * 2 * radius * Math.sin(Math.PI / n) * height)).toBeLessThan(1e-12);
    // Polar second moment of a regular polygon: A R² (2 + cos 2π/n) / 6.
    expect(relative(measured.inertia_mm5![2][2], (height * base * radius ** 2 * (2 + Math.cos((2 * Math.PI) / n))) / 6)).toBeLessThan(1e-11);
    expect(measured.mesh).toMatchObject({ shells: 1, closed: true, oriented: true });
  });

  test("a sphere: the missing volume falls with the square of the step", () => {
    const lack = (steps: number) => 1 - measure(asciiStl(sphere(25, 2 * steps, steps))).volume_mm3! / ((4 / 3) * Math.PI * 25 ** 3);
    const [coarse, fine] = [lack(30), lack(60)];
    expect(coarse).toBeGreaterThan(0);
    expect(coarse / fine).toBeGreaterThan(3.9);
    expect(coarse / fine).toBeLessThan(4.1);
    const measured = measure(asciiStl(sphere(25, 120, 60)));
    expect(relative(measured.inertia_mm5![0][0], 0.4 * (4 / 3) * Math.PI * 25 ** 5)).toBeLessThan(5e-3);
  });

  test("a torus, against Pappus' theorem", () => {
    const measured = measure(binaryStl(torus(50, 20, 400, 200)));
    expect(measured.mesh).toMatchObject({ triangles: 160_000, shells: 1, closed: true, oriented: true });
    expect(relative(measured.volume_mm3!, 2 * Math.PI ** 2 * 50 * 20 ** 2)).toBeLessThan(3e-4);
    expect(relative(measured.area_mm2!, 4 * Math.PI ** 2 * 50 * 20)).toBeLessThan(2e-4);
  });
});

const models = [torus(50, 20, 12, 7), box(40, 25, 6), prism(9, 30, 12)];
const model = fc.constantFrom(...models);
const angle = fc.double({ min: -Math.PI, max: Math.PI, noNaN: true });
const shift = fc.double({ min: -1e4, max: 1e4, noNaN: true });

describe("laws", () => {
  test("turning and moving leave counts, area and volume; the centroid moves along", () => {
    fc.assert(
      fc.property(model, angle, angle, fc.tuple(shift, shift, shift), (coordinates, a, b, by) => {
        const turned = Float64Array.from(coordinates);
        const move = (at: number) => {
          const x = coordinates[at]!, y = coordinates[at + 1]!, z = coordinates[at + 2]!;
          const x1 = x * Math.cos(a) - y * Math.sin(a), y1 = x * Math.sin(a) + y * Math.cos(a);
          turned[at] = x1 + by[0];
          turned[at + 1] = y1 * Math.cos(b) - z * Math.sin(b) + by[1];
          turned[at + 2] = y1 * Math.sin(b) + z * Math.cos(b) + by[2];
        };
        for (let at = 0; at < coordinates.length; at += 3) move(at);
        const before = measure(asciiStl(coordinates)), after = measure(asciiStl(turned));
        // Turning may bend collinear corners, so zero areas may come or go; here there are none.
        expect(after.mesh).toEqual(before.mesh);
        expect(relative(after.area_mm2!, before.area_mm2!)).toBeLessThan(1e-9);
        expect(relative(after.volume_mm3!, before.volume_mm3!)).toBeLessThan(1e-9);
        const trace = (document: MeasureDocument) => document.inertia_mm5![0][0] + document.inertia_mm5![1][1] + document.inertia_mm5![2][2];
        expect(relative(trace(after), trace(before))).toBeLessThan(1e-8);
      }),
      { numRuns: 100 },
    );
  });

  test("the order of triangles, and which corner comes first, is irrelevant", () => {
    fc.assert(
      fc.property(model, fc.infiniteStream(fc.nat()), (coordinates, random) => {
        const triangles = Array.from({ length: coordinates.length / 9 }, (_, i) => {
          const corners = [0, 3, 6].map((k) => [...coordinates.subarray(i * 9 + k, i * 9 + k + 3)]);
          const turn = random.next().value % 3;
          return { key: random.next().value, corners: [...corners.slice(turn), ...corners.slice(0, turn)].flat() };
        });
        triangles.sort((p, q) => p.key - q.key);
        const before = measure(binaryStl(coordinates)), after = measure(binaryStl(triangles.flatMap(({ corners }) => corners)));
        expect(after.mesh).toEqual(before.mesh);
        expect(after.bounds_mm).toEqual(before.bounds_mm);
        expect(relative(after.area_mm2!, before.area_mm2!)).toBeLessThan(1e-12);
        expect(relative(after.volume_mm3!, before.volume_mm3!)).toBeLessThan(1e-12);
      }),
      { numRuns: 100 },
    );
  });

  test("splitting a triangle at a point inside leaves all but the count", () => {
    const coordinates = box(40, 25, 6);
    fc.assert(
      fc.property(fc.nat(11), fc.integer({ min: 1, max: 6 }), fc.integer({ min: 1, max: 6 }), (triangle, i, j) => {
        const at = triangle * 9;
        const corner = (k: number) => [...coordinates.subarray(at + 3 * k, at + 3 * k + 3)];
        const [p, q, r] = [corner(0), corner(1), corner(2)];
        const [s, t] = [i / 16, j / 16];
        const inside = p.map((value, axis) => value + s * (q[axis]! - value) + t * (r[axis]! - value));
        const split = [...coordinates.subarray(0, at), ...[[p, q], [q, r], [r, p]].flatMap(([from, to]) => [...from!, ...to!, ...inside]), ...coordinates.subarray(at + 9)];
        const before = measure(asciiStl(coordinates)), after = measure(asciiStl(split));
        expect(after.mesh).toEqual({ ...before.mesh, triangles: 14 });
        expect(after.bounds_mm).toEqual(before.bounds_mm);
        expect(relative(after.area_mm2!, before.area_mm2!)).toBeLessThan(1e-12);
        expect(relative(after.volume_mm3!, before.volume_mm3!)).toBeLessThan(1e-12);
        after.centroid_mm!.forEach((value, axis) => expect(value).toBeCloseTo(before.centroid_mm![axis]!, 9));
      }),
    );
  });

  test("turning every triangle over negates the volume and nothing else", () => {
    fc.assert(
      fc.property(model, (coordinates) => {
        const over = coordinates.slice();
        for (let at = 0; at < over.length; at += 9) over.set([...coordinates.subarray(at + 3, at + 6), ...coordinates.subarray(at, at + 3)], at);
        const before = measure(binaryStl(coordinates)), after = measure(binaryStl(over));
        expect(after.mesh).toEqual(before.mesh);
        expect(relative(after.volume_mm3!, -before.volume_mm3!)).toBeLessThan(1e-12);
        expect(after.warnings.join()).toMatch(/inside out/);
      }),
    );
  });

  test("two parts in one file add up", () => {
    const far = box(10, 10, 10).map((value) => value + 100);
    const measured = measure(binaryStl([...box(40, 25, 6), ...far]));
    expect(measured.mesh).toMatchObject({ triangles: 24, shells: 2, closed: true });
    expect(measured.volume_mm3).toBeCloseTo(7000, 8);
  });
});

describe("what has no measure is not given one", () => {
  test("an open box: no centroid, a warning, the volume about the origin", () => {
    const measured = measure(binaryStl(box(40, 25, 6).subarray(0, 90)));
    expect(measured).toMatchObject({ centroid_mm: null, inertia_mm5: null, mesh: { closed: false } });
    expect(measured.warnings.join()).toMatch(/not closed \(4 open edges\)/);
  });

  test("a flat sheet with two sides encloses nothing", () => {
    const sheet = [0, 0, 0, 30, 0, 0, 0, 20, 0, 0, 0, 0, 0, 20, 0, 30, 0, 0];
    const measured = measure(binaryStl(sheet));
    expect(measured).toMatchObject({ mesh: { closed: true, oriented: true }, area_mm2: 600, volume_mm3: 0, centroid_mm: null, inertia_mm5: null });
    expect(measured.warnings.join()).toMatch(/encloses no volume/);
  });

  test("a single needle-thin triangle is not one without area", () => {
    expect(measure(binaryStl([0, 0, 0, 10, 0, 0, 20, 1e-30, 0])).mesh!.degenerateTriangles).toBe(0);
    expect(() => measure(binaryStl([0, 0, 0, 10, 0, 0, 20, 0, 0]))).toThrow(/none of its 1 triangle has an area/);
  });
});

test.each([
  [0.4, /metres \(400 mm\) or inches/],
  [0.99, /metres/],
  [1, /^Millimetres are assumed; the part is then 1 mm long\. Perhaps its numbers are inches \(it would be 25\.4 mm long\)\.$/],
  [9.9, /inches/],
  [10, /^$/],
  [2000, /^$/],
  [200_000, /200 m long: is the unit right/],
])("size %d: a unit is guessed, said, and never applied", (size, warning) => {
  const measured = measureStl(binaryStl(box(size, size / 2, size / 2)), { ...options, unit: undefined });
  expect(measured.warnings.join()).toMatch(warning);
  expect(measured.unit).toEqual({ source: "mm", assumed: true });
  expect(measured.bounds_mm!.size[0]).toBe(Math.fround(size));
});

test("progress rises to 1", () => {
  const shares: number[] = [];
  measureStl(binaryStl(torus(50, 20, 400, 400)), { ...options, onProgress: (share) => shares.push(share) });
  expect(shares.length).toBeGreaterThan(4);
  expect(shares).toEqual(shares.toSorted((p, q) => p - q));
  expect(shares.at(-1)).toBe(1);
});
