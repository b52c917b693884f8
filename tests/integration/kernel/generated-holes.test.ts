import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { RecognisedHole } from "#app/geometry/holes.ts";
import type { Vec3 } from "#app/geometry/measure-document.ts";
import { openSolidBuilder, type Solid, type SolidBuilder } from "#app/kernel/build-solid.server.ts";
import type { StepMeasures } from "#app/kernel/kernel-protocol.ts";
import { measureInKernel } from "#app/kernel/measure-in-kernel.server.ts";
import { openKernel, type Kernel } from "#app/kernel/open-kernel.server.ts";

let builder: SolidBuilder;
let kernel: Kernel;
let folder: string;
beforeAll(async () => {
  // In this process: the shapes are our own, and a process a part would take minutes.
  [builder, kernel] = [await openSolidBuilder(), await openKernel()];
  folder = mkdtempSync(join(tmpdir(), "spotblue-holes-"));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Through a STEP file, as a part comes to us. */
function measured(part: Solid): StepMeasures {
  const path = join(folder, "part.step");
  writeFileSync(path, builder.toStep(part, "generated part"));
  return measureInKernel(kernel, path, () => {});
}

/** Numbers from 0 to 1 that follow from a seed (mulberry32, public domain). */
function randomFrom(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
}

type Drilled = Pick<RecognisedHole, "kind" | "diameter_mm" | "depth_mm" | "at_mm" | "entry" | "entryDiameter_mm" | "entryAngle_deg" | "reach_mm">;

const THICK = 20;
const UP: Vec3 = [0, 0, 1];
const DOWN: Vec3 = [0, 0, -1];

/** Drills a hole of a random kind from the top of a plate of `THICK`; what comes back is by construction. */
function drill(plate: Solid, x: number, y: number, random: () => number): [Solid, Drilled] {
  const round = (value: number, step: number) => Math.round(value / step) * step;
  const d = round(3 + random() * 6, 0.1);
  const at: Vec3 = [x, y, THICK];
  const through = builder.cylinder([x, y, -1], UP, d / 2, THICK + 2);
  const hole = (part: Partial<Drilled>): Drilled => ({ kind: "through", diameter_mm: d, depth_mm: THICK, at_mm: at, entry: "plain", entryDiameter_mm: null, entryAngle_deg: null, reach_mm: THICK, ...part });
  const kind = Math.floor(random() * 6);
  if (kind === 0) return [builder.cut(plate, through), hole({})];
  if (kind === 1) {
    const depth = round(4 + random() * 10, 0.5);
    const bottom: Vec3 = [x, y, THICK - depth];
    // A drill's point of 118°.
    const tip = builder.cone(bottom, DOWN, d / 2, 0, d / 2 / Math.tan((59 * Math.PI) / 180));
    return [builder.cut(plate, builder.cylinder(bottom, UP, d / 2, depth + 1), tip), hole({ kind: "blind", depth_mm: depth, reach_mm: depth })];
  }
  if (kind === 2) {
    const depth = round(4 + random() * 10, 0.5);
    return [builder.cut(plate, builder.cylinder([x, y, THICK - depth], UP, d / 2, depth + 1)), hole({ kind: "blind", depth_mm: depth, reach_mm: depth })];
  }
  if (kind === 3) {
    const deep = round(2 + random() * 6, 0.5);
    const wide = round(d * 1.7, 0.1);
    const sunk = builder.cylinder([x, y, THICK - deep], UP, wide / 2, deep + 1);
    return [builder.cut(plate, through, sunk), hole({ depth_mm: THICK - deep, entry: "counterbored", entryDiameter_mm: wide })];
  }
  const seat = kind === 4;
  const angle = seat ? [82, 90, 100][Math.floor(random() * 3)]! : 90;
  const wide = seat ? d * 1.9 : d + 1;
  const deep = (wide - d) / 2 / Math.tan((angle / 2) * (Math.PI / 180));
  const cone = builder.cone([x, y, THICK - deep], UP, d / 2, wide / 2, deep);
  return [builder.cut(plate, through, cone), hole({ depth_mm: THICK - deep, entry: seat ? "countersunk" : "chamfered", entryDiameter_mm: wide, entryAngle_deg: angle })];
}

const seed = Number(process.env.TEST_SEED ?? Math.floor(Math.random() * 1e9));

describe(`random plates, TEST_SEED=${seed}: every hole is found as it was drilled, none is invented`, () => {
  test.each([...Array(30).keys()])("plate %i", (number) => {
    const random = randomFrom(seed + number);
    let plate = builder.box([0, 0, 0], [160, 100, THICK]);
    // What must not be taken for holes: rounded corners, a slot, a boss with its fillet.
    plate = builder.fillet(plate, 8, ([x, y, z]) => Math.abs(z - THICK / 2) < 1e-6 && (x < 1 || x > 159) && (y < 1 || y > 99));
    plate = builder.cut(plate, builder.box([125, 20, -1], [8, 30, 40]), builder.cylinder([129, 20, -1], UP, 4, 40), builder.cylinder([129, 50, -1], UP, 4, 40));
    plate = builder.fuse(plate, builder.cylinder([140, 80, THICK - 1], UP, 9, 9));
    plate = builder.fillet(plate, 2, ([x, y, z]) => Math.abs(z - THICK) < 1e-6 && Math.abs(Math.hypot(x - 140, y - 80) - 9) < 1e-6);

    const wanted: Drilled[] = [];
    // One place in a grid of 20 mm: no two tools can meet.
    for (let column = 0; column < 5; column++) {
      for (let row = 0; row < 4; row++) {
        if (random() < 0.6) continue;
        const [cut, hole] = drill(plate, 16 + column * 22 + random() * 2, 14 + row * 22 + random() * 2, random);
        plate = cut;
        wanted.push(hole);
      }
    }
    const found = measured(plate);
    expect(found.solid).toMatchObject({ solids: 1, valid: true });
    expect(found.holes).toHaveLength(wanted.length);
    for (const hole of wanted) {
      const match = found.holes.find(({ at_mm }) => Math.hypot(at_mm[0] - hole.at_mm[0], at_mm[1] - hole.at_mm[1]) < 1e-6)!;
      expect(match).toMatchObject({ kind: hole.kind, entry: hole.entry });
      expect(match.axis.map((part) => Math.round(part * 1e9) / 1e9 + 0)).toEqual([0, 0, -1]);
      for (const key of ["diameter_mm", "depth_mm", "entryDiameter_mm", "entryAngle_deg", "reach_mm"] as const) {
        if (hole[key] === null) expect(match[key], key).toBeNull();
        else expect(match[key], key).toBeCloseTo(hole[key], 5);
      }
      expect(match.at_mm[2]).toBeCloseTo(THICK, 6);
    }
  });
});

describe("shapes that are easily taken for something else", () => {
  const plate = () => builder.box([-50, -50, 0], [100, 100, 10]);
  const shown = ({ holes }: StepMeasures) => holes.map(({ kind, diameter_mm, depth_mm, entry }) => [kind, Number(diameter_mm.toFixed(6)), Number(depth_mm.toFixed(6)), entry]);

  test("a groove for a ring around a bore is no hole, the bore is", () => {
    const groove = builder.cut(builder.cylinder([0, 0, 7], UP, 30, 5), builder.cylinder([0, 0, 6], UP, 26, 7));
    expect(shown(measured(builder.cut(plate(), groove, builder.cylinder([0, 0, -1], UP, 10, 12))))).toEqual([["through", 20, 10, "plain"]]);
  });

  test("a bore with a groove in its wall stays one hole", () => {
    const part = builder.cut(plate(), builder.cylinder([0, 0, -1], UP, 10, 12), builder.cylinder([0, 0, 4], UP, 12, 2));
    expect(shown(measured(part))).toEqual([["through", 20, 10, "plain"]]);
  });

  test("a bore that another crosses stays one hole, and the other ends in it twice", () => {
    const block = builder.box([-20, -20, -20], [40, 40, 40]);
    const part = builder.cut(block, builder.cylinder([0, 0, -21], UP, 8, 42), builder.cylinder([-21, 0, 0], [1, 0, 0], 3, 42));
    const { holes } = measured(part);
    expect(holes.map(({ kind, diameter_mm }) => [kind, Number(diameter_mm.toFixed(6))])).toEqual([["through", 16], ["through", 6], ["through", 6]]);
    expect(holes[0]!.depth_mm).toBeCloseTo(40, 6);
  });

  test("the two ears of a clevis have a hole each", () => {
    const ears = builder.cut(builder.box([-10, -10, 0], [20, 20, 30]), builder.box([-11, -11, 10], [22, 22, 10]));
    expect(measured(builder.fuse(builder.cut(ears, builder.cylinder([0, 0, -1], UP, 3, 32)), builder.box([9, -10, 0], [5, 20, 30]))).holes).toHaveLength(2);
  });

  test("a closed cavity and a shaft are no holes", () => {
    expect(measured(builder.cut(plate(), builder.cylinder([0, 0, 3], UP, 5, 4))).holes).toEqual([]);
    expect(measured(builder.cylinder([0, 0, 0], UP, 10, 50)).holes).toEqual([]);
  });

  test("a tube has one", () => {
    expect(shown(measured(builder.cut(builder.cylinder([0, 0, 0], UP, 10, 50), builder.cylinder([0, 0, -1], UP, 7, 52))))).toEqual([["through", 14, 50, "plain"]]);
  });

  test("a slanted hole: its entry is where the axis leaves the part", () => {
    const tilted: Vec3 = [Math.SQRT1_2, 0, Math.SQRT1_2];
    const { holes } = measured(builder.cut(plate(), builder.cylinder([-20, 0, -20], tilted, 3, 60)));
    expect(holes).toHaveLength(1);
    expect(holes[0]).toMatchObject({ kind: "through", entry: "plain" });
    // The axis passes (0, 0, 0) and (10, 0, 10).
    const [x, , z] = holes[0]!.at_mm;
    expect(x).toBeCloseTo(z, 3);
    expect([0, 10].some((level) => Math.abs(z - level) < 1e-3)).toBe(true);
  });

  test("a pocket of any other outline is no hole, and its corners are the smallest inside radius", () => {
    const pocket = builder.fillet(builder.box([-20, -15, 5], [40, 30, 6]), 4, ([x, y]) => Math.abs(x) > 19.9 && Math.abs(y) > 14.9);
    const found = measured(builder.cut(plate(), pocket));
    expect(found.holes).toEqual([]);
    expect(found.smallestInsideRadius_mm).toBeCloseTo(4, 9);
  });

  test("a hole from a side, into the material", () => {
    const { holes } = measured(builder.cut(plate(), builder.cylinder([50, 12, 5], [-1, 0, 0], 2.5, 18)));
    expect(holes).toHaveLength(1);
    expect(holes[0]).toMatchObject({ kind: "blind" });
    expect(holes[0]!.axis[0]).toBeCloseTo(-1, 9);
    expect(holes[0]!.at_mm.map((value) => Number(value.toFixed(6)))).toEqual([50, 12, 5]);
  });
});

describe("circles of holes", () => {
  const disc = (...tools: Solid[]) => builder.cut(builder.cylinder([0, 0, 0], UP, 60, 8), ...tools);
  const ring = (count: number, radius: number, from = 0, hole = 3.3) =>
    [...Array(count).keys()].map((at) => {
      const angle = from + (at * 2 * Math.PI) / count;
      return builder.cylinder([radius * Math.cos(angle), radius * Math.sin(angle), -1], UP, hole, 10);
    });
  const shown = ({ patterns }: StepMeasures) => patterns.map(({ count, diameter_mm, equallySpaced }) => [count, Number(diameter_mm.toFixed(5)), equallySpaced]);

  test("three, six and eight", () => {
    expect(shown(measured(disc(...ring(3, 40, 0.3))))).toEqual([[3, 80, true]]);
    expect(shown(measured(disc(...ring(6, 45, 0.1))))).toEqual([[6, 90, true]]);
    expect(shown(measured(disc(...ring(8, 35))))).toEqual([[8, 70, true]]);
  });

  test("two circles of equal holes, one inside the other", () => {
    expect(shown(measured(disc(...ring(6, 48), ...ring(4, 25, 0.2)))).sort()).toEqual([[4, 50, true], [6, 96, true]]);
  });

  test("one of six left out: still the circle, no longer equally spaced", () => {
    expect(shown(measured(disc(...ring(6, 45).slice(1))))).toEqual([[5, 90, false]]);
  });

  test("other diameters don't join", () => {
    expect(shown(measured(disc(...ring(4, 45), ...ring(4, 45, Math.PI / 4, 2.5)))).sort()).toEqual([[4, 90, true], [4, 90, true]]);
  });

  test("the corners of a rectangle, and rows, are none", () => {
    const at = (x: number, y: number) => builder.cylinder([x, y, -1], UP, 2, 10);
    const plate = builder.box([-60, -40, 0], [120, 80, 8]);
    expect(measured(builder.cut(plate, at(-50, -30), at(50, -30), at(-50, 30), at(50, 30))).patterns).toEqual([]);
    expect(measured(builder.cut(plate, at(-40, 0), at(-20, 0), at(0, 0), at(20, 0))).patterns).toEqual([]);
  });
});

describe("what the builder writes", () => {
  test("the same bytes for the same part", () => {
    const make = () => builder.cut(builder.box([0, 0, 0], [30, 20, 10]), builder.cylinder([10, 10, -1], UP, 3, 12));
    expect(Buffer.from(builder.toStep(make(), "Plate Ø 6"))).toEqual(Buffer.from(builder.toStep(make(), "Plate Ø 6")));
    expect(Buffer.from(builder.toStl(make(), 0.05))).toEqual(Buffer.from(builder.toStl(make(), 0.05)));
    const path = join(folder, "named.step");
    writeFileSync(path, builder.toStep(make(), "Plate Ø 6, Jo's"));
    expect(measureInKernel(kernel, path, () => {})).toMatchObject({ products: ["Plate Ø 6, Jo's"], unit: { source: "mm", assumed: false } });
  });
});
