import { expect, test } from "vitest";
import { countedPlaces, isClosed, modelFacts, type MeasuredModel } from "#app/domain/model-facts.ts";

const cube: MeasuredModel = { bounds_mm: { size: [100, 100, 100] }, area_mm2: 60_000, volume_mm3: 1_000_000, mesh: null, solid: { solids: 1, valid: true }, thinnestWall_mm: null, smallestInsideRadius_mm: null };

test("a litre of a stock of 2700 kg/m³ weighs 2.7 kg, by the definition of density", () => {
  expect(modelFacts(cube, 2700).massKg).toBeCloseTo(2.7, 12);
});

test("without a stock there is a volume and no mass", () => {
  expect(modelFacts(cube, null)).toMatchObject({ massKg: null, volumeMm3: 1_000_000 });
});

test.each([
  { what: "an open mesh", model: { ...cube, solid: null, mesh: { closed: false } } },
  { what: "an invalid solid", model: { ...cube, solid: { solids: 1, valid: false } } },
  { what: "surfaces without a solid", model: { ...cube, solid: { solids: 0, valid: true } } },
  { what: "a mesh that is inside out", model: { ...cube, solid: null, mesh: { closed: true }, volume_mm3: -1 } },
  { what: "no volume", model: { ...cube, volume_mm3: null } },
])("$what weighs nothing that could be said", ({ model }) => {
  expect(modelFacts(model, 2700)).toMatchObject({ massKg: null, volumeMm3: null, areaMm2: 60_000 });
});

test("a closed mesh encloses a volume as a valid solid does", () => {
  expect(isClosed({ solid: null, mesh: { closed: true } })).toBe(true);
  expect(isClosed({ solid: null, mesh: null })).toBe(false);
});

test.each([
  [[], ""],
  [[0], "1"],
  [[0, 1], "1, 2"],
  [[2, 0, 1], "1 to 3"],
  [[0, 1, 2, 3, 5], "1 to 4, 6"],
  [[1, 3, 5], "2, 4, 6"],
])("the places %j are said as %j", (indices, words) => {
  expect(countedPlaces(indices)).toBe(words);
});
