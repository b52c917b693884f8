import { openSolidBuilder, type Solid, type SolidBuilder } from "#app/kernel/build-solid.server.ts";

export interface DemoModel {
  name: string;
  step: Uint8Array;
  stl: Uint8Array;
}

type Build = (b: SolidBuilder) => Solid;

const up: [number, number, number] = [0, 0, 1];
const polar = (radius: number, degrees: number): [number, number] => [radius * Math.cos((degrees * Math.PI) / 180), radius * Math.sin((degrees * Math.PI) / 180)];

/** Through holes along z on these centres, each longer than the part. */
const drill = (b: SolidBuilder, centres: Array<[number, number]>, diameter: number, from = -1, to = 60) => centres.map(([x, y]) => b.cylinder([x, y, from], up, diameter / 2, to - from));

/** The filler flange: a disc with a spigot, a bore and six holes that the tank ring gives. */
const fillerFlange = (holes: Array<[number, number]>, { holeDiameter, bore, spigot }: { holeDiameter: number; bore: number; spigot: number }): Build => (b) => {
  const body = b.fuse(b.cylinder([0, 0, 0], up, 65.5, 10), b.cylinder([0, 0, 10], up, spigot / 2, 28));
  return b.cut(body, b.cylinder([0, 0, -1], up, bore / 2, 60), ...drill(b, holes, holeDiameter));
};

/** As read by caliper at first, and as corrected: holes 3 and 4 were misread. */
const misread: Array<[number, number]> = [polar(56, 12), polar(56, 74), polar(55.1, 131), polar(56.8, 190), polar(56, 251), polar(56, 312)];
const corrected: Array<[number, number]> = [polar(56, 12), polar(56, 74), polar(56, 132.5), polar(56, 191), polar(56, 251), polar(56, 312)];

/** The sprocket carrier: a centring bore, a bolt circle of five and two dowels. */
const sprocketCarrier = ({ bore, bolt, dowel, thickness }: { bore: number; bolt: number; dowel: number; thickness: number }): Build => (b) => {
  const body = b.fuse(b.cylinder([0, 0, 0], up, 70, thickness), b.cylinder([0, 0, thickness], up, 42, 12));
  const bolts = [0, 1, 2, 3, 4].map((i) => polar(57, 90 + i * 72));
  return b.cut(body, b.cylinder([0, 0, -1], up, bore / 2, 60), ...drill(b, bolts, bolt), ...drill(b, [polar(57, 54), polar(57, 198)], dowel));
};

/** The steering-damper bracket: a block with a clamp bore, two tapped holes and two clearance holes. */
const damperBracket = ({ clamp, tapDepth, foot }: { clamp: number; tapDepth: number; foot: number }): Build => (b) => {
  const block = b.fuse(b.box([-40, -20, 0], [80, 40, 14]), b.box([-16, -20, 14], [32, 40, foot]));
  const across: [number, number, number] = [0, 1, 0];
  return b.cut(block, b.cylinder([0, -30, 14 + foot / 2], across, clamp / 2, 60), ...drill(b, [[-30, 0], [30, 0]], 6.6), b.cylinder([-20, 0, 14], [0, 0, -1], 2.5, tapDepth), b.cylinder([20, 0, 14], [0, 0, -1], 2.5, tapDepth));
};

const flange = (holes: Array<[number, number]>, spigot: number) => fillerFlange(holes, { holeDiameter: 5.5, bore: 50, spigot });

const builds: Record<string, Build> = {
  "filler-flange-1": flange(misread, 62.0),
  "filler-flange-2": flange(corrected, 62.0),
  "filler-flange-3": flange(corrected.map(([x, y]) => [y, x]), 62.0),
  "filler-flange-4": flange(corrected, 61.85),
  "sprocket-carrier-1": sprocketCarrier({ bore: 39.9, bolt: 8.2, dowel: 5.9, thickness: 10 }),
  "sprocket-carrier-2": sprocketCarrier({ bore: 40.0, bolt: 8.4, dowel: 6.0, thickness: 10 }),
  "sprocket-carrier-3": sprocketCarrier({ bore: 40.0, bolt: 8.4, dowel: 6.0, thickness: 12 }),
  "damper-bracket-1": damperBracket({ clamp: 22.0, tapDepth: 10, foot: 30 }),
  "damper-bracket-2": damperBracket({ clamp: 22.2, tapDepth: 12, foot: 30 }),
  "damper-bracket-3": damperBracket({ clamp: 22.2, tapDepth: 12.5, foot: 34 }),
};

/** Builds the demo's models with the geometry kernel, as true STEP and as STL for printing. */
export async function buildDemoModels(): Promise<Map<string, DemoModel>> {
  const builder = await openSolidBuilder();
  return new Map(
    Object.entries(builds).map(([name, build]) => {
      const solid = build(builder);
      return [name, { name, step: builder.toStep(solid, name), stl: builder.toStl(solid, 0.05) }];
    }),
  );
}
