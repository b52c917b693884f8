import type { TopoDS_Shape } from "replicad-opencascadejs";
import type { MeasureDocument, Vec3 } from "#app/geometry/measure-document.ts";
import { partsOf, type Kernel } from "./open-kernel.server.ts";

/**
 * Wanted relative error of the adaptive integration: it is watched on the volume alone, and at 1e-9
 * the inertia of a thin disc is still a thousandth off. The kernel's default integrator can be 1 % off.
 */
const RELATIVE_ERROR = 1e-12;

export type SolidMeasures = Pick<MeasureDocument, "bounds_mm" | "area_mm2" | "volume_mm3" | "centroid_mm" | "inertia_mm5">;

/** Exact measures of solids taken together, from their B-rep; overlaps count twice. */
export function measureSolids(kernel: Kernel, solids: TopoDS_Shape[], onSolid: (done: number) => void): SolidMeasures {
  const volume = new kernel.GProp_GProps();
  const box = new kernel.Bnd_Box();
  let area = 0;
  solids.forEach((solid, index) => {
    const own = new kernel.GProp_GProps();
    kernel.BRepGProp.VolumeProperties(solid, own, RELATIVE_ERROR, false, false);
    volume.Add(own, 1);
    const skin = new kernel.GProp_GProps();
    kernel.BRepGProp.SurfaceProperties(solid, skin, RELATIVE_ERROR, false);
    area += skin.Mass();
    kernel.BRepBndLib.AddOptimal(solid, box, false, false);
    onSolid(index + 1);
  });
  const centre = volume.CentreOfMass();
  const min = triple(box.CornerMin());
  const max = triple(box.CornerMax());
  return {
    bounds_mm: { min, max, size: [max[0] - min[0], max[1] - min[1], max[2] - min[2]] },
    area_mm2: area,
    volume_mm3: volume.Mass(),
    centroid_mm: triple(centre),
    inertia_mm5: inertiaAbout(kernel, volume, triple(centre)),
  };
}

/**
 * The tensor from moments about six axes, because the package has no binding for the kernel's
 * matrix: about (x + y)/√2 the moment is (Ixx + Iyy)/2 + Ixy.
 */
function inertiaAbout(kernel: Kernel, properties: InstanceType<Kernel["GProp_GProps"]>, [x, y, z]: Vec3): [Vec3, Vec3, Vec3] {
  const about = (dx: number, dy: number, dz: number) =>
    properties.MomentOfInertia(new kernel.gp_Ax1(new kernel.gp_Pnt(x, y, z), new kernel.gp_Dir(dx, dy, dz)));
  const [xx, yy, zz] = [about(1, 0, 0), about(0, 1, 0), about(0, 0, 1)];
  const xy = about(1, 1, 0) - (xx + yy) / 2;
  const xz = about(1, 0, 1) - (xx + zz) / 2;
  const yz = about(0, 1, 1) - (yy + zz) / 2;
  return [[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]];
}

/**
 * Does the kernel's own check find the solids sound?
 * @returns null when it does, else which face or edge fails first, as a sentence
 */
export function firstFault(kernel: Kernel, solids: TopoDS_Shape[]): string | null {
  const { TopAbs_FACE, TopAbs_EDGE } = kernel.TopAbs_ShapeEnum;
  for (const [index, solid] of solids.entries()) {
    const check = new kernel.BRepCheck_Analyzer(solid, true, false, false);
    if (check.IsValid()) continue;
    const which = solids.length > 1 ? ` of solid ${index + 1}` : "";
    for (const [kind, word] of [[TopAbs_EDGE, "edge"], [TopAbs_FACE, "face"]] as const) {
      const bad = partsOf(kernel, solid, kind).find((part) => !check.IsValid(part));
      if (bad) return `The solid is not valid: ${word}${which} near (${placeOf(kernel, bad)}) mm fails the geometry check. Repair it in the CAD program and save it again.`;
    }
    return `The solid is not valid: its faces${which} do not close it properly. Repair it in the CAD program and save it again.`;
  }
  return null;
}

function placeOf(kernel: Kernel, part: TopoDS_Shape): string {
  const box = new kernel.Bnd_Box();
  kernel.BRepBndLib.Add(part, box, false);
  if (box.IsVoid()) return "unknown place";
  const [min, max] = [triple(box.CornerMin()), triple(box.CornerMax())];
  return min.map((low, axis) => ((low + max[axis]!) / 2).toFixed(2)).join(", ");
}

/** A point or direction of the kernel as plain numbers. */
export function triple(point: { X(): number; Y(): number; Z(): number }): Vec3 {
  return [point.X(), point.Y(), point.Z()];
}
