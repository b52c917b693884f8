import type { CharacteristicValues } from "#app/data/characteristics.server.ts";
import type { PartValues } from "#app/data/parts.server.ts";

export interface ToldTry {
  results: Record<string, number[] | boolean>;
  cause?: "design" | "print" | "misread";
  remarks: string;
  photo: { title: string; holes: number; light: string };
}

export interface ToldRevision {
  model: string;
  reason: string;
  /** Ordinal of the parent; none for the first. */
  parent?: number;
  branch?: string;
  setAside?: string;
  tries: ToldTry[];
}

export interface ToldPart {
  part: Omit<PartValues, "materialId" | "requiredLines" | "requiredCalculations"> & { material: string };
  hardware: { name: string; description: string; conditionIn: string; measured: Record<string, number> };
  characteristics: Array<Partial<CharacteristicValues> & Pick<CharacteristicValues, "name" | "kind">>;
  revisions: ToldRevision[];
  instructions: { datums: string; criticalSurfaces: string; coating: string; treatments: (label: string) => { treatment: "tap" | "clearance" | "ream" | "leave"; spec: string } };
  calculations: Array<{ kind: string; title: string; inputs: Record<string, unknown> }>;
  machinist: "agrees" | "silent";
  customer: "clicks" | "texts";
  end: "at the gate" | "released" | "released with a concession";
}

const none = { speedRpm: null, pressureMPa: null, temperatureC: null, fluid: null, lifting: false };
const pale = "#dfe3e2";
const blue = "#c3d4e2";

