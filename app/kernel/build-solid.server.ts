import type { Message_ProgressRange, TopoDS_Edge, TopoDS_Shape } from "replicad-opencascadejs";
import type { Vec3 } from "#app/geometry/measure-document.ts";
import { cross, dot, moved, square } from "#app/geometry/vec3.ts";
import { openKernel, partsOf, type Kernel } from "./open-kernel.server.ts";

/** A shape under construction; belongs to the builder that made it. */
export type Solid = TopoDS_Shape;

/** Two numbers a point: distance from the axis and height along it, mm. */
export type Profile = [radius: number, height: number][];

export interface SolidBuilder {
  /** From one corner, edges along x, y and z; lengths in mm here and below. */
  box(corner: Vec3, size: Vec3): Solid;
  /** From the centre of one end, in the direction of the axis. */
  cylinder(base: Vec3, axis: Vec3, radius: number, height: number): Solid;
  cone(base: Vec3, axis: Vec3, baseRadius: number, topRadius: number, height: number): Solid;
  /** A closed outline turned once around the axis through `base`. */
  revolve(base: Vec3, axis: Vec3, outline: Profile): Solid;
  /** A closed flat outline in the plane z = `height`, raised by `thickness`. */
  extrude(outline: [x: number, y: number][], height: number, thickness: number): Solid;
  cut(from: Solid, ...tools: Solid[]): Solid;
  fuse(first: Solid, ...others: Solid[]): Solid;
  translate(solid: Solid, by: Vec3): Solid;
  /** Breaks the edges that `which` picks by a point in their middle. */
  chamfer(solid: Solid, leg: number, which: (middle: Vec3) => boolean): Solid;
  fillet(solid: Solid, radius: number, which: (middle: Vec3) => boolean): Solid;
  /** A STEP file (AP214) in mm; the same bytes for the same shape. */
  toStep(solid: Solid, productName: string): Uint8Array;
  /** A binary STL in mm, no triangle further from the true surface than the chord. */
  toStl(solid: Solid, chord_mm: number): Uint8Array;
}

/** When every file we generate says it was written: a file must not change because the clock did. */
const WRITTEN = "2026-01-01T00:00:00";
const PLACE = "/built.step";
const FACET_ANGLE = 0.35;

/**
 * Opens a kernel in this process to build true solids with: for demo models and tests, whose
 * shapes are ours. Files of others are read elsewhere (run-kernel.server.ts).
 */
export async function openSolidBuilder(): Promise<SolidBuilder> {
  const kernel = await openKernel();
  const point = (at: Vec3) => new kernel.gp_Pnt(...at);
  const direction = (of: Vec3) => new kernel.gp_Dir(...of);
  const progress = () => new kernel.Message_ProgressRange();

  const builder: SolidBuilder = {
    box: (corner, size) => new kernel.BRepPrimAPI_MakeBox(point(corner), ...size).Shape(),
    cylinder: (base, axis, radius, height) => new kernel.BRepPrimAPI_MakeCylinder(new kernel.gp_Ax2(point(base), direction(axis)), radius, height).Shape(),
    cone: (base, axis, baseRadius, topRadius, height) =>
      builder.revolve(base, axis, [[0, 0], ...(baseRadius > 0 ? [[baseRadius, 0] as [number, number]] : []), ...(topRadius > 0 ? [[topRadius, height] as [number, number]] : []), [0, height]]),
    revolve(base, axis, outline) {
      const out = square(axis);
      const face = flatFace(kernel, outline.map(([radius, height]) => moved(moved(base, out, radius), axis, height)));
      return new kernel.BRepPrimAPI_MakeRevol(face, new kernel.gp_Ax1(point(base), direction(axis)), true).Shape();
    },
    extrude: (outline, height, thickness) =>
      new kernel.BRepPrimAPI_MakePrism(flatFace(kernel, outline.map(([x, y]) => [x, y, height])), new kernel.gp_Vec(0, 0, thickness), false, true).Shape(),
    cut: (from, ...tools) => tools.reduce((rest, tool) => new kernel.BRepAlgoAPI_Cut(rest, tool, progress()).Shape(), from),
    fuse: (first, ...others) => others.reduce((sum, other) => unified(kernel, new kernel.BRepAlgoAPI_Fuse(sum, other, progress()).Shape()), first),
    translate(solid, by) {
      const move = new kernel.gp_Trsf();
      move.SetTranslation(new kernel.gp_Vec(...by));
      // Geometry of its own, so that a file of it holds coordinates and no placement.
      return new kernel.BRepBuilderAPI_Transform(solid, move, true, false).Shape();
    },
    chamfer(solid, leg, which) {
      const chamfers = new kernel.BRepFilletAPI_MakeChamfer(solid);
      for (const edge of edgesWhere(kernel, solid, which)) chamfers.Add(leg, edge);
      return chamfers.Shape();
    },
    fillet(solid, radius, which) {
      const fillets = new kernel.BRepFilletAPI_MakeFillet(solid, kernel.ChFi3d_FilletShape.ChFi3d_Rational);
      for (const edge of edgesWhere(kernel, solid, which)) fillets.Add(radius, edge);
      return fillets.Shape();
    },
    toStep: (solid, productName) => writeStep(kernel, solid, productName, progress()),
    toStl: (solid, chord_mm) => writeStl(kernel, solid, chord_mm),
  };
  return builder;
}

