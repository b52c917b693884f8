import { describe, expect, test } from "vitest";
import { runCalculation } from "#app/engineering/registry.ts";
import { findThread, tensileStressArea } from "#app/engineering/thread-table.ts";
import { MPA_PER_PSI, N_PER_POUND_FORCE } from "#app/units.ts";

const MM2_PER_IN2 = 25.4 ** 2;

// Nominal stress areas as printed in ISO 898-1 (three figures; read in a stored copy).
const iso898 = [
  { thread: "M3", area: 5.03 },
  { thread: "M3.5", area: 6.78 },
  { thread: "M4", area: 8.78 },
  { thread: "M5", area: 14.2 },
  { thread: "M6", area: 20.1 },
  { thread: "M8", area: 36.6 },
  { thread: "M10", area: 58.0 },
  { thread: "M12", area: 84.3 },
  { thread: "M14", area: 115 },
  { thread: "M16", area: 157 },
  { thread: "M18", area: 192 },
  { thread: "M20", area: 245 },
  { thread: "M22", area: 303 },
  { thread: "M24", area: 353 },
];

// Tensile stress areas as printed in ASTM A574 and in tables of UNC and UNF threads (stored copies).
const astmA574 = [
  { thread: "4-40 UNC", area: 0.00604 },
  { thread: "4-48 UNF", area: 0.00661 },
  { thread: "5-40 UNC", area: 0.00796 },
  { thread: "5-44 UNF", area: 0.0083 },
  { thread: "6-32 UNC", area: 0.00909 },
  { thread: "6-40 UNF", area: 0.01015 },
  { thread: "8-32 UNC", area: 0.014 },
  { thread: "8-36 UNF", area: 0.01474 },
  { thread: "10-24 UNC", area: 0.0175 },
  { thread: "10-32 UNF", area: 0.02 },
  { thread: "12-24 UNC", area: 0.0242 },
  { thread: "12-28 UNF", area: 0.0258 },
  { thread: "1/4-20 UNC", area: 0.0318 },
  { thread: "1/4-28 UNF", area: 0.0364 },
  { thread: "5/16-18 UNC", area: 0.0524 },
  { thread: "5/16-24 UNF", area: 0.058 },
  { thread: "3/8-16 UNC", area: 0.0775 },
  { thread: "3/8-24 UNF", area: 0.0878 },
  { thread: "7/16-14 UNC", area: 0.1063 },
  { thread: "7/16-20 UNF", area: 0.1187 },
  { thread: "1/2-13 UNC", area: 0.1419 },
  { thread: "1/2-20 UNF", area: 0.1599 },
  { thread: "9/16-12 UNC", area: 0.182 },
  { thread: "9/16-18 UNF", area: 0.203 },
  { thread: "5/8-11 UNC", area: 0.226 },
  { thread: "5/8-18 UNF", area: 0.256 },
  { thread: "3/4-10 UNC", area: 0.334 },
  { thread: "3/4-16 UNF", area: 0.373 },
  { thread: "7/8-9 UNC", area: 0.462 },
  { thread: "7/8-14 UNF", area: 0.509 },
  { thread: "1-8 UNC", area: 0.606 },
  { thread: "1-12 UNF", area: 0.663 },
];

describe("tensile stress areas", () => {
  test.each(iso898)("$thread, ISO 898-1: $area mm²", ({ thread, area }) => {
    expect(Number(tensileStressArea(findThread(thread)!).toPrecision(3))).toBeCloseTo(area, area < 10 ? 2 : area < 100 ? 1 : 0);
  });
  test.each(astmA574)("$thread, ASTM A574: $area in²", ({ thread, area }) => {
    // Printed tables round the area, and some of them the diameter before it: one unit of the last place.
    expect(Math.abs(tensileStressArea(findThread(thread)!) / MM2_PER_IN2 - area)).toBeLessThan(area < 0.1 ? 0.00011 : 0.0011);
  });
});

