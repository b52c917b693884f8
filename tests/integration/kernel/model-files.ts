import { createHash } from "node:crypto";
import { readdirSync, readFileSync } from "node:fs";
import { basename, join } from "node:path";
import { fileURLToPath } from "node:url";
import type { KernelRun } from "#app/kernel/run-kernel.server.ts";
import { measureStep } from "#app/kernel/measure-step.server.ts";

export const models = fileURLToPath(new URL("../../support/models/", import.meta.url));

export interface ExpectedModel {
  expect?: string;
  solid?: { solids: number; faces: number; valid?: boolean };
  bounds_mm?: { min: number[]; max: number[] };
  area_mm2?: number;
  volume_mm3?: number;
  centroid_mm?: number[];
  inertia_mm5?: number[][];
  cylinderFacesByRadius_mm?: Record<string, { concave: number; convex: number }>;
}

/** Measured with OpenCASCADE 7.6 DRAW and others; `about` in the file says what by which. */
export const expected = (JSON.parse(readFileSync(join(models, "expected.json"), "utf8")) as { files: Record<string, ExpectedModel> }).files;

export function stepFilesIn(folder: "step" | "bad"): string[] {
  return readdirSync(join(models, folder))
    .filter((name) => /\.(step|stp|p21)$/i.test(name) || name === "step-named.stl")
    .sort()
    .map((name) => `${folder}/${name}`);
}

const measured = new Map<string, ReturnType<typeof measureAnew>>();

/** Several tests look at the same answer: within a test file, one process a model. With limits or a signal, always anew. */
export function measure(file: string, run?: KernelRun): ReturnType<typeof measureAnew> {
  if (run) return measureAnew(file, run);
  const answer = measured.get(file) ?? measureAnew(file, {});
  measured.set(file, answer);
  return answer;
}

function measureAnew(file: string, run: KernelRun) {
  const path = join(models, file);
  const content = readFileSync(path);
  return measureStep(path, { name: basename(file), bytes: content.length, sha256: createHash("sha256").update(content).digest("hex"), ...run });
}
