import type { MeasureDocument } from "#app/geometry/measure-document.ts";
import type { StepMeasures } from "./kernel-protocol.ts";
import { runKernel, type KernelRun } from "./run-kernel.server.ts";

export interface MeasureStepOptions extends KernelRun {
  name: string;
  /** Of the file's bytes, in hexadecimal. */
  sha256: string;
  bytes: number;
}

/** A STEP file's document also names its products (parts and assemblies, in file order) and says more of each hole. */
export type StepDocument = MeasureDocument & Pick<StepMeasures, "products" | "holes">;

/**
 * What is there to know about this STEP file?
 *
 * All solids together, each once per placement; surfaces beside them are left out. Volume, area,
 * centroid and inertia are integrated adaptively from the B-rep. A file without a solid has
 * `solid.solids` 0, a warning, and null for every measure.
 *
 * @param path of the file on this machine
 * @throws UnreadableModel when it can't be read, or not within the limits
 */
export async function measureStep(path: string, { name, sha256, bytes, ...run }: MeasureStepOptions): Promise<StepDocument> {
  const { result } = await runKernel<StepMeasures>({ kind: "measure", path }, run);
  return { file: { name, bytes, sha256, format: "step" }, mesh: null, ...result };
}
