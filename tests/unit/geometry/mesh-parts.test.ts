import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { countEdges } from "#app/geometry/edge-counts.ts";
import { parseDecimal } from "#app/geometry/parse-decimal.ts";
import { weldVertices } from "#app/geometry/weld-vertices.ts";
import { hasZeroArea } from "#app/geometry/zero-area.ts";
import { box, torus } from "./solids.ts";

describe("numbers", () => {
  const parse = (word: string) => parseDecimal(new TextEncoder().encode(`x${word} `), 1, 1 + new TextEncoder().encode(word).length);

  test("are read as the language reads them", () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), fc.nat(20), (value, digits) => {
        for (const word of [String(value), value.toExponential(digits), value.toPrecision(digits + 1), `+${Math.abs(value)}`]) expect(parse(word)).toBe(Number(word));
      }),
      { numRuns: 2000 },
    );
    for (const word of ["1.", ".5", "-.5e1", "00012", "9007199254740993", "123456789012345678901234567890", "1e-400", "1e400", "-0", "4.35", "8.41e21", "1e23"]) {
      expect(parse(word), word).toBe(Number(word));
    }
  });

  test.each(["", "-", ".", "e5", "1e", "1e+", "1,5", "nan", "inf", "0x1", "1_000", "1.2.3", "--1", "1d5", "١"])("%j is none", (word) => expect(parse(word)).toBeNaN());
});

describe("welding", () => {
  /** The same, the slow and obvious way. */
  function weldByText(coordinates: ArrayLike<number>) {
    const numbers = new Map<string, number>();
    const indices: number[] = [];
    for (let at = 0; at < coordinates.length; at += 3) {
      const key = `${coordinates[at]! + 0},${coordinates[at + 1]! + 0},${coordinates[at + 2]! + 0}`;
      if (!numbers.has(key)) numbers.set(key, numbers.size);
      indices.push(numbers.get(key)!);
    }
    return { indices, count: numbers.size };
  }
  const few = fc.constantFrom(0, -0, 1, -1, 0.1, 1e-45, 3e38, 100.1, 100.10001);

  test.each([
    ["single", (values: number[]) => Float32Array.from(values)],
    ["double", (values: number[]) => Float64Array.from(values)],
  ])("%s precision: equal bits are one vertex, -0 is 0, nothing else is", (_, make) => {
    fc.assert(
      fc.property(fc.array(fc.tuple(few, few, few), { maxLength: 600 }), (points) => {
        const coordinates = make(points.flat());
        const { indices, vertices, vertexCount } = weldVertices<Float32Array | Float64Array>(coordinates);
        const want = weldByText(coordinates);
        expect([...indices]).toEqual(want.indices);
        expect(vertexCount).toBe(want.count);
        indices.forEach((vertex, corner) => {
          for (let axis = 0; axis < 3; axis++) expect(vertices[vertex * 3 + axis]! + 0).toBe(coordinates[corner * 3 + axis]! + 0);
        });
      }),
      { numRuns: 200 },
    );
  });

  test("neighbours of one unit in the last place stay apart", () => {
    expect(weldVertices(Float32Array.of(1, 0, 0, 1 + 2 ** -23, 0, 0)).vertexCount).toBe(2);
    expect(weldVertices(Float64Array.of(1, 0, 0, 1 + 2 ** -52, 0, 0)).vertexCount).toBe(2);
  });

  test("a soup, far more vertices than a closed mesh has, makes the table grow", () => {
    const coordinates = Float32Array.from({ length: 90_000 }, (_, i) => i);
    expect(weldVertices(coordinates).vertexCount).toBe(30_000);
    expect(weldVertices(Float64Array.from(coordinates)).vertexCount).toBe(30_000);
  });
});

