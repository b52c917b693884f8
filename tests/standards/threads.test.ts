import { describe, expect, test } from "vitest";
import { runCalculation } from "#app/engineering/registry.ts";
import { findThread, tensileStressArea } from "#app/engineering/thread-table.ts";

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
  return outcome.result;
}

describe("shear areas of FED-STD-H28/2B", () => {
  // Worked by hand from the formulas of FED-STD-H28/2B and the 2A/2B limits of ASME B1.1 for
  // 1/4-20 UNC over 0.25 in: 0.0920 in² of the screw, 0.1347 in² of the tapped hole.
  test("1/4-20 UNC over a quarter inch", () => {
    const { results } = run({ thread: "1/4-20 UNC", engagement_mm: 6.35 });
    expect((results.externalShearArea_mm2 as number) / MM2_PER_IN2).toBeCloseTo(0.092, 3);
    expect((results.internalShearArea_mm2 as number) / MM2_PER_IN2).toBeCloseTo(0.1347, 3);
    expect((results.tensileArea_mm2 as number) / MM2_PER_IN2).toBeCloseTo(0.03182, 4);
  });
  // ISO 965-1 limits of M10 6g (stored copy): d2 8.862 to 8.994, d 9.732 to 9.968.
  test("M10 has the limits of ISO 965", () => {
    expect(findThread("M10")).toMatchObject({ screwPitchMin: 8.862, screwMajorMin: 9.732, pitch: 1.5 });
  });
});
