import { NodeIO, type Primitive } from "@gltf-transform/core";
import { EXTMeshoptCompression, KHRMeshQuantization } from "@gltf-transform/extensions";
import { MeshoptDecoder } from "meshoptimizer";
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { beforeAll, describe, expect, test } from "vitest";
import { tessellateStep } from "#app/kernel/tessellate-step.server.ts";
import { viewMeshFromStep, viewMeshFromStl, type ViewMesh } from "#app/kernel/view-mesh.server.ts";
import { measureStl } from "#app/geometry/measure-stl.ts";
import { expected, models } from "./model-files.ts";

const stl = (name: string) => readFileSync(join(models, "stl", name));

interface Read {
  triangles: Primitive[];
  lines: Primitive[];
  extras: Record<string, unknown>;
}

let io: NodeIO;
beforeAll(async () => {
  await MeshoptDecoder.ready;
  io = new NodeIO().registerExtensions([EXTMeshoptCompression, KHRMeshQuantization]).registerDependencies({ "meshopt.decoder": MeshoptDecoder });
});

async function read({ glb }: ViewMesh): Promise<Read> {
  const root = (await io.readBinary(glb)).getRoot();
  const all = root.listMeshes().flatMap((mesh) => mesh.listPrimitives());
  return { triangles: all.filter((one) => one.getMode() === 4), lines: all.filter((one) => one.getMode() === 1), extras: root.listScenes()[0]!.getExtras() };
}

/** Signed volume of what is drawn, by the divergence theorem, and its bounds. */
function measured(primitives: Primitive[]) {
  let volume = 0;
  const min = [Infinity, Infinity, Infinity];
  const max = [-Infinity, -Infinity, -Infinity];
  for (const primitive of primitives) {
    const place = primitive.getAttribute("POSITION")!.getArray()!;
    const indices = primitive.getIndices()!.getArray()!;
    for (let i = 0; i < indices.length; i += 3) {
      const [a, b, c] = [0, 1, 2].map((n) => Array.from(place.subarray(indices[i + n]! * 3, indices[i + n]! * 3 + 3))) as [number[], number[], number[]];
      volume += (a[0]! * (b[1]! * c[2]! - b[2]! * c[1]!) + a[1]! * (b[2]! * c[0]! - b[0]! * c[2]!) + a[2]! * (b[0]! * c[1]! - b[1]! * c[0]!)) / 6;
      for (const point of [a, b, c]) point.forEach((value, axis) => ((min[axis] = Math.min(min[axis]!, value)), (max[axis] = Math.max(max[axis]!, value))));
    }
  }
  return { volume, min, max };
}

describe("from STEP", () => {
  test("a mesh with every face known by what it is", async () => {
    const mesh = await tessellateStep(join(models, "step/cube_hole.step"), { chord_mm: 0.01 });
    expect(mesh.faces.map(({ label }) => label).sort()).toEqual(["bore Ø 12.70", ...Array<string>(6).fill("plane")]);
    expect(mesh.faces.reduce((sum, { indexCount }) => sum + indexCount, 0)).toBe(mesh.indices.length);
    expect(Math.max(...mesh.indices)).toBe(mesh.positions.length / 3 - 1);
    // Every corner of the bore lies on its cylinder, axis (25.4, 12.7).
    const bore = mesh.faces.find(({ kind }) => kind === "cylinder")!;
    for (const vertex of mesh.indices.subarray(bore.firstIndex, bore.firstIndex + bore.indexCount)) {
      expect(Math.hypot(mesh.positions[vertex * 3]! - 25.4, mesh.positions[vertex * 3 + 1]! - 12.7)).toBeCloseTo(6.35, 4);
    }
    expect(mesh.edges.length % 6).toBe(0);
    // Twelve edges of the block and the two rims of the bore; its seam is no edge of the part.
    const along = (i: number) => [0, 1, 2].filter((axis) => Math.abs(mesh.edges[i + axis]! - mesh.edges[i + 3 + axis]!) > 1e-4);
    const straight = Array.from({ length: mesh.edges.length / 6 }, (_, n) => n * 6).filter((i) => along(i).length === 1);
    const onBore = straight.filter((i) => Math.hypot(mesh.edges[i]! - 25.4, mesh.edges[i + 1]! - 12.7) < 6.5 && along(i)[0] === 2);
    expect(straight.length).toBeGreaterThanOrEqual(12);
    expect(onBore).toEqual([]);
  });

  test.each(["step/cube_hole.step", "step/nist_ctc_01_asme1_ap242-e1.stp", "step/as1-tu-203.stp"])("%s: volume and bounds of what is drawn", async (file) => {
    const view = await viewMeshFromStep(join(models, file), { chord_mm: 0.02 });
    const drawn = await read(view);
    const wanted = expected[file]!;
    const found = measured(drawn.triangles);
    // The mesh may leave the surface by the error stated, everywhere at most.
    expect(Math.abs(found.volume - wanted.volume_mm3!)).toBeLessThan(wanted.area_mm2! * view.error_mm);
    for (const axis of [0, 1, 2]) {
      expect(Math.abs(found.min[axis]! - wanted.bounds_mm!.min[axis]!)).toBeLessThan(view.error_mm);
      expect(Math.abs(found.max[axis]! - wanted.bounds_mm!.max[axis]!)).toBeLessThan(view.error_mm);
    }
    expect(drawn.extras).toEqual({ unit: "mm", error_mm: view.error_mm });
    expect(drawn.lines).toHaveLength(1);
    expect(drawn.triangles.reduce((sum, one) => sum + one.getIndices()!.getCount() / 3, 0)).toBe(view.triangles);
  });

  test("groups say their label, and which of their triangles are one face", async () => {
    const { triangles } = await read(await viewMeshFromStep(join(models, "step/nist_ctc_01_asme1_ap242-e1.stp"), { chord_mm: 0.05 }));
    const groups = triangles.map((one) => one.getExtras() as { label: string; kind: string; faces: [number, number][] });
    expect(groups.find(({ label }) => label === "bore Ø 35.00")).toMatchObject({ kind: "cylinder", faces: expect.objectContaining({ length: 8 }) as unknown });
    expect(groups.reduce((sum, { faces }) => sum + faces.length, 0)).toBe(expected["step/nist_ctc_01_asme1_ap242-e1.stp"]!.solid!.faces);
    for (const [index, { faces }] of groups.entries()) {
      let next = 0;
      for (const [first, count] of faces) {
        expect(first).toBe(next);
        next += count;
      }
      expect(next).toBe(triangles[index]!.getIndices()!.getCount());
    }
  });

  test("triangles alone can be drawn, though not measured", async () => {
    const { triangles } = await viewMeshFromStep(join(models, "step/nist_ftc_08_asme1_ap242-e1-tg.stp"), { chord_mm: 0.1 });
    expect(triangles).toBeGreaterThan(1000);
  });
});

