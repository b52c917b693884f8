import type { FaceRecord } from "#app/geometry/face-record.ts";
import type { RecognisedHole } from "#app/geometry/holes.ts";
import type { MeasureDocument } from "#app/geometry/measure-document.ts";

/** What the kernel's process is asked to do; one task a process. */
export type KernelTask =
  | { kind: "measure"; path: string }
  | { kind: "tessellate"; path: string; chord_mm: number };

/** What it says back, over the channel between the processes. */
export type KernelMessage =
  | { kind: "progress"; share: number; step: string }
  | { kind: "refused"; reason: string }
  /** `bytes` follow on the binary pipe. */
  | { kind: "done"; result: StepMeasures | TessellationIndex; bytes: number };

/** The kernel's part of a measure document. */
export type StepMeasures = Omit<MeasureDocument, "file" | "mesh" | "holes"> & { products: string[]; holes: RecognisedHole[] };

export interface TessellatedFace {
  /** Into the indices, three a triangle. */
  firstIndex: number;
  indexCount: number;
  kind: FaceRecord["kind"];
  /** What a person calls it: "plane", "bore Ø 6.60". */
  label: string;
}

/** What says how the bytes of a tessellation divide. */
export interface TessellationIndex {
  positions: number;
  normals: number;
  indices: number;
  edges: number;
  /** What was kept to: less than asked for a part that is small against it. */
  chord_mm: number;
  faces: TessellatedFace[];
}

/** File descriptor of the binary pipe in the kernel's process. */
export const BINARY_PIPE = 4;
