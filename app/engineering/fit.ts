import { z } from "zod";
import { LENGTH_RESOLUTION_MM, lengthText } from "../units.ts";
import { anyNumber, atLeastZero, byDefault, CHECK_CAUTION, InputFault, pair, positive, type Calculation, type CalculationResult, type Step } from "./calculation.ts";
import { materialOf } from "./find-material.ts";
import { limitsOfClass } from "./limits-of-class.ts";
import type { Material } from "./tables/materials.ts";

/** Limits of size hold at this temperature (ISO 1). */
const REFERENCE_C = 20;
/** End of the tables of ISO 286 that classes are read from. */
const LARGEST_MM = 500;
/** The table's coefficients are mean values near room temperature; beyond this they say less. */
const FAR_FROM_ROOM_K = 100;

type Limits = [low: number, high: number];
type Side = "hole" | "shaft";

const className = (side: Side, example: string) =>
  z.string().trim().min(1, "give a class such as " + example).max(10, "a class is a letter and a grade").optional().meta({ description: `ISO 286 class of the ${side}, such as ${example}`, note: `Or give the limits of the ${side}` });
const materialName = (part: string) => z.string().trim().min(1, "name the material").optional().meta({ description: `material of ${part}, by its code`, note: "Needed away from 20 °C" });

const inputs = z.object({
  nominal_mm: positive("the nominal size", "mm", { most: 10_000 }),
  holeClass: className("hole", "H7"),
  shaftClass: className("shaft", "g6"),
  holeLimits_mm: pair("limits of the hole", "mm").optional(),
  shaftLimits_mm: pair("limits of the shaft", "mm").optional(),
  temperature_C: byDefault(anyNumber("the temperature in service", "°C", { least: -273.15, most: 1000 }), REFERENCE_C, "20 °C, ISO 1"),
  holeMaterial: materialName("the part with the hole"),
  shaftMaterial: materialName("the shaft"),
  holeCoating_mm: byDefault(atLeastZero("the growth of the hole's wall by coating, a side", "mm", { most: 2 }), 0, "no coating"),
  shaftCoating_mm: byDefault(atLeastZero("the growth of the shaft by coating, a side", "mm", { most: 2 }), 0, "no coating"),
  clearance_mm: pair("the wanted clearance; negative is interference", "mm").optional().meta({ description: "the wanted clearance; negative is interference", unit: "mm", note: "Left out, the result is information" }),
});

type Inputs = z.output<typeof inputs>;

const sources = ["ISO 286-1:2010, tables 1 to 5: standard tolerances and fundamental deviations", "ISO 1: limits of size hold at 20 °C"];

/**
 * What play or interference do hole and shaft have, at worst, warm and coated?
 *
 * Limits are those before coating, at 20 °C. A coating grows every wall by its thickness a side,
 * which a diameter meets twice; then both parts are taken as warm through, unloaded, and free to
 * grow: size × (1 + α ΔT). Positive clearance is play of the diameter.
 */
export const fit: Calculation<typeof inputs> = {
  kind: "fit",
  title: "Fit",
  question: "What play or interference do hole and shaft have at worst?",
  inputs,
  sources,
  run(given): CalculationResult {
    const hole = limitsOf("hole", given);
    const shaft = limitsOf("shaft", given);
    const rise = given.temperature_C - REFERENCE_C;
    const holeMaterial = materialAt("holeMaterial", given.holeMaterial, rise);
    const shaftMaterial = materialAt("shaftMaterial", given.shaftMaterial, rise);
    const holeGrowth = 1 + (holeMaterial?.expansion_per_K ?? 0) * rise;
    const shaftGrowth = 1 + (shaftMaterial?.expansion_per_K ?? 0) * rise;
    const grown = (limits: Limits, coating: number, growth: number): Limits => [(limits[0] + coating) * growth, (limits[1] + coating) * growth];
    const holeInService = grown(hole, -2 * given.holeCoating_mm, holeGrowth);
    const shaftInService = grown(shaft, 2 * given.shaftCoating_mm, shaftGrowth);
    if (!(holeInService[0] > 0)) throw new InputFault("holeCoating_mm", "this coating fills the hole");
    const clearance: Limits = [holeInService[0] - shaftInService[1], holeInService[1] - shaftInService[0]];
    const wanted = given.clearance_mm;
    const room = wanted ? Math.min(clearance[0] - wanted[0], wanted[1] - clearance[1]) : null;
    return {
      kind: "fit",
      verdict: room === null ? "information" : room >= -LENGTH_RESOLUTION_MM ? "pass" : "fail",
      room: room === null ? null : { value: room, unit: "mm" },
      results: {
        hole_mm: hole,
        shaft_mm: shaft,
        clearance_mm: clearance,
        fit: typeOfFit(clearance),
        holeInService_mm: holeInService,
        shaftInService_mm: shaftInService,
        nominal_mm: given.nominal_mm,
      },
      steps: [
        ...limitSteps("hole", hole, given),
        ...limitSteps("shaft", shaft, given),
        ...serviceSteps("hole", holeInService, given.holeCoating_mm, "−", holeMaterial, rise),
        ...serviceSteps("shaft", shaftInService, given.shaftCoating_mm, "+", shaftMaterial, rise),
        { name: "least clearance", value: clearance[0], unit: "mm", formula: "least hole − largest shaft" },
        { name: "largest clearance", value: clearance[1], unit: "mm", formula: "largest hole − least shaft" },
      ],
      remarks: remarksOn(given, clearance, rise),
      cautions: [CHECK_CAUTION, ...cautionsOn(rise, holeMaterial, shaftMaterial)],
      sources: [...sources, ...expansionSources(holeMaterial, shaftMaterial)],
    };
  },
};