describe("edges", () => {
  /** The same, the slow and obvious way. */
  function countByMap(indices: number[]) {
    const edges = new Map<string, { triangles: number[]; forward: number }>();
    const sound = new Set<number>();
    for (let t = 0; t < indices.length / 3; t++) {
      const [a, b, c] = indices.slice(3 * t, 3 * t + 3) as [number, number, number];
      if (a === b || b === c || c === a) continue;
      sound.add(t);
      for (const [from, to] of [[a, b], [b, c], [c, a]] as const) {
        const key = `${Math.min(from, to)}-${Math.max(from, to)}`;
        const edge = edges.get(key) ?? { triangles: [], forward: 0 };
        edge.triangles.push(t);
        if (from < to) edge.forward++;
        edges.set(key, edge);
      }
    }
    const all = [...edges.values()];
    const label = new Map([...sound].map((t) => [t, t]));
    for (let changed = true; changed; ) {
      changed = false;
      for (const { triangles } of all) {
        const least = Math.min(...triangles.map((t) => label.get(t)!));
        for (const t of triangles) {
          if (label.get(t) === least) continue;
          label.set(t, least);
          changed = true;
        }
      }
    }
    return {
      edges: all.length,
      openEdges: all.filter((e) => e.triangles.length === 1).length,
      nonManifoldEdges: all.filter((e) => e.triangles.length > 2).length,
      misorientedEdges: all.filter((e) => e.triangles.length === 2 && e.forward !== 1).length,
      shells: new Set(label.values()).size,
      repeatedVertexTriangles: indices.length / 3 - sound.size,
    };
  }

  test("any heap of triangles is counted as the obvious way counts it", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 14 }), fc.array(fc.tuple(fc.nat(), fc.nat(), fc.nat()), { maxLength: 40 }), (vertices, heap) => {
        const indices = heap.flat().map((n) => n % vertices);
        expect(countEdges(Uint32Array.from(indices), vertices)).toEqual(countByMap(indices));
      }),
      { numRuns: 1000 },
    );
  });

  test("parts that touch in a vertex are two shells, in an edge one", () => {
    const tetrahedron = (a: number, b: number, c: number, d: number) => [a, c, b, a, b, d, b, c, d, c, a, d];
    expect(countEdges(Uint32Array.from([...tetrahedron(0, 1, 2, 3), ...tetrahedron(0, 4, 5, 6)]), 7)).toMatchObject({ shells: 2, openEdges: 0, nonManifoldEdges: 0 });
    expect(countEdges(Uint32Array.from([...tetrahedron(0, 1, 2, 3), ...tetrahedron(0, 1, 5, 6)]), 7)).toMatchObject({ shells: 1, openEdges: 0, nonManifoldEdges: 1 });
  });

  test("a Möbius strip can't be oriented", () => {
    const n = 9; // quads around, the last joined upside down
    const corner = (i: number, up: number) => (i < n ? 2 * i + up : 1 - up);
    const indices = Array.from({ length: n }, (_, i) => [corner(i, 0), corner(i + 1, 0), corner(i + 1, 1), corner(i, 0), corner(i + 1, 1), corner(i, 1)]).flat();
    const counts = countEdges(Uint32Array.from(indices), 2 * n);
    expect(counts).toMatchObject({ openEdges: 2 * n, shells: 1, nonManifoldEdges: 0 });
    expect(counts.misorientedEdges).toBe(1);
  });

  test("a hub with a hundred thousand edges, seen first or last, takes no longer than as many elsewhere", () => {
    const rim = 100_000;
    // Twice each rim edge, so that the rim's vertices can be made to come before the hub.
    const fan = (hub: number, first: number) => Uint32Array.from({ length: 3 * rim }, (_, i) => {
      const t = Math.floor(i / 3);
      return i % 3 === 0 ? hub : first + ((t + (i % 3) - 1) % rim);
    });
    const start = performance.now();
    for (const counts of [countEdges(fan(0, 1), rim + 1), countEdges(fan(rim, 0), rim + 1)]) {
      expect(counts).toMatchObject({ edges: 2 * rim, openEdges: rim, shells: 1, misorientedEdges: 0 });
    }
    // The quadratic way takes 5 000 million steps, well over this.
    expect(performance.now() - start).toBeLessThan(2500);
  });

  test("a torus: as many vertices and triangles as edges (Euler)", () => {
    const { indices, vertexCount } = weldVertices(torus(5, 2, 40, 30));
    const { edges } = countEdges(indices, vertexCount);
    expect(vertexCount - edges + indices.length / 3).toBe(0);
  });
});

describe("zero area", () => {
  const isZeroArea = (coordinates: Float64Array, at = 0) => hasZeroArea(coordinates, at, at + 3, at + 6);
  /** In whole numbers, which JavaScript keeps exact. */
  const isZero = (p: bigint[]) => {
    const u = [0, 1, 2].map((k) => p[3 + k]! - p[k]!), v = [0, 1, 2].map((k) => p[6 + k]! - p[k]!);
    return [0, 1, 2].every((k) => u[(k + 1) % 3]! * v[(k + 2) % 3]! === u[(k + 2) % 3]! * v[(k + 1) % 3]!);
  };

  test("is decided exactly for whole numbers of any size that a double holds, at any scale", () => {
    const whole = fc.integer({ min: -(2 ** 30), max: 2 ** 30 });
    fc.assert(
      fc.property(fc.tuple(whole, whole, whole), fc.tuple(whole, whole, whole), fc.integer({ min: -40, max: 40 }), fc.integer({ min: -1, max: 1 }), fc.integer({ min: -120, max: 60 }), (p, u, k, off, power) => {
        const points = [...p, ...p.map((value, i) => value + u[i]!), ...p.map((value, i) => value + k * u[i]! + (i === 0 ? off : 0))];
        expect(isZeroArea(Float64Array.from(points, (value) => value * 2 ** power))).toBe(isZero(points.map(BigInt)));
      }),
      { numRuns: 2000 },
    );
  });

  test("also where differences are rounded", () => {
    // Three points of the x axis whose differences need more than 53 bits; then one of them 2^-100 beside it.
    expect(isZeroArea(Float64Array.of(2 ** -90, 0, 0, 2 ** -60, 0, 0, 1, 0, 0))).toBe(true);
    expect(isZeroArea(Float64Array.of(2 ** -90, 0, 0, 2 ** -60, 0, 0, 1, 2 ** -100, 0))).toBe(false);
    // 1 - 2^-60 rounds to 1, and then the three would seem to lie on the diagonal.
    expect(isZeroArea(Float64Array.of(2 ** -60, 0, 0, 1, 1, 0, 2, 2, 0))).toBe(false);
    expect(isZeroArea(Float64Array.of(1e-320, 0, 0, 2e-320, 0, 0, 3e-320, 0, 0))).toBe(true);
    // On a line across the border of the subnormal numbers.
    expect(isZeroArea(Float64Array.of(2 ** -1023, 2 ** -1000, 0, 2 ** -1022, 2 ** -999, 0, 3 * 2 ** -1023, 3 * 2 ** -1000, 0))).toBe(true);
    expect(isZeroArea(Float64Array.of(1e-320, 0, 0, 2e-320, 1e-320, 0, 3e-320, 0, 0))).toBe(false);
  });

  test("a box has none", () => {
    const coordinates = box(3, 2, 1);
    for (let at = 0; at < coordinates.length; at += 9) expect(isZeroArea(coordinates, at)).toBe(false);
  });
});