function run(inputs: Record<string, unknown>) {
  const outcome = runCalculation("thread-engagement", { boltTensile_MPa: 800, internalShear_MPa: 186, ...inputs });
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.errors));
  return outcome.result.results as Record<string, number>;
}

// Stripping areas of the internal thread, in² for an inch of engagement, as printed in a table of
// tensile stress, thread root and thread stripping areas (a distributor's fastener technical
// reference, page 3358; stored copy, scribd 219093147).
const stripping = [
  { thread: "4-40 UNC", area: 0.221 }, { thread: "4-48 UNF", area: 0.216 },
  { thread: "5-40 UNC", area: 0.248 }, { thread: "5-44 UNF", area: 0.246 },
  { thread: "6-32 UNC", area: 0.281 }, { thread: "6-40 UNF", area: 0.274 },
  { thread: "8-32 UNC", area: 0.334 }, { thread: "8-36 UNF", area: 0.331 },
  { thread: "10-24 UNC", area: 0.401 }, { thread: "10-32 UNF", area: 0.389 },
  { thread: "12-24 UNC", area: 0.458 }, { thread: "12-28 UNF", area: 0.45 },
  { thread: "1/4-20 UNC", area: 0.539 }, { thread: "1/4-28 UNF", area: 0.521 },
  { thread: "5/16-18 UNC", area: 0.682 }, { thread: "5/16-24 UNF", area: 0.663 },
  { thread: "3/8-16 UNC", area: 0.828 }, { thread: "3/8-24 UNF", area: 0.8 },
  { thread: "7/16-14 UNC", area: 0.981 },
  { thread: "1/2-13 UNC", area: 1.12 }, { thread: "1/2-20 UNF", area: 1.08 },
  { thread: "9/16-12 UNC", area: 1.27 }, { thread: "9/16-18 UNF", area: 1.23 },
  { thread: "5/8-11 UNC", area: 1.42 }, { thread: "5/8-18 UNF", area: 1.37 },
  { thread: "3/4-10 UNC", area: 1.72 }, { thread: "3/4-16 UNF", area: 1.66 },
  { thread: "7/8-9 UNC", area: 2.03 }, { thread: "7/8-14 UNF", area: 1.96 },
  { thread: "1-8 UNC", area: 2.33 }, { thread: "1-12 UNF", area: 2.27 },
];

describe("shear areas of FED-STD-H28/2B", () => {
  // Limits of size of older editions differ by a ten-thousandth in a few rows (12-28, 3/8-24,
  // 7/16-14): 0.4 % covers them and the rounding. 7/16-20 is left out: the table prints 0.908 there,
  // below the 0.949 that its neighbours' rule gives, and we could not see a second table.
  test.each(stripping)("$thread strips $area in² an inch of engagement", ({ thread, area }) => {
    const { internalShearArea_mm2 } = run({ thread, engagement_mm: 25.4 });
    expect(Math.abs(internalShearArea_mm2! / MM2_PER_IN2 / area - 1)).toBeLessThan(0.005);
  });

  // Worked by hand from the formulas of FED-STD-H28/2B and the 2A/2B limits of ASME B1.1 for
  // 1/4-20 UNC over 0.25 in: 0.0920 in² of the screw, 0.1347 in² of the tapped hole.
  test("1/4-20 UNC over a quarter inch", () => {
    const { externalShearArea_mm2, internalShearArea_mm2, tensileArea_mm2 } = run({ thread: "1/4-20 UNC", engagement_mm: 6.35 });
    expect(externalShearArea_mm2! / MM2_PER_IN2).toBeCloseTo(0.092, 4);
    expect(internalShearArea_mm2! / MM2_PER_IN2).toBeCloseTo(0.1347, 4);
    expect(tensileArea_mm2! / MM2_PER_IN2).toBeCloseTo(0.03182, 5);
  });

  // FED-STD-H28/2B: where both parts are equally strong the screw strips first, and the engagement
  // for full strength is LE = 2 At / (shear area of the screw for a unit of length).
  test.each(["1/4-20 UNC", "10-32 UNF", "M6", "M10x1.25"])("%s in its own strength needs LE = 2 At over the screw's shear area", (thread) => {
    const { tensileArea_mm2, externalShearArea_mm2, fullStrengthEngagement_mm, strengthRatio } = run({ thread, engagement_mm: 10, internalShear_MPa: 400 });
    expect(fullStrengthEngagement_mm).toBeCloseTo((2 * tensileArea_mm2!) / (externalShearArea_mm2! / 10), 9);
    expect(strengthRatio).toBeLessThan(1);
  });

  // FED-STD-H28/2B: in a weaker tapped part it grows by J, Q = J × LE.
  test("a weaker tapped part needs J times the engagement", () => {
    const equal = run({ thread: "M8", engagement_mm: 10, internalShear_MPa: 400 });
    const weak = run({ thread: "M8", engagement_mm: 10, internalShear_MPa: 100 });
    expect(weak.strengthRatio).toBeGreaterThan(1);
    expect(weak.fullStrengthEngagement_mm).toBeCloseTo(weak.strengthRatio! * equal.fullStrengthEngagement_mm!, 9);
  });
});

