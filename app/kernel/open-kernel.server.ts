import { readFile } from "node:fs/promises";
import { createRequire } from "node:module";
import init, { type OpenCascadeInstance, type TopAbs_ShapeEnum, type TopoDS_Shape } from "replicad-opencascadejs";

export type Kernel = OpenCascadeInstance;

/**
 * Starts a geometry kernel of its own: a third of a second and about 200 MB.
 *
 * Its memory only ever grows, and after a trap it must not be used again, so files from outside
 * are read in a process that ends with the file (run-kernel.server.ts).
 */
export async function openKernel(): Promise<Kernel> {
  const wasmBinary = await readFile(createRequire(import.meta.url).resolve("replicad-opencascadejs/wasm"));
  // The kernel prints statistics of its own on every file; nobody reads them.
  return init({ wasmBinary, print: () => {}, printErr: () => {} });
}

/** Parts of a shape of one kind, each as often as it occurs and in its place. */
export function partsOf(kernel: Kernel, shape: TopoDS_Shape, kind: TopAbs_ShapeEnum, outside?: TopAbs_ShapeEnum): TopoDS_Shape[] {
  const parts: TopoDS_Shape[] = [];
  const explorer = outside === undefined ? new kernel.TopExp_Explorer(shape, kind) : new kernel.TopExp_Explorer(shape, kind, outside);
  for (; explorer.More(); explorer.Next()) parts.push(explorer.Current());
  explorer.delete();
  return parts;
}
