import type { GateLineName } from "#app/domain/gate-records.ts";

export type KitName = "plate" | "flange" | "rotor" | "bracket" | "housing";
export type StatedHazard = "speed_rpm" | "pressure_MPa" | "temperature_C" | "fluid";

/** What a kind of part usually asks for: a start, which the shop changes for each part. */
export interface Kit {
  kit: KitName;
  title: string;
  requiredLines: GateLineName[];
  requiredCalculations: Array<{ kind: string; hazard: "none" | "pressure" | "burst" }>;
  /** Must be known before such a part may be cut. */
  hazardsToState: StatedHazard[];
}

const allLines: GateLineName[] = ["model", "print", "fit", "calculations", "instructions", "machinist", "customer", "deposit", "cautions"];
const thread = { kind: "thread-engagement", hazard: "none" } as const;
const fit = { kind: "fit", hazard: "none" } as const;

/** Which calculation belongs to which kind of part: common practice, no source. */
export const kits: readonly Kit[] = [
  { kit: "plate", title: "Plate", requiredLines: allLines, requiredCalculations: [], hazardsToState: [] },
  { kit: "flange", title: "Flange", requiredLines: allLines, requiredCalculations: [thread], hazardsToState: ["fluid"] },
  { kit: "rotor", title: "Rotor", requiredLines: allLines, requiredCalculations: [fit], hazardsToState: ["speed_rpm"] },
  { kit: "bracket", title: "Bracket", requiredLines: allLines, requiredCalculations: [thread], hazardsToState: [] },
  { kit: "housing", title: "Housing", requiredLines: allLines, requiredCalculations: [thread, fit], hazardsToState: ["pressure_MPa", "temperature_C", "fluid"] },
];

/** The kit of this name; a name that is not known any more counts as a plate. */
export function findKit(name: string): Kit {
  return kits.find(({ kit }) => kit === name) ?? kits[0]!;
}