function flatFace(kernel: Kernel, corners: Vec3[]): TopoDS_Shape {
  const wire = new kernel.BRepBuilderAPI_MakeWire();
  corners.forEach((corner, index) => {
    const next = corners[(index + 1) % corners.length]!;
    wire.Add(new kernel.BRepBuilderAPI_MakeEdge(new kernel.gp_Pnt(...corner), new kernel.gp_Pnt(...next)).Edge());
  });
  return new kernel.BRepBuilderAPI_MakeFace(wire.Wire(), true).Shape();
}

/** Without the seams that joining leaves on what is one face. */
function unified(kernel: Kernel, shape: TopoDS_Shape): TopoDS_Shape {
  const joined = new kernel.ShapeUpgrade_UnifySameDomain(shape, true, true, false);
  joined.Build();
  return joined.Shape();
}

function edgesWhere(kernel: Kernel, solid: TopoDS_Shape, which: (middle: Vec3) => boolean): TopoDS_Edge[] {
  const found: TopoDS_Edge[] = [];
  for (const part of partsOf(kernel, solid, kernel.TopAbs_ShapeEnum.TopAbs_EDGE)) {
    const edge = kernel.TopoDS.Edge(part);
    // Each edge comes once for each of its two faces.
    if (kernel.BRep_Tool.Degenerated(edge) || found.some((other) => other.IsSame(edge))) continue;
    const curve = new kernel.BRepAdaptor_Curve(edge);
    const middle = curve.Value((curve.FirstParameter() + curve.LastParameter()) / 2);
    if (which([middle.X(), middle.Y(), middle.Z()])) found.push(edge);
  }
  if (found.length === 0) throw new RangeError("no edge of the solid was picked");
  return found;
}

function writeStep(kernel: Kernel, solid: TopoDS_Shape, productName: string, progress: Message_ProgressRange): Uint8Array {
  const writer = new kernel.STEPControl_Writer();
  // Known only once a writer exists.
  kernel.Interface_Static.SetCVal("write.step.unit", "MM");
  writer.Transfer(solid, kernel.STEPControl_StepModelType.STEPControl_AsIs, true, progress);
  if (writer.Write(PLACE) !== "IFSelect_RetDone") throw new Error("the kernel could not write the solid as STEP");
  const text = kernel.FS.readFile(PLACE, { encoding: "utf8" }) as string;
  kernel.FS.unlink(PLACE);
  const name = partText(productName);
  let products = 0;
  // The kernel counts the products it has ever written into their names.
  const named = text.replace(/= PRODUCT\(\s*'(?:[^']|'')*'\s*,\s*'(?:[^']|'')*'/g, () => {
    products++;
    const own = products === 1 ? name : `${name} ${products}`;
    return `= PRODUCT('${own}','${own}'`;
  });
  const dated = named.replace(/FILE_NAME\([\s\S]*?\);/, () => `FILE_NAME('${name}.step','${WRITTEN}',(''),(''),'','','');`);
  return new TextEncoder().encode(dated);
}

/** As a text of Part 21: ASCII, the rest escaped. */
function partText(name: string): string {
  return name.replace(/'/g, "''").replace(/\\/g, "\\\\").replace(/[^ -~]+/g, (run) => `\\X2\\${[...Array(run.length).keys()].map((at) => run.charCodeAt(at).toString(16).toUpperCase().padStart(4, "0")).join("")}\\X0\\`);
}

function writeStl(kernel: Kernel, solid: TopoDS_Shape, chord_mm: number): Uint8Array {
  const mesh = kernel.ReplicadMeshExtractor.extract(solid, chord_mm, FACET_ANGLE, true);
  const places = new Float32Array(kernel.wasmMemory.buffer, mesh.getVerticesPtr(), mesh.getVerticesSize()).slice();
  const indices = new Uint32Array(kernel.wasmMemory.buffer, mesh.getTrianglesPtr(), mesh.getTrianglesSize()).slice();
  mesh.delete();
  const bytes = new Uint8Array(84 + (indices.length / 3) * 50);
  const view = new DataView(bytes.buffer);
  bytes.set(new TextEncoder().encode("binary STL, mm"));
  view.setUint32(80, indices.length / 3, true);
  const corner = (index: number): Vec3 => [places[index * 3]!, places[index * 3 + 1]!, places[index * 3 + 2]!];
  for (let i = 0, at = 84; i < indices.length; i += 3, at += 50) {
    const [a, b, c] = [corner(indices[i]!), corner(indices[i + 1]!), corner(indices[i + 2]!)];
    const normal = cross([b[0] - a[0], b[1] - a[1], b[2] - a[2]], [c[0] - a[0], c[1] - a[1], c[2] - a[2]]);
    const size = Math.sqrt(dot(normal, normal)) || 1;
    [...normal.map((part) => part / size), ...a, ...b, ...c].forEach((value, word) => view.setFloat32(at + word * 4, value, true));
  }
  return bytes;
}