/** ISO 286-1, definitions of clearance, interference and transition fit; a limit of nought is still its own kind. */
function typeOfFit([least, largest]: Limits): "clearance" | "transition" | "interference" {
  if (least >= -LENGTH_RESOLUTION_MM) return "clearance";
  return largest <= LENGTH_RESOLUTION_MM ? "interference" : "transition";
}

function limitsOf(side: Side, given: Inputs): Limits {
  const text = given[`${side}Class`];
  const limits = given[`${side}Limits_mm`];
  const nominal = given.nominal_mm;
  if (limits && text !== undefined) throw new InputFault(`${side}Class`, `give the class or the limits of the ${side}, not both`);
  if (limits) return checkedLimits(`${side}Limits_mm`, limits, nominal);
  if (text === undefined) throw new InputFault(`${side}Class`, `give the class of the ${side}, or its limits`);
  if (nominal > LARGEST_MM) throw new InputFault("nominal_mm", `the tables of ISO 286 used here end at ${LARGEST_MM} mm: give limits instead of ${text}`);
  const found = limitsOfClass(nominal, text);
  if (!found) throw new InputFault(`${side}Class`, `${text} at ${lengthText(nominal)} is outside the tables of ISO 286`);
  if (found.kind !== side) throw new InputFault(`${side}Class`, `${text} is the class of a ${found.kind}: a capital letter is a hole, a small one a shaft`);
  return checkedLimits(`${side}Class`, [found.lower_mm, found.upper_mm], nominal);
}

/** Limits far from the nominal size are deviations, or in another unit: they would be judged without a word. */
function checkedLimits(key: string, [low, high]: Limits, nominal: number): Limits {
  if (!(low > 0)) throw new InputFault(key, "limits are sizes, not deviations: they must be above zero");
  const far = Math.max(2, nominal / 5);
  if (Math.abs(low - nominal) > far || Math.abs(high - nominal) > far) throw new InputFault(key, `limits ${low} and ${high} are too far from the nominal ${lengthText(nominal)}: are they in another unit?`);
  return [low, high];
}

function materialAt(key: "holeMaterial" | "shaftMaterial", code: string | undefined, rise: number): Material | undefined {
  if (code === undefined && rise !== 0) throw new InputFault(key, "away from 20 °C the material decides: name it");
  const material = code === undefined ? undefined : materialOf(key, code);
  if (material && rise !== 0 && material.expansion_per_K === null) throw new InputFault(key, `no expansion is known for ${material.code}`);
  return rise === 0 ? undefined : material;
}

function limitSteps(side: Side, [low, high]: Limits, given: Inputs): Step[] {
  const text = given[`${side}Class`];
  const by = (deviation: number) => (text === undefined ? "as given" : `nominal ${deviation < 0 ? "−" : "+"} ${Number((Math.abs(deviation) * 1000).toFixed(1))} µm (${text})`);
  return [
    { name: `${side}, least`, value: low, unit: "mm", formula: by(low - given.nominal_mm) },
    { name: `${side}, largest`, value: high, unit: "mm", formula: by(high - given.nominal_mm) },
  ];
}

function serviceSteps(side: Side, [low, high]: Limits, coating: number, sign: "+" | "−", material: Material | undefined, rise: number): Step[] {
  if (coating === 0 && !material) return [];
  const coated = coating === 0 ? "size" : `(size ${sign} 2 × ${coating})`;
  const formula = material ? `${coated} × (1 + ${Number((material.expansion_per_K! * 1e6).toFixed(3))}·10⁻⁶/K × ${rise} K)` : coated;
  return [
    { name: `${side} in service, least`, value: low, unit: "mm", formula },
    { name: `${side} in service, largest`, value: high, unit: "mm", formula },
  ];
}

function remarksOn({ clearance_mm, temperature_C, holeCoating_mm, shaftCoating_mm }: Inputs, clearance: Limits, rise: number): string[] {
  const remarks: string[] = [];
  if (clearance_mm) {
    if (clearance[0] < clearance_mm[0] - LENGTH_RESOLUTION_MM) remarks.push(`the least clearance is ${lengthText(clearance_mm[0] - clearance[0])} below the ${lengthText(clearance_mm[0])} wanted`);
    if (clearance[1] > clearance_mm[1] + LENGTH_RESOLUTION_MM) remarks.push(`the largest clearance is ${lengthText(clearance[1] - clearance_mm[1])} above the ${lengthText(clearance_mm[1])} wanted`);
  }
  if (holeCoating_mm > 0 || shaftCoating_mm > 0) remarks.push("the limits are those before coating; a coating takes its thickness twice from a diameter");
  if (rise !== 0) remarks.push(`at ${temperature_C} °C both parts are taken as warm through and free to grow`);
  return remarks;
}

function cautionsOn(rise: number, hole: Material | undefined, shaft: Material | undefined): string[] {
  const cautions: string[] = [];
  if ((hole || shaft) && Math.abs(rise) > FAR_FROM_ROOM_K) cautions.push("Expansion is a mean value near room temperature: so far from it, take the supplier's.");
  if (rise !== 0 && hole?.code !== shaft?.code) cautions.push("While parts warm up or cool down unevenly the fit can be tighter than at either end.");
  return cautions;
}

function expansionSources(...parts: Array<Material | undefined>): string[] {
  return [...new Set(parts.filter((part) => part !== undefined).map((part) => `expansion of ${part.name}: ${part.source}`))];
}
