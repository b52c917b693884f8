import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { findThread, threadDesignations } from "#app/engineering/thread-table.ts";
import { refusedKeys, resultOf } from "./run.ts";

const thread = { thread: "M6x1", internalMaterial: "6061-T6", boltTensile_MPa: 800, engagement_mm: 12 };

describe("thread engagement", () => {
  test("the verdict turns exactly at the load that strips with its safety", () => {
    const { results } = resultOf("thread-engagement", thread);
    const strip = Math.min(results.internalStrip_N as number, results.externalStrip_N as number);
    const at = (load_N: number) => resultOf("thread-engagement", { ...thread, load_N, safety: 2 }).verdict;
    expect([at(strip / 2), at((strip / 2) * 0.999), at((strip / 2) * 1.001)]).toEqual(["pass", "pass", "fail"]);
  });

  test("without a load it passes when the bolt breaks first", () => {
    const { results } = resultOf("thread-engagement", thread);
    const full = results.fullStrengthEngagement_mm as number;
    expect(resultOf("thread-engagement", { ...thread, engagement_mm: full * 1.001 })).toMatchObject({ verdict: "pass", results: { weakest: "bolt" } });
    expect(resultOf("thread-engagement", { ...thread, engagement_mm: full * 0.999 }).verdict).toBe("fail");
  });

  test("more engagement never strips earlier, and a stronger part never weakens it", () => {
    fc.assert(
      fc.property(fc.constantFrom(...threadDesignations), fc.double({ min: 1, max: 60, noNaN: true }), fc.double({ min: 20, max: 500, noNaN: true }), (name, length, shear) => {
        const base = { thread: name, internalShear_MPa: shear, boltTensile_MPa: 800, engagement_mm: length };
        const strip = (inputs: object) => resultOf("thread-engagement", { ...base, ...inputs }).results.internalStrip_N as number;
        expect(strip({ engagement_mm: length * 1.1 })).toBeGreaterThan(strip({}));
        expect(strip({ internalShear_MPa: shear * 1.1 })).toBeGreaterThan(strip({}));
      }),
    );
  });

  test("the room is what is left to the limit, and nought on it", () => {
    const { results } = resultOf("thread-engagement", thread);
    const strip = Math.min(results.internalStrip_N as number, results.externalStrip_N as number);
    expect(resultOf("thread-engagement", { ...thread, load_N: 1000, safety: 3 }).room).toEqual({ value: strip - 3000, unit: "N" });
    const onIt = resultOf("thread-engagement", { ...thread, engagement_mm: results.fullStrengthEngagement_mm });
    expect(onIt).toMatchObject({ verdict: "pass", results: { weakest: "bolt" } });
    expect(Math.abs(onIt.room!.value)).toBeLessThan(1e-6);
  });

  test("says so when the bolt breaks before the load that the threads are asked to hold", () => {
    const { results } = resultOf("thread-engagement", { ...thread, engagement_mm: 60 });
    const load_N = (results.boltBreak_N as number) / 2;
    const bolt = (load: number) => resultOf("thread-engagement", { ...thread, engagement_mm: 60, load_N: load }).cautions.filter((text) => text.includes("bolt itself breaks"));
    expect(bolt(load_N * 0.999)).toEqual([]);
    expect(bolt(load_N * 1.001)).toHaveLength(1);
  });

  test("a typical strength is a caution, a minimum is none, a given strength wins", () => {
    const cautions = (inputs: object) => resultOf("thread-engagement", { ...thread, ...inputs }).cautions.join(" ");
    expect(cautions({ internalMaterial: "7075-T6" })).toMatch(/typical value/);
    expect(cautions({})).not.toMatch(/typical value/);
    expect(cautions({ internalMaterial: "7075-T6", internalShear_MPa: 300 })).not.toMatch(/typical value/);
    expect(resultOf("thread-engagement", { ...thread, internalShear_MPa: 93 }).results.internalStrip_N).toBeCloseTo((resultOf("thread-engagement", thread).results.internalStrip_N as number) / 2, 6);
  });

  test("few turns are said to be few", () => {
    const few = (engagement_mm: number) => resultOf("thread-engagement", { ...thread, engagement_mm }).cautions.some((text) => text.includes("turns"));
    expect([few(2.9), few(3)]).toEqual([true, false]);
  });

  test.each(["M6", "m6", "M6x1", "M6X1", "M6 x 1", "M6×1,0", "M6x1.00-6H", "M6 - 6g", "M6x1-6H/6g"])("%s is M6x1", (text) => {
    expect(findThread(text)?.designation).toBe("M6x1");
  });

  test.each(["10-32", "#10-32", "10-32 UNF", "No. 10-32 UNF-2B", "10-32unf 2a"])("%s is 10-32 UNF", (text) => {
    expect(findThread(text)?.designation).toBe("10-32 UNF");
  });

  test.each(["1/4-20 UNF", "1/4-21", "M6x0.9", "M60", "10", "", "x", "M", "UNC"])("%j is no thread of the tables", (text) => {
    expect(findThread(text)).toBeUndefined();
  });

  test.each([
    { inputs: { ...thread, engagement_mm: undefined }, key: "engagement_mm" },
    { inputs: { ...thread, engagement_mm: -1 }, key: "engagement_mm" },
    { inputs: { ...thread, engagement_mm: 0 }, key: "engagement_mm" },
    { inputs: { ...thread, engagement_mm: 12_000 }, key: "engagement_mm" },
    { inputs: { ...thread, thread: undefined }, key: "thread" },
    { inputs: { ...thread, thread: 6 }, key: "thread" },
    { inputs: { ...thread, boltTensile_MPa: undefined }, key: "boltTensile_MPa" },
    { inputs: { ...thread, boltTensile_MPa: -800 }, key: "boltTensile_MPa" },
    { inputs: { ...thread, boltTensile_MPa: 116_000 }, key: "boltTensile_MPa" },
    { inputs: { ...thread, internalShear_MPa: 0 }, key: "internalShear_MPa" },
    { inputs: { ...thread, internalMaterial: "303" }, key: "internalMaterial" },
    { inputs: { ...thread, internalShear_MPa: 100, internalMaterial: "cheese" }, key: "internalMaterial" },
    { inputs: { ...thread, load_N: -1 }, key: "load_N" },
    { inputs: { ...thread, load_N: Number.POSITIVE_INFINITY }, key: "load_N" },
    { inputs: { ...thread, safety: 0 }, key: "safety" },
    { inputs: { ...thread, boltShearRatio: 1.1 }, key: "boltShearRatio" },
    { inputs: { ...thread, engagement_mm: "12" }, key: "engagement_mm" },
    { inputs: { ...thread, thread: "M6.3" }, key: "thread" },
    { inputs: { ...thread, internalMaterial: "cheese" }, key: "internalMaterial" },
    { inputs: { ...thread, internalMaterial: undefined }, key: "internalMaterial" },
    { inputs: { ...thread, engagement_in: 1 }, key: "engagement_in" },
    { inputs: { ...thread, boltTensile_MPa: Number.NaN }, key: "boltTensile_MPa" },
  ])("refuses by key: $key", ({ inputs, key }) => {
    expect(refusedKeys("thread-engagement", inputs)).toEqual([key]);
  });
});
