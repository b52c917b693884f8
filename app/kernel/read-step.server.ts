import { readFileSync, statSync } from "node:fs";
import type { TopoDS_Shape } from "replicad-opencascadejs";
import { UnreadableModel } from "#app/geometry/measure-document.ts";
import { partsOf, type Kernel } from "./open-kernel.server.ts";
import { readStepText, type StepText } from "./step-text.ts";

const PLACE = "/model.step";
/** The kernel needs about ten times the size of a file: more than this can't be done in its memory. */
const LARGEST_BYTES = 256 * 1024 ** 2;

export interface ReadStep {
  text: StepText;
  /** Solids with exact faces, each once per placement. */
  solids: TopoDS_Shape[];
  /** Solids that are only triangles: they have no exact measures. */
  triangulated: TopoDS_Shape[];
  /** Faces that belong to no solid: construction surfaces, or a body that isn't closed. */
  looseFaces: TopoDS_Shape[];
}

/**
 * Reads a STEP file into the kernel, in mm.
 *
 * @throws UnreadableModel where the file is no readable STEP; the kernel itself may trap on a
 *   damaged one, and is then spent
 */
export function readStep(kernel: Kernel, path: string): ReadStep {
  if (statSync(path).size > LARGEST_BYTES) throw new UnreadableModel(`is larger than ${LARGEST_BYTES / 1024 ** 2} MB, too large to read; simplify the part, or split the assembly`);
  const bytes = readFileSync(path);
  const text = readStepText(bytes.toString("latin1"));
  if (text.refusal !== null) throw new UnreadableModel(text.refusal);

  kernel.FS.writeFile(PLACE, bytes);
  const reader = new kernel.STEPControl_Reader();
  const status = reader.ReadFile(PLACE);
  kernel.FS.unlink(PLACE);
  if (status !== "IFSelect_RetDone") throw new UnreadableModel("is not a STEP file that can be read; save the part again as STEP (AP203, AP214 or AP242)");
  if (reader.NbRootsForTransfer() === 0) throw new UnreadableModel("holds no shape that can be read; save the part again as STEP, with its solid");
  reader.TransferRoots(new kernel.Message_ProgressRange());
  const shape = reader.OneShape();
  if (shape.IsNull()) return { text, solids: [], triangulated: [], looseFaces: [] };

  const { TopAbs_SOLID, TopAbs_FACE } = kernel.TopAbs_ShapeEnum;
  const all = partsOf(kernel, shape, TopAbs_SOLID);
  const solids = all.filter((solid) => partsOf(kernel, solid, TopAbs_FACE).every((face) => kernel.BRep_Tool.IsGeometric(kernel.TopoDS.Face(face))));
  return { text, solids, triangulated: all.filter((solid) => !solids.includes(solid)), looseFaces: partsOf(kernel, shape, TopAbs_FACE, TopAbs_SOLID) };
}
