import { spawnSync } from "node:child_process";
import { describe, expect, test } from "vitest";
import { calculations, describeCalculation, findCalculation, isInformationOnly, runCalculation } from "#app/engineering/registry.ts";
import { kits } from "#app/engineering/kits.ts";
import { materials } from "#app/engineering/tables/materials.ts";
import { gateLines } from "#app/domain/gate-records.ts";
import { resultOf } from "./run.ts";

const thread = { thread: "M6x1", internalMaterial: "6061-T6", boltTensile_MPa: 800, engagement_mm: 12 };

test("every calculation says that it is a check, and where its formula is from", () => {
  for (const { sources } of calculations) expect(sources.length).toBeGreaterThan(0);
  expect(resultOf("thread-engagement", thread).cautions[0]).toMatch(/check, not an approval/);
});

describe("the command", () => {
  const run = (args: string[], input = "") => spawnSync(process.execPath, ["--import", "tsx", "scripts/calculate.ts", ...args], { input, encoding: "utf8" });

  test("lists every calculation with its schema, units and defaults", () => {
    const list = JSON.parse(run(["--list"]).stdout) as Array<{ kind: string; inputs: { properties: Record<string, { unit?: string; default?: unknown }> } }>;
    expect(list.map(({ kind }) => kind)).toEqual(calculations.map(({ kind }) => kind));
    expect(list[0]!.inputs.properties.safety).toMatchObject({ default: 2 });
    expect(list[0]!.inputs.properties.load_N).toMatchObject({ unit: "N" });
  });

  test("runs one, and refuses in one line with exit code 2", () => {
    expect(JSON.parse(run(["thread-engagement"], JSON.stringify(thread)).stdout)).toMatchObject({ kind: "thread-engagement", verdict: "pass" });
    const refused = run(["thread-engagement"], JSON.stringify({ ...thread, engagement_mm: 0 }));
    expect(refused).toMatchObject({ status: 2, stdout: "" });
    expect(refused.stderr).toMatch(/^calculate: engagement_mm: .*\n$/);
    expect(run(["soup"]).status).toBe(2);
    expect(run([]).stderr).toMatch(/^calculate: name a calculation .*\n$/);
    expect(run(["fit", "joint"], "{}").status).toBe(2);
    expect(run(["fit"], "[1]").stderr).toMatch(/^calculate: inputs: .*\n$/);
    expect(run(["fit"], "{").stderr).toMatch(/not JSON/);
  });
});

describe("the registry", () => {
  test("every default says where it is from, every number its unit", () => {
    for (const calculation of calculations) {
      const { properties } = describeCalculation(calculation).inputs as { properties: Record<string, { type?: string; unit?: string; default?: unknown; origin?: string; description?: string }> };
      for (const [key, { type, unit, default: fallback, origin, description }] of Object.entries(properties)) {
        expect(description, key).toBeTruthy();
        if (type === "number" || type === "array") expect(unit, key).toBeDefined();
        if (fallback !== undefined) expect(origin, key).toBeTruthy();
      }
    }
  });

  test("a result is the whole document, and plain JSON", () => {
    for (const result of [resultOf("thread-engagement", thread), resultOf("fit", { nominal_mm: 25, holeClass: "H7", shaftClass: "g6" })]) {
      expect(JSON.parse(JSON.stringify(result))).toEqual(result);
      expect(Object.keys(result).sort()).toEqual(["cautions", "kind", "remarks", "results", "room", "sources", "steps", "verdict"]);
      for (const step of result.steps) expect(Number.isFinite(step.value), step.name).toBe(true);
    }
  });

  test("a key in another unit is told the right one", () => {
    expect(runCalculation("thread-engagement", { ...thread, load_lbf: 100 })).toMatchObject({ ok: false, errors: { load_lbf: ["is not an input of this calculation: did you mean load_N?"] } });
  });

  test.each([null, undefined, 3, "M6", [], [thread]])("inputs %j are refused", (inputs) => {
    expect(runCalculation("fit", inputs)).toMatchObject({ ok: false, errors: { inputs: [expect.any(String)] } });
  });

  test("an unknown kind is refused, and none of ours is information only", () => {
    expect(runCalculation("soup", {})).toMatchObject({ ok: false, errors: { kind: ["no calculation is called soup"] } });
    expect(["soup", ...calculations.map(({ kind }) => kind)].map(isInformationOnly)).toEqual([false, ...calculations.map(() => false)]);
  });
});

describe("kits and materials", () => {
  test("a kit asks only for calculations and gate lines that exist", () => {
    for (const { requiredCalculations, requiredLines } of kits) {
      for (const { kind } of requiredCalculations) expect(findCalculation(kind), kind).toBeDefined();
      for (const line of requiredLines) expect(gateLines).toContain(line);
    }
  });

  test("materials have codes of their own, sources, and values a metal or plastic can have", () => {
    expect(new Set(materials.map(({ code }) => code.toLowerCase())).size).toBe(materials.length);
    for (const { code, density_kg_m3, yield_MPa, tensile_MPa, shear_MPa, expansion_per_K, source } of materials) {
      expect(source, code).toBeTruthy();
      expect(density_kg_m3 > 800 && density_kg_m3 < 20_000, code).toBe(true);
      for (const strength of [yield_MPa, tensile_MPa, shear_MPa]) expect(strength === null || (strength > 10 && strength < 3000), code).toBe(true);
      expect(yield_MPa === null || tensile_MPa === null || yield_MPa <= tensile_MPa, code).toBe(true);
      expect(expansion_per_K === null || (expansion_per_K > 5e-6 && expansion_per_K < 200e-6), code).toBe(true);
    }
  });
});
