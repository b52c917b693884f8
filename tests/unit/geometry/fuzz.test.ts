import { readFileSync, readdirSync } from "node:fs";
import { expect, test } from "vitest";
import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { measureStl } from "#app/geometry/measure-stl.ts";
import { asciiStl, binaryStl, box, prism } from "./solids.ts";

// A short run; FUZZ_CASES and FUZZ_SEED make a long one, or repeat one that failed.
const cases = Number(process.env.FUZZ_CASES ?? 4000);
const seed = Number(process.env.FUZZ_SEED ?? Date.now() % 1_000_000_007);
const SLOWEST_MS = 2000;

/** Mulberry32: small, seeded, good enough to choose bytes. */
function randomFrom(start: number): () => number {
  let state = start >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

const WORDS = ["solid", "facet", "endfacet", "outer loop", "endloop", "vertex", "endsolid", "end", "nan", "-inf", "1e999", "1e-999", "0x", ",", "#", "\r", "\0", "-", ".", "e", "ISO-10303-21;", "9".repeat(400)];

function mutate(bytes: Uint8Array, random: () => number): Uint8Array {
  const below = (n: number) => Math.floor(random() * n);
  let out = bytes.slice();
  for (let times = 1 + below(6); times > 0; times--) {
    const at = below(out.length + 1);
    const some = below(random() < 0.7 ? 12 : 600);
    switch (below(8)) {
      case 0: for (let i = 0; i <= some / 4 && out.length > 0; i++) out[below(out.length)] = below(256); break;
      case 1: if (out.length > 0) out[at % out.length]! ^= 1 << below(8); break;
      case 2: out = out.slice(0, at); break;
      case 3: out = new Uint8Array([...out.subarray(0, at), ...out.subarray(at + some)]); break;
      case 4: out = new Uint8Array([...out.subarray(0, at), ...out.subarray(below(out.length + 1)).subarray(0, some), ...out.subarray(at)]); break;
      case 5: out = new Uint8Array([...out.subarray(0, at), ...new TextEncoder().encode(` ${WORDS[below(WORDS.length)]} `), ...out.subarray(at)]); break;
      case 6: if (out.length >= 84) new DataView(out.buffer).setUint32(80, [0, 1, below(50), 0xffffffff, Math.floor((out.length - 84) / 50)][below(5)]!, true); break;
      case 7: if (out.length >= 134) new DataView(out.buffer).setFloat32(96 + 4 * below((out.length - 100) / 4), [NaN, Infinity, 3e38, 1e-45, -0, 1e20][below(6)]!, true); break;
    }
  }
  return out;
}

test(`mutated files give a result or a reason, soon (FUZZ_SEED=${seed} FUZZ_CASES=${cases})`, { timeout: 60_000 + cases * 10 }, () => {
  console.log(`fuzz: FUZZ_SEED=${seed} FUZZ_CASES=${cases}`);
  const bad = new URL("../../support/models/bad/", import.meta.url);
  const seeds = [
    binaryStl(box(40, 25, 6)), binaryStl(prism(12, 30, 5), { header: "solid plate" }), asciiStl(box(40, 25, 6)), asciiStl(prism(7, 3, 5), "a b c"),
    ...readdirSync(bad).filter((name) => name.endsWith(".stl")).map((name) => new Uint8Array(readFileSync(new URL(name, bad)))).filter((bytes) => bytes.length < 20_000),
  ];
  let measured = 0, refused = 0;
  for (let number = 0; number < cases; number++) {
    const random = randomFrom(seed + number);
    const bytes = mutate(seeds[Math.floor(random() * seeds.length)]!, random);
    const start = performance.now();
    try {
      const document = measureStl(bytes, { name: "fuzz.stl", sha256: "" });
      measured++;
      for (const value of [document.area_mm2, document.volume_mm3, ...Object.values(document.bounds_mm!).flat(), ...(document.centroid_mm ?? []), ...(document.inertia_mm5 ?? []).flat()]) {
        expect(Number.isFinite(value), `case ${number} of seed ${seed}`).toBe(true);
      }
      expect(document.mesh!.triangles).toBeGreaterThan(0);
    } catch (error) {
      if (!(error instanceof UnreadableModel)) throw new Error(`case ${number} of seed ${seed}`, { cause: error });
      expect(error.message, `case ${number} of seed ${seed}`).toMatch(/^[\x20-\x7e…]{10,220}$/);
      refused++;
    }
    expect(performance.now() - start, `case ${number} of seed ${seed}`).toBeLessThan(SLOWEST_MS);
  }
  // Both roads were taken, or the mutations are too mild or too harsh to show anything.
  expect(measured).toBeGreaterThan(cases / 50);
  expect(refused).toBeGreaterThan(cases / 10);
});
