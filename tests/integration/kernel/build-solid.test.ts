import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Vec3 } from "#app/geometry/measure-document.ts";
import { measureStl } from "#app/geometry/measure-stl.ts";
import { openSolidBuilder, type Solid, type SolidBuilder } from "#app/kernel/build-solid.server.ts";
import { measureInKernel } from "#app/kernel/measure-in-kernel.server.ts";
import { openKernel, type Kernel } from "#app/kernel/open-kernel.server.ts";

const UP: Vec3 = [0, 0, 1];

let builder: SolidBuilder;
let kernel: Kernel;
let folder: string;
beforeAll(async () => {
  [builder, kernel] = [await openSolidBuilder(), await openKernel()];
  folder = mkdtempSync(join(tmpdir(), "spotblue-built-"));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function measured(solid: Solid) {
  const path = join(folder, "built.step");
  writeFileSync(path, builder.toStep(solid, "built"));
  return measureInKernel(kernel, path, () => {});
}

const volumeOf = (solid: Solid) => measured(solid).volume_mm3!;
/** The file keeps sixteen digits; what is lost is lost in the integration. */
const expectNear = (value: number, wanted: number) => expect(Math.abs(value / wanted - 1)).toBeLessThan(1e-8);

describe("volumes by their closed forms", () => {
  test("box, cylinder, cone, frustum", () => {
    expectNear(volumeOf(builder.box([1, 2, 3], [10, 20, 30])), 6000);
    expectNear(volumeOf(builder.cylinder([5, 0, 0], [1, 1, 0], 4, 9)), Math.PI * 16 * 9);
    expectNear(volumeOf(builder.cone([0, 0, 0], UP, 6, 0, 10)), (Math.PI * 36 * 10) / 3);
    expectNear(volumeOf(builder.cone([0, 0, 0], [0, -1, 0], 3, 6, 10)), (Math.PI * 10 * (9 + 18 + 36)) / 3);
  });

  test("a turned outline (Pappus: area × path of its centre), a raised one", () => {
    expectNear(volumeOf(builder.revolve([0, 0, 0], UP, [[10, 0], [14, 0], [14, 5], [10, 5]])), 4 * 5 * 2 * Math.PI * 12);
    expectNear(volumeOf(builder.extrude([[0, 0], [8, 0], [0, 6]], 2, 5)), 24 * 5);
  });

  test("cut and fuse: what both have in common counts once", () => {
    const [plate, peg] = [builder.box([0, 0, 0], [40, 40, 10]), builder.cylinder([20, 20, 5], UP, 5, 15)];
    const common = Math.PI * 25 * 5;
    expectNear(volumeOf(builder.cut(plate, peg)), 16_000 - common);
    expectNear(volumeOf(builder.fuse(plate, peg)), 16_000 + Math.PI * 25 * 15 - common);
  });

  test("a broken edge loses a triangle along its length, a rounded one a square less a quarter circle", () => {
    const box = () => builder.box([0, 0, 0], [30, 20, 10]);
    const edge = ([x, , z]: Vec3) => Math.abs(x - 30) < 1e-6 && Math.abs(z - 10) < 1e-6;
    expectNear(volumeOf(builder.chamfer(box(), 2, edge)), 6000 - (2 * 2 * 20) / 2);
    expectNear(volumeOf(builder.fillet(box(), 2, edge)), 6000 - (4 - Math.PI) * 20);
    expect(() => builder.chamfer(box(), 2, () => false)).toThrow(RangeError);
  });
});

test("a moved solid is the same solid elsewhere, and leaves the first where it was", () => {
  const first = builder.cut(builder.box([0, 0, 0], [20, 20, 8]), builder.cylinder([10, 10, -1], UP, 3, 10));
  const moved = measured(builder.translate(first, [100, -50, 0.25]));
  const stayed = measured(first);
  expect(moved.bounds_mm!.min.map((value) => Number(value.toFixed(6)))).toEqual([100, -50, 0.25]);
  expect(stayed.bounds_mm!.min.map((value) => Math.abs(Number(value.toFixed(6))))).toEqual([0, 0, 0]);
  expectNear(moved.volume_mm3!, stayed.volume_mm3!);
  expect(moved.holes[0]!.at_mm.map((value) => Number(value.toFixed(6)))).toEqual([110, -40, 8.25]);
});

test("the STL of a solid is closed, faces outward and keeps to its chord", () => {
  const solid = builder.cut(builder.box([0, 0, 0], [40, 30, 12]), builder.cylinder([20, 15, -1], UP, 8, 14));
  const { mesh, volume_mm3, area_mm2, bounds_mm } = measureStl(builder.toStl(solid, 0.01), { name: "built.stl", sha256: "" });
  expect(mesh).toMatchObject({ closed: true, oriented: true, shells: 1, degenerateTriangles: 0 });
  const volume = 40 * 30 * 12 - Math.PI * 64 * 12;
  // Chords of a hole leave material standing: never less than the true volume, and by the chord over its wall at most.
  expect(volume_mm3!).toBeGreaterThan(volume);
  expect(volume_mm3! - volume).toBeLessThan(2 * Math.PI * 8 * 12 * 0.01);
  const area = 2 * (40 * 30 + 40 * 12 + 30 * 12) - 2 * Math.PI * 64 + 2 * Math.PI * 8 * 12;
  expect(Math.abs(area_mm2! / area - 1)).toBeLessThan(1e-3);
  expect(bounds_mm!.size.map((value) => Number(value.toFixed(5)))).toEqual([40, 30, 12]);
});
