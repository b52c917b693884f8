import { expect, test } from "vitest";
import { cautionsFor, fluids, HOT_TO_TOUCH_C, type Hazards } from "#app/domain/cautions.ts";

const none: Hazards = { speed_rpm: null, pressure_MPa: null, temperature_C: null, fluid: null, lifting: false };
const always = ["check-not-approval", "machine-tools", "track-tests"];
const codes = (hazards: Partial<Hazards>) => cautionsFor({ ...none, ...hazards }).map((caution) => caution.code);

test.each<[string, Partial<Hazards>, string[]]>([
  ["nothing known", {}, []],
  ["speed", { speed_rpm: 1 }, ["rotating"]],
  ["standing still", { speed_rpm: 0 }, []],
  ["pressure", { pressure_MPa: 0.01 }, ["pressure"]],
  ["no pressure", { pressure_MPa: 0 }, []],
  ["just below hot", { temperature_C: HOT_TO_TOUCH_C - 0.1 }, []],
  ["hot", { temperature_C: HOT_TO_TOUCH_C }, ["heat"]],
  ["cold", { temperature_C: -40 }, []],
  ["fuel", { fluid: "fuel" }, ["fuel"]],
  ["coolant", { fluid: "coolant" }, ["hot-fluid"]],
  ["oil under pressure", { fluid: "oil", pressure_MPa: 0.6 }, ["pressure", "hot-fluid"]],
  ["lifting", { lifting: true }, ["lifting"]],
  ["all of it", { speed_rpm: 8000, pressure_MPa: 0.2, temperature_C: 95, fluid: "fuel", lifting: true }, ["rotating", "pressure", "heat", "fuel", "lifting"]],
])("%s", (_, hazards, expected) => {
  expect(codes(hazards)).toEqual([...always, ...expected]);
});

test("every caution has a title and a text, each code once, and names the data it follows from", () => {
  for (const fluid of fluids) {
    const cautions = cautionsFor({ speed_rpm: 8000, pressure_MPa: 0.2, temperature_C: 95, fluid, lifting: true });
    expect(new Set(cautions.map((caution) => caution.code)).size).toBe(cautions.length);
    for (const caution of cautions) expect([caution.title, caution.text, caution.basis].every((text) => text.length > 0)).toBe(true);
  }
  expect(cautionsFor({ ...none, speed_rpm: 8000 }).at(-1)).toMatchObject({ code: "rotating", basis: "turns at 8000 rpm" });
});

test("a figure that can't be is refused", () => {
  for (const hazards of [{ speed_rpm: -1 }, { pressure_MPa: -0.1 }, { temperature_C: NaN }, { speed_rpm: Infinity }]) {
    expect(() => cautionsFor({ ...none, ...hazards })).toThrow(RangeError);
  }
});