describe("from STL", () => {
  test("a cube: twelve triangles, twelve edges, four normals a side", async () => {
    const { triangles, lines } = await read(await viewMeshFromStl(stl("unit_cube.STL"), { chord_mm: 0.001 }));
    expect(triangles[0]!.getIndices()!.getCount()).toBe(36);
    expect(triangles[0]!.getAttribute("POSITION")!.getCount()).toBe(24);
    expect(lines[0]!.getIndices()!.getCount()).toBe(24);
    expect(measured(triangles).volume).toBeCloseTo(1, 2);
  });

  test.each(["plate_holes.STL", "octagonal_pocket.stl", "torus.STL"])("%s is simplified within the error it states", async (name) => {
    const bytes = stl(name);
    const whole = measureStl(bytes, { name, sha256: "" });
    const view = await viewMeshFromStl(bytes, { chord_mm: 0.05 });
    expect(view.error_mm).toBeLessThan(0.06);
    expect(view.triangles).toBeLessThanOrEqual(whole.mesh!.triangles);
    expect(Math.abs(measured((await read(view)).triangles).volume - whole.volume_mm3!)).toBeLessThan(whole.area_mm2! * view.error_mm);
  });

  test("inches become millimetres", async () => {
    const { min, max } = measured((await read(await viewMeshFromStl(stl("featuretype.STL"), { chord_mm: 0.02, unit: "in" }))).triangles);
    // featuretype.STEP is the same part; its bounds as OpenCASCADE measured them.
    expect(max[0]! - min[0]!).toBeCloseTo(127, 1);
  });

  test("a mesh of millions is brought down to what a phone turns", async () => {
    const bytes = sphereStl(1500, 350);
    const view = await viewMeshFromStl(bytes, { chord_mm: 1e-7 });
    expect(view.triangles).toBeLessThanOrEqual(400_000);
    expect(view.triangles).toBeGreaterThan(300_000);
    expect(view.error_mm).toBeGreaterThan(0);
    expect(view.error_mm).toBeLessThan(0.05);
    // Closed forms with r = 50: volume 4/3 π r³, area 4 π r².
    expect(Math.abs(measured((await read(view)).triangles).volume - (4 / 3) * Math.PI * 50 ** 3)).toBeLessThan(4 * Math.PI * 50 ** 2 * view.error_mm);
  });

  test("an open or damaged mesh can be drawn, an empty one is refused", async () => {
    expect((await viewMeshFromStl(stl("busted.STL"), { chord_mm: 0.02 })).triangles).toBeGreaterThan(100);
    await expect(viewMeshFromStl(readFileSync(join(models, "bad/bin-all-one-point.stl")), { chord_mm: 0.02 })).rejects.toThrow(/no triangle with an area/);
    await expect(viewMeshFromStl(readFileSync(join(models, "bad/bin-cut-in-triangle.stl")), { chord_mm: 0.02 })).rejects.toThrow(/./);
  });
});

/** A sphere of radius 50 as binary STL: 2 × around × rings triangles, those at the poles without area. */
function sphereStl(around: number, rings: number): Buffer {
  const bytes = Buffer.alloc(84 + around * rings * 2 * 50);
  bytes.writeUInt32LE(around * rings * 2, 80);
  const point = (i: number, j: number) => {
    const [turn, tilt] = [(2 * Math.PI * (i % around)) / around, (Math.PI * j) / rings];
    const out = j === 0 || j === rings ? 0 : 50 * Math.sin(tilt);
    return [out * Math.cos(turn), out * Math.sin(turn), 50 * Math.cos(tilt)];
  };
  let at = 84;
  const write = (corners: number[][]) => {
    corners.flat().forEach((value, word) => bytes.writeFloatLE(value, at + 12 + word * 4));
    at += 50;
  };
  for (let i = 0; i < around; i++) {
    for (let j = 0; j < rings; j++) {
      write([point(i, j), point(i, j + 1), point(i + 1, j + 1)]);
      write([point(i, j), point(i + 1, j + 1), point(i + 1, j)]);
    }
  }
  return bytes;
}