/** Three invented parts of an invented racing sidecar: ten revisions, and why each exists. */
export const demoParts: ToldPart[] = [
  {
    part: { ...none, number: "2026-001-01", name: "Filler flange", kit: "flange", quantity: 1, fluid: "fuel", material: "6061-T6" },
    hardware: { name: "Tank ring", description: "Hand-made ring on the fuel tank, six studs", conditionIn: "One stud bent, paint nicked at the hinge side", measured: { "Ring bore": 62.14, "Stud circle, over studs 1 and 4": 118.02 } },
    characteristics: [
      { name: "Drops over all studs", kind: "yes-no", question: "Does it drop on by hand over all six studs?", photoRequired: true },
      { name: "Spigot in the ring", kind: "limits", nominalMm: 61.85, lowerMm: 61.8, upperMm: 61.86, printLowerMm: 61.7, printUpperMm: 61.95, places: 3, method: "caliper, three places round", critical: true },
      { name: "Hinge points to the rear", kind: "yes-no", question: "Does the cap's hinge point to the rear?" },
    ],
    revisions: [
      { model: "filler-flange-1", reason: "From the caliper readings", tries: [{ results: { "Drops over all studs": false, "Spigot in the ring": [62.02, 62.03, 62.02] }, cause: "misread", remarks: "Holes 3 and 4 miss their studs by more than a millimetre: misread on the ring", photo: { title: "Print 1.1 on the tank ring: holes 3 and 4", holes: 6, light: pale } }] },
      { model: "filler-flange-2", reason: "Pattern corrected, holes 3 and 4 measured again", parent: 1, tries: [{ results: { "Drops over all studs": true, "Spigot in the ring": [62.01, 62.02, 62.02], "Hinge points to the rear": true }, cause: "design", remarks: "Drops on, but the spigot binds in the ring", photo: { title: "Print 2.1: spigot binds", holes: 6, light: blue } }] },
      { model: "filler-flange-3", reason: "Hinge towards the rider", parent: 2, branch: "hinge to rider", setAside: "The rider's knee touches the cap", tries: [] },
      { model: "filler-flange-4", reason: "Spigot taken down by 0.15", parent: 2, tries: [{ results: { "Drops over all studs": true, "Spigot in the ring": [61.86, 61.84, 61.87], "Hinge points to the rear": true }, remarks: "Drops on by hand, even blue all round the land", photo: { title: "Print 4.1 fits", holes: 6, light: blue } }] },
    ],
    instructions: { datums: "A: sealing face, B: spigot", criticalSurfaces: "Sealing face Ra 1.6, no scratch across it", coating: "clear anodised", treatments: (label) => (label.includes("5.50") ? { treatment: "clearance", spec: "M5" } : { treatment: "leave", spec: "" }) },
    calculations: [{ kind: "thread-engagement", title: "Studs in the ring", inputs: { thread: "M5x0.8", internalMaterial: "6061-T6", boltTensile_MPa: 700, engagement_mm: 12, load_N: 900 } }],
    machinist: "agrees",
    customer: "clicks",
    end: "at the gate",
  },
  {
    part: { ...none, number: "2026-001-02", name: "Sprocket carrier", kit: "rotor", quantity: 2, speedRpm: 3200, material: "7075-T6" },
    hardware: { name: "Rear hub", description: "Hub with centring spigot, five M8 and two dowels", conditionIn: "Clean, spigot bright", measured: { "Spigot diameter": 39.96, "Bolt circle": 114.01 } },
    characteristics: [
      { name: "All screws start", kind: "yes-no", question: "Do all five screws start by hand with both dowels in?", photoRequired: true },
      { name: "Centring bore", kind: "limits", nominalMm: 40, lowerMm: 40, upperMm: 40.025, printLowerMm: 39.95, printUpperMm: 40.1, places: 3, method: "bore gauge, three places", critical: true },
    ],
    revisions: [
      { model: "sprocket-carrier-1", reason: "First model, from the hub", tries: [{ results: { "All screws start": false, "Centring bore": [39.88, 39.87, 39.88] }, cause: "design", remarks: "Dowels do not enter and the bore is tight", photo: { title: "Print 1.1: dowels do not enter", holes: 7, light: pale } }] },
      { model: "sprocket-carrier-2", reason: "Bore and dowel holes opened", parent: 1, tries: [{ results: { "All screws start": true, "Centring bore": [40.02, 40.03, 40.02] }, remarks: "Goes on; the flange flexes when the chain is pulled", photo: { title: "Print 2.1 on the hub", holes: 7, light: blue } }] },
      { model: "sprocket-carrier-3", reason: "Two millimetres thicker against flexing", parent: 2, tries: [{ results: { "All screws start": true, "Centring bore": [40.02, 40.01, 40.03] }, remarks: "Stiff, runs true by eye", photo: { title: "Print 3.1 on the hub", holes: 7, light: blue } }] },
    ],
    instructions: { datums: "A: hub face, B: centring bore", criticalSurfaces: "Hub face flat within 0.02, bore H7", coating: "hard anodised, bore masked", treatments: (label) => (label.includes("8.40") ? { treatment: "clearance", spec: "M8" } : label.includes("6.00") ? { treatment: "ream", spec: "6 H7" } : { treatment: "leave", spec: "bore 40 H7" }) },
    calculations: [{ kind: "fit", title: "Bore on the hub spigot", inputs: { nominal_mm: 40, holeClass: "H7", shaftLimits_mm: [39.95, 39.96], clearance_mm: [0.02, 0.09] } }],
    machinist: "silent",
    customer: "clicks",
    end: "released with a concession",
  },
  {
    part: { ...none, number: "2026-001-03", name: "Steering-damper bracket", kit: "bracket", quantity: 1, material: "6061-T6" },
    hardware: { name: "Frame tube with damper", description: "Front frame tube and the damper's clamp ring", conditionIn: "Damper leaks a little at the rod", measured: { "Clamp ring, outside": 22.04, "Foot holes, centre to centre": 60.02 } },
    characteristics: [
      { name: "Foot lies flat", kind: "yes-no", question: "Does the foot lie flat on the frame plate?", photoRequired: true },
      { name: "Clamp bore", kind: "limits", nominalMm: 22.2, lowerMm: 22.15, upperMm: 22.25, printLowerMm: 22.1, printUpperMm: 22.4, places: 2, method: "caliper, both ends" },
    ],
    revisions: [
      { model: "damper-bracket-1", reason: "First model, from the damper", tries: [{ results: { "Foot lies flat": true, "Clamp bore": [21.93, 21.92] }, cause: "print", remarks: "The clamp ring does not enter: shrinkage not allowed for", photo: { title: "Print 1.1: clamp too tight", holes: 4, light: pale } }] },
      { model: "damper-bracket-2", reason: "Clamp bore opened by 0.2, threads deeper", parent: 1, tries: [{ results: { "Foot lies flat": true, "Clamp bore": [22.18, 22.17] }, remarks: "Enters; the damper's rod touches the tube at full lock", photo: { title: "Print 2.1: rod touches at full lock", holes: 4, light: blue } }] },
      { model: "damper-bracket-3", reason: "Raised by 4 mm, the rod clears at full lock", parent: 2, tries: [{ results: { "Foot lies flat": true, "Clamp bore": [22.19, 22.18] }, remarks: "Clears by a finger at full lock", photo: { title: "Print 3.1 at full lock", holes: 4, light: blue } }] },
    ],
    instructions: { datums: "A: foot, B: clamp bore", criticalSurfaces: "none", coating: "none", treatments: (label) => (label.includes("6.60") ? { treatment: "clearance", spec: "M6" } : label.includes("5.00") ? { treatment: "tap", spec: "M6x1" } : { treatment: "leave", spec: "" }) },
    calculations: [{ kind: "thread-engagement", title: "Clamp screws in the bracket", inputs: { thread: "M6x1", internalMaterial: "6061-T6", boltTensile_MPa: 800, engagement_mm: 11, load_N: 2500 } }],
    machinist: "agrees",
    customer: "texts",
    end: "released",
  },
];
