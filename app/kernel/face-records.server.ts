import type { TopoDS_Edge, TopoDS_Face, TopoDS_Shape } from "replicad-opencascadejs";
import { cylinderThrough } from "#app/geometry/cylinder-in-disguise.ts";
import type { FaceRecord, FaceSide } from "#app/geometry/face-record.ts";
import type { Vec3 } from "#app/geometry/measure-document.ts";
import { dot, length, minus, moved, scaled, unit } from "#app/geometry/vec3.ts";
import { partsOf, type Kernel } from "./open-kernel.server.ts";
import { triple } from "./solid-measures.server.ts";

const KINDS: Partial<Record<string, FaceRecord["kind"]>> = {
  GeomAbs_Plane: "plane", GeomAbs_Cylinder: "cylinder", GeomAbs_Cone: "cone", GeomAbs_Torus: "torus", GeomAbs_Sphere: "sphere",
};
/** Of an arc, per point; of a curve without a name, points in all. */
const ARC_STEP = Math.PI / 8;
const CURVE_POINTS = 65;
const NONE: Vec3 = [0, 0, 0];
/** A cylinder thinner than this has no inside and no outside. */
const THINNEST_MM = 1e-7;

export type Surface = Pick<FaceRecord, "kind" | "origin" | "direction" | "radius_mm" | "concave">;

/** The faces of solids as plain numbers, edges that two faces share under one number. */
export function faceRecords(kernel: Kernel, solids: TopoDS_Shape[]): FaceRecord[] {
  const edges = numberedEdges(kernel);
  const { TopAbs_FACE, TopAbs_EDGE } = kernel.TopAbs_ShapeEnum;
  return solids.flatMap((solid, index) =>
    partsOf(kernel, solid, TopAbs_FACE).map((part): FaceRecord => {
      const face = kernel.TopoDS.Face(part);
      // Only triangles: there is no surface to ask.
      if (!kernel.BRep_Tool.IsGeometric(face)) return { solid: index, kind: "other", origin: NONE, direction: NONE, radius_mm: 0, concave: false, sides: [] };
      const surface = surfaceOf(kernel, face);
      const sides = partsOf(kernel, face, TopAbs_EDGE).flatMap((one): FaceSide[] => {
        const edge = kernel.TopoDS.Edge(one);
        if (kernel.BRep_Tool.Degenerated(edge)) return [];
        const { number, points } = edges(edge);
        const middle = points[points.length >> 1]!;
        const walked = edge.Orientation() === "TopAbs_REVERSED" ? [...points].reverse() : points;
        return [{ edge: number, points: walked, normal: normalAt(kernel, face, surface, middle) }];
      });
      return { solid: index, ...surface, sides };
    }),
  );
}

/**
 * Kind, place and sense of a face's surface.
 *
 * The package has no binding for the kernel's cones and tori, so axis and radii come from points
 * half a turn apart.
 */