describe("limits of size", () => {
  // ISO 965-1 limits of M10 6g (stored copy): d2 8.862 to 8.994, d 9.732 to 9.968.
  test("M10 has the limits of ISO 965", () => {
    expect(findThread("M10")).toMatchObject({ screwPitchMin: 8.862, screwMajorMin: 9.732, pitch: 1.5 });
  });

  // FED-STD-H28 and ASME B1.1 by their formulas; published rows of 1/4-20 (2A: major 0.2408, pitch
  // 0.2127; 2B: minor 0.207, pitch 0.2224) and of 5/8-11 (0.6113, 0.5589; 0.546, 0.5732) in stored copies.
  test.each([
    { thread: "1/4-20 UNC", rows: [0.2408, 0.2127, 0.207, 0.2224] },
    { thread: "5/8-11 UNC", rows: [0.6113, 0.5589, 0.546, 0.5732] },
  ])("$thread 2A/2B", ({ thread, rows }) => {
    const { screwMajorMin, screwPitchMin, holeMinorMax, holePitchMax } = findThread(thread)!;
    expect([screwMajorMin, screwPitchMin, holeMinorMax, holePitchMax].map((mm) => Number((mm / 25.4).toFixed(4)))).toEqual(rows);
  });
});

describe("what a bolt breaks at", () => {
  // ISO 898-1, least ultimate tensile loads of classes 8.8, 10.9 and 12.9 (stored copy; three figures).
  test.each([
    { thread: "M8", tensile: 800, load: 29_200 },
    { thread: "M10", tensile: 1040, load: 60_300 },
    { thread: "M12", tensile: 1220, load: 103_000 },
  ])("$thread of $tensile MPa: $load N", ({ thread, tensile, load }) => {
    expect(Math.abs(run({ thread, engagement_mm: 10, boltTensile_MPa: tensile }).boltBreak_N! / load - 1)).toBeLessThan(0.005);
  });

  // ASTM A574, socket head cap screws of 180 ksi: least tensile loads in lbf (stored copy).
  test.each([
    { thread: "1/4-20", load: 5730 },
    { thread: "5/16-18", load: 9440 },
    { thread: "10-24", load: 3150 },
  ])("$thread of 180 ksi: $load lbf", ({ thread, load }) => {
    const broken = run({ thread, engagement_mm: 10, boltTensile_MPa: 180_000 * MPA_PER_PSI }).boltBreak_N!;
    expect(Math.abs(broken / N_PER_POUND_FORCE / load - 1)).toBeLessThan(0.002);
  });
});
