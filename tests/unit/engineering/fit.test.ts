import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { refusedKeys, resultOf } from "./run.ts";

describe("fit", () => {
  const pilot = { nominal_mm: 62, holeLimits_mm: [62, 62.03], shaftLimits_mm: [61.95, 61.97] };

  test("wanted clearance: inside, exactly on both limits, and a micrometre beyond", () => {
    const verdict = (clearance_mm: [number, number]) => resultOf("fit", { ...pilot, clearance_mm }).verdict;
    expect(verdict([0.02, 0.1])).toBe("pass");
    expect(verdict([0.03, 0.08])).toBe("pass");
    expect(verdict([0.031, 0.08])).toBe("fail");
    expect(verdict([0.03, 0.079])).toBe("fail");
  });

  test("parts of one material keep their clearance when warm, but for its own growth", () => {
    const cold = resultOf("fit", pilot).results.clearance_mm as number[];
    const warm = resultOf("fit", { ...pilot, temperature_C: 120, holeMaterial: "6061-T6", shaftMaterial: "6061-T6" }).results.clearance_mm as number[];
    expect(warm[0]).toBeCloseTo(cold[0]! * (1 + 23.6e-6 * 100), 9);
  });

  test("a steel shaft in an aluminium bore loosens when warm; coating tightens", () => {
    const warm = resultOf("fit", { ...pilot, temperature_C: 120, holeMaterial: "6061-T6", shaftMaterial: "4140 annealed" }).results.clearance_mm as number[];
    expect(warm[0]).toBeGreaterThan(0.03);
    expect((resultOf("fit", { ...pilot, holeCoating_mm: 0.005, shaftCoating_mm: 0.005 }).results.clearance_mm as number[])[0]).toBeCloseTo(0.01, 9);
  });

  test("a wanted interference is judged on both sides too", () => {
    const pressed = { nominal_mm: 25, holeClass: "H7", shaftClass: "s6" };
    const verdict = (clearance_mm: [number, number]) => resultOf("fit", { ...pressed, clearance_mm }).verdict;
    expect([verdict([-0.048, -0.014]), verdict([-0.047, -0.014]), verdict([-0.048, -0.015])]).toEqual(["pass", "fail", "fail"]);
  });

  test("a limit that is passed is named with how far", () => {
    expect(resultOf("fit", { ...pilot, clearance_mm: [0.031, 0.079] }).remarks).toEqual(["the least clearance is 0.001 mm below the 0.031 mm wanted", "the largest clearance is 0.001 mm above the 0.079 mm wanted"]);
  });

  // Linear expansion: size × α × ΔT, by hand: 62 × 23.6e-6 × 80 = 0.117056.
  test("a warm hole grows by size, coefficient and rise", () => {
    const { results, steps } = resultOf("fit", { ...pilot, temperature_C: 100, holeMaterial: "6061-T6", shaftMaterial: "4140 annealed" });
    expect((results.holeInService_mm as number[])[0]).toBeCloseTo(62.117056, 9);
    expect(results.hole_mm).toEqual([62, 62.03]);
    expect(steps.filter(({ name }) => name.includes("in service"))).toHaveLength(4);
  });

  test("at 20 °C a material changes nothing, and one that nobody knows is still refused", () => {
    expect(resultOf("fit", { ...pilot, holeMaterial: "6061-T6", shaftMaterial: "C36000" }).results.clearance_mm).toEqual(resultOf("fit", pilot).results.clearance_mm);
    expect(refusedKeys("fit", { ...pilot, holeMaterial: "cheese" })).toEqual(["holeMaterial"]);
  });

  test("cold and warm of one and the same material agree, whatever the fit", () => {
    fc.assert(
      fc.property(fc.double({ min: 3.1, max: 500, noNaN: true }), fc.constantFrom("H7/g6", "H7/k6", "H7/p6", "H8/f7", "N7/h6"), fc.double({ min: -80, max: 250, noNaN: true }), (nominal_mm, classes, temperature_C) => {
        const [holeClass, shaftClass] = classes.split("/");
        const at = (rest: object) => resultOf("fit", { nominal_mm, holeClass, shaftClass, ...rest }).results.clearance_mm as [number, number];
        const cold = at({});
        const warm = at({ temperature_C, holeMaterial: "6061-T6", shaftMaterial: "6061-T6" });
        const growth = 1 + 23.6e-6 * (temperature_C - 20);
        expect(warm[0]).toBeCloseTo(cold[0] * growth, 9);
        expect(warm[1]).toBeCloseTo(cold[1] * growth, 9);
        expect(cold[0]).toBeLessThan(cold[1]);
      }),
    );
  });

  test("more coating never loosens", () => {
    fc.assert(
      fc.property(fc.double({ min: 0, max: 0.1, noNaN: true }), fc.double({ min: 0.0001, max: 0.1, noNaN: true }), (thin, more) => {
        const least = (holeCoating_mm: number) => (resultOf("fit", { ...pilot, holeCoating_mm }).results.clearance_mm as number[])[0]!;
        expect(least(thin + more)).toBeLessThan(least(thin));
      }),
    );
  });

  test.each([
    { inputs: { ...pilot, holeClass: "H7" }, key: "holeClass" },
    { inputs: { nominal_mm: 25, holeClass: "g6", shaftClass: "g6" }, key: "holeClass" },
    { inputs: { nominal_mm: 600, holeClass: "H7", shaftClass: "g6" }, key: "nominal_mm" },
    { inputs: { ...pilot, nominal_mm: undefined }, key: "nominal_mm" },
    { inputs: { ...pilot, nominal_mm: -62 }, key: "nominal_mm" },
    { inputs: { ...pilot, nominal_mm: "62" }, key: "nominal_mm" },
    { inputs: { ...pilot, nominal_mm: 1e6 }, key: "nominal_mm" },
    { inputs: { ...pilot, shaftLimits_mm: undefined }, key: "shaftClass" },
    { inputs: { ...pilot, shaftLimits_mm: [2.439, 2.44] }, key: "shaftLimits_mm" },
    { inputs: { ...pilot, shaftLimits_mm: [-0.05, -0.03] }, key: "shaftLimits_mm" },
    { inputs: { ...pilot, holeLimits_mm: [62] }, key: "holeLimits_mm" },
    { inputs: { ...pilot, holeLimits_mm: ["62", 62.03] }, key: "holeLimits_mm" },
    { inputs: { nominal_mm: 25, holeClass: "H7", shaftClass: "q6" }, key: "shaftClass" },
    { inputs: { nominal_mm: 25, holeClass: "H25", shaftClass: "g6" }, key: "holeClass" },
    { inputs: { ...pilot, temperature_C: -300 }, key: "temperature_C" },
    { inputs: { ...pilot, temperature_C: 80, holeMaterial: "6061-T6" }, key: "shaftMaterial" },
    { inputs: { ...pilot, temperature_C: 80, holeMaterial: "6061-T6", shaftMaterial: "PA12-CF" }, key: "shaftMaterial" },
    { inputs: { ...pilot, holeCoating_mm: -0.01 }, key: "holeCoating_mm" },
    { inputs: { ...pilot, shaftCoating_mm: 12 }, key: "shaftCoating_mm" },
    { inputs: { ...pilot, clearance_mm: [0.1, 0.02] }, key: "clearance_mm" },
    { inputs: { ...pilot, temperature_F: 80 }, key: "temperature_F" },
    { inputs: { ...pilot, temperature_C: 80 }, key: "holeMaterial" },
    { inputs: { ...pilot, holeLimits_mm: [63, 62] }, key: "holeLimits_mm" },
  ])("refuses by key: $key", ({ inputs, key }) => {
    expect(refusedKeys("fit", inputs)).toEqual([key]);
  });
});