export function surfaceOf(kernel: Kernel, face: TopoDS_Face): Surface {
  const surface = new kernel.BRepAdaptor_Surface(face, true);
  const kind = KINDS[surface.GetType()] ?? "other";
  const u = surface.FirstUParameter();
  const v = surface.FirstVParameter();
  const at = (atU: number, atV: number) => triple(surface.Value(atU, atV));
  const between = (a: Vec3, b: Vec3) => scaled([a[0] + b[0], a[1] + b[1], a[2] + b[2]], 0.5);
  const around = (atV: number) => between(at(0, atV), at(Math.PI, atV));
  const found = (origin: Vec3, direction: Vec3, radius_mm: number, concave: boolean): Surface => ({ kind, origin, direction, radius_mm, concave });
  // Does the outward normal point to the middle of the curve?
  const turnsIn = (middle: (point: Vec3) => Vec3, atV: number) => {
    const point = at(u, atV);
    return dot(outwardNormal(kernel, face, u, atV), minus(middle(point), point)) > 0;
  };
  switch (kind) {
    case "plane":
      return found(at(u, v), outwardNormal(kernel, face, u, v), 0, false);
    case "cylinder": {
      const origin = around(v);
      if (length(minus(at(0, v), origin)) < THINNEST_MM) return { ...found(origin, NONE, 0, false), kind: "other" };
      const direction = unit(minus(around(v + 1), origin));
      return found(origin, direction, length(minus(at(0, v), origin)), turnsIn((point) => onAxis(origin, direction, point), v));
    }
    case "cone": {
      const [low, high] = [around(v), around(v + 1)];
      const direction = unit(minus(high, low));
      const middle = (v + surface.LastVParameter()) / 2;
      return found(low, direction, 0, turnsIn((point) => onAxis(low, direction, point), middle));
    }
    case "sphere": {
      const origin = between(at(0, 0), at(Math.PI, 0));
      return found(origin, NONE, length(minus(at(0, 0), origin)), turnsIn(() => origin, (v + surface.LastVParameter()) / 2));
    }
    case "torus": {
      const origin = around(0);
      const tube = length(minus(at(0, 0), at(0, Math.PI))) / 2;
      const direction = unit(minus(around(Math.PI / 2), origin));
      // The middle of the tube beside this point.
      const tubeCentre = between(at(u, 0), at(u, Math.PI));
      return found(origin, direction, tube, turnsIn(() => tubeCentre, v));
    }
    default: {
      const grid = [0.03, 0.2, 0.4, 0.6, 0.8, 0.97];
      const places = grid.flatMap((i) => grid.map((j) => [u + (surface.LastUParameter() - u) * i, v + (surface.LastVParameter() - v) * j] as const));
      const points = places.map(([atU, atV]) => at(atU, atV));
      const normals = places.map(([atU, atV]) => outwardNormal(kernel, face, atU, atV));
      const cylinder = cylinderThrough(points, normals);
      if (!cylinder) return found(at(u, v), NONE, 0, false);
      const { origin, direction, radius_mm } = cylinder;
      return { kind: "cylinder", origin, direction, radius_mm, concave: dot(normals[0]!, minus(onAxis(origin, direction, points[0]!), points[0]!)) > 0 };
    }
  }
}

function onAxis(origin: Vec3, direction: Vec3, point: Vec3): Vec3 {
  return moved(origin, direction, dot(minus(point, origin), direction));
}

function outwardNormal(kernel: Kernel, face: TopoDS_Face, u: number, v: number): Vec3 {
  const point = new kernel.gp_Pnt();
  const normal = new kernel.gp_Vec();
  new kernel.BRepGProp_Face(face, false).Normal(u, v, point, normal);
  const found = triple(normal);
  return length(found) > 0 ? unit(found) : NONE;
}

/** Outward normal of a face at a point on it. */
function normalAt(kernel: Kernel, face: TopoDS_Face, surface: Surface, point: Vec3): Vec3 {
  if (surface.kind === "plane") return surface.direction;
  if (surface.kind === "cylinder") {
    const out = unit(minus(point, onAxis(surface.origin, surface.direction, point)));
    return surface.concave ? scaled(out, -1) : out;
  }
  const projected = new kernel.GeomAPI_ProjectPointOnSurf(new kernel.gp_Pnt(...point), kernel.BRep_Tool.Surface(face));
  if (projected.NbPoints() === 0) return NONE;
  const { U, V } = projected.LowerDistanceParameters(0, 0);
  return outwardNormal(kernel, face, U, V);
}

/** Gives every edge its number and its points, the same for every face that has it. */
function numberedEdges(kernel: Kernel): (edge: TopoDS_Edge) => { number: number; points: Vec3[] } {
  const byHash = new Map<number, { edge: TopoDS_Edge; number: number; points: Vec3[] }[]>();
  let count = 0;
  return (edge) => {
    const hash = kernel.ReplicadShapeHasher.HashCode(edge, 0x7fffffff);
    const bucket = byHash.get(hash) ?? [];
    byHash.set(hash, bucket);
    let known = bucket.find((other) => other.edge.IsSame(edge));
    if (!known) bucket.push((known = { edge, number: count++, points: pointsAlong(kernel, edge) }));
    return known;
  };
}

/** In the direction of the edge's own curve, its ends included. */
function pointsAlong(kernel: Kernel, edge: TopoDS_Edge): Vec3[] {
  const curve = new kernel.BRepAdaptor_Curve(edge);
  const [first, last] = [curve.FirstParameter(), curve.LastParameter()];
  const kind = curve.GetType();
  // Three for a line, so that there is one in the middle.
  const pieces = kind === "GeomAbs_Line" ? 2 : kind === "GeomAbs_Circle" ? Math.max(2, Math.ceil((last - first) / ARC_STEP)) : CURVE_POINTS - 1;
  const points: Vec3[] = [];
  for (let i = 0; i <= pieces; i++) {
    const point = curve.Value(first + ((last - first) * i) / pieces);
    points.push(triple(point));
    point.delete();
  }
  curve.delete();
  return points;
}
