import { spawnSync } from "node:child_process";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { calculations, runCalculation } from "#app/engineering/registry.ts";
import { threadDesignations } from "#app/engineering/thread-table.ts";
import { parseLength } from "#app/units.ts";

const thread = { thread: "M6x1", internalMaterial: "6061-T6", boltTensile_MPa: 800, engagement_mm: 12 };
const ok = (kind: string, inputs: unknown) => {
  const outcome = runCalculation(kind, inputs);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.errors));
  return outcome.result;
};

describe("thread engagement", () => {
  test("the verdict turns exactly at the load that strips with its safety", () => {
    const { results } = ok("thread-engagement", thread);
    const strip = Math.min(results.internalStrip_N as number, results.externalStrip_N as number);
    const at = (load_N: number) => ok("thread-engagement", { ...thread, load_N, safety: 2 }).verdict;
    expect([at(strip / 2), at((strip / 2) * 0.999), at((strip / 2) * 1.001)]).toEqual(["pass", "pass", "fail"]);
  });

  test("without a load it passes when the bolt breaks first", () => {
    const { results } = ok("thread-engagement", thread);
    const full = results.fullStrengthEngagement_mm as number;
    expect(ok("thread-engagement", { ...thread, engagement_mm: full * 1.001 })).toMatchObject({ verdict: "pass", results: { weakest: "bolt" } });
    expect(ok("thread-engagement", { ...thread, engagement_mm: full * 0.999 }).verdict).toBe("fail");
  });

  test("more engagement never strips earlier, and a stronger part never weakens it", () => {
    fc.assert(
      fc.property(fc.constantFrom(...threadDesignations), fc.double({ min: 1, max: 60, noNaN: true }), fc.double({ min: 20, max: 500, noNaN: true }), (name, length, shear) => {
        const base = { thread: name, internalShear_MPa: shear, boltTensile_MPa: 800, engagement_mm: length };
        const strip = (inputs: object) => ok("thread-engagement", { ...base, ...inputs }).results.internalStrip_N as number;
        expect(strip({ engagement_mm: length * 1.1 })).toBeGreaterThan(strip({}));
        expect(strip({ internalShear_MPa: shear * 1.1 })).toBeGreaterThan(strip({}));
      }),
    );
  });

  test.each([
    { inputs: { ...thread, engagement_mm: undefined }, key: "engagement_mm" },
    { inputs: { ...thread, engagement_mm: -1 }, key: "engagement_mm" },
    { inputs: { ...thread, engagement_mm: "12" }, key: "engagement_mm" },
    { inputs: { ...thread, thread: "M6.3" }, key: "thread" },
    { inputs: { ...thread, internalMaterial: "cheese" }, key: "internalMaterial" },
    { inputs: { ...thread, internalMaterial: undefined }, key: "internalMaterial" },
    { inputs: { ...thread, engagement_in: 1 }, key: "engagement_in" },
    { inputs: { ...thread, boltTensile_MPa: Number.NaN }, key: "boltTensile_MPa" },
  ])("refuses by key: $key", ({ inputs, key }) => {
    const outcome = runCalculation("thread-engagement", inputs);
    expect(outcome.ok ? [] : Object.keys(outcome.errors)).toContain(key);
  });
});

describe("fit", () => {
  const pilot = { nominal_mm: 62, holeLimits_mm: [62, 62.03], shaftLimits_mm: [61.95, 61.97] };

  test("wanted clearance: inside, exactly on both limits, and a micrometre beyond", () => {
    const verdict = (clearance_mm: [number, number]) => ok("fit", { ...pilot, clearance_mm }).verdict;
    expect(verdict([0.02, 0.1])).toBe("pass");
    expect(verdict([0.03, 0.08])).toBe("pass");
    expect(verdict([0.031, 0.08])).toBe("fail");
    expect(verdict([0.03, 0.079])).toBe("fail");
  });

  test("parts of one material keep their clearance when warm, but for its own growth", () => {
    const cold = ok("fit", pilot).results.clearance_mm as number[];
    const warm = ok("fit", { ...pilot, temperature_C: 120, holeMaterial: "6061-T6", shaftMaterial: "6061-T6" }).results.clearance_mm as number[];
    expect(warm[0]).toBeCloseTo(cold[0]! * (1 + 23.6e-6 * 100), 9);
  });

  test("a steel shaft in an aluminium bore loosens when warm; coating tightens", () => {
    const warm = ok("fit", { ...pilot, temperature_C: 120, holeMaterial: "6061-T6", shaftMaterial: "4140 annealed" }).results.clearance_mm as number[];
    expect(warm[0]).toBeGreaterThan(0.03);
    expect((ok("fit", { ...pilot, holeCoating_mm: 0.005, shaftCoating_mm: 0.005 }).results.clearance_mm as number[])[0]).toBeCloseTo(0.01, 9);
  });

  test.each([
    { inputs: { ...pilot, holeClass: "H7" }, key: "holeClass" },
    { inputs: { nominal_mm: 25, holeClass: "g6", shaftClass: "g6" }, key: "holeClass" },
    { inputs: { nominal_mm: 600, holeClass: "H7", shaftClass: "g6" }, key: "nominal_mm" },
    { inputs: { ...pilot, temperature_C: 80 }, key: "holeMaterial" },
    { inputs: { ...pilot, holeLimits_mm: [63, 62] }, key: "holeLimits_mm" },
  ])("refuses by key: $key", ({ inputs, key }) => {
    const outcome = runCalculation("fit", inputs);
    expect(outcome.ok ? [] : Object.keys(outcome.errors)).toContain(key);
  });
});

test("every calculation says that it is a check, and where its formula is from", () => {
  for (const { sources } of calculations) expect(sources.length).toBeGreaterThan(0);
  expect(ok("thread-engagement", thread).cautions[0]).toMatch(/check, not an approval/);
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
    expect(run(["fit"], "{").stderr).toMatch(/not JSON/);
  });
});

describe("typed lengths", () => {
  test.each([
    { text: "12.7", unit: "mm", mm: 12.7 },
    { text: "12,7", unit: "mm", mm: 12.7 },
    { text: "7/8", unit: "in", mm: 22.225 },
    { text: "1 1/4 in", unit: "mm", mm: 31.75 },
    { text: "1-1/4\"", unit: "mm", mm: 31.75 },
    { text: ".5\"", unit: "mm", mm: 12.7 },
    { text: "10 mm", unit: "in", mm: 10 },
    { text: "-3", unit: "mm", mm: -3 },
  ] as const)("$text typed where lengths are in $unit", ({ text, unit, mm }) => {
    const parsed = parseLength(text, unit);
    expect(parsed.ok && parsed.mm).toBeCloseTo(mm, 9);
  });

  test.each(["", "abc", "1/0", "1..2", "5 miles", "1,2,3", "12.7.1 mm", "Infinity"])("refuses %j", (text) => {
    expect(parseLength(text, "mm").ok).toBe(false);
  });

  test("a unit change and back changes nothing", () => {
    fc.assert(fc.property(fc.double({ min: 0.001, max: 5000, noNaN: true }), (mm) => {
      const inches = parseLength(String(Number((mm / 25.4).toFixed(12))), "in");
      expect(inches.ok && Math.abs(inches.mm - mm)).toBeLessThan(1e-9);
    }));
  });
});
