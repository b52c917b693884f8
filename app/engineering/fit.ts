import { z } from "zod";
import { anyNumber, atLeastZero, CHECK_CAUTION, InputFault, pair, positive, type Calculation, type CalculationResult } from "./calculation.ts";
import { limitsOfClass } from "./limits-of-class.ts";
import { materials } from "./tables/materials.ts";

/** Limits of size hold at this temperature (ISO 1). */
const REFERENCE_C = 20;
/** Binary rounding of sums of decimals; a thousandth of a micrometre. */
const RESOLUTION_MM = 1e-6;

const className = (what: string) => z.string().trim().min(1).optional().meta({ description: `ISO 286 class of the ${what}, such as ${what === "hole" ? "H7" : "g6"}`, note: `or give ${what}Limits_mm` });

const inputs = z.object({
  nominal_mm: positive("the nominal size", "mm").max(500, "ISO 286 tables end at 500 mm"),
  holeClass: className("hole"),
  shaftClass: className("shaft"),
  holeLimits_mm: pair("limits of the hole", "mm").optional(),
  shaftLimits_mm: pair("limits of the shaft", "mm").optional(),
  temperature_C: anyNumber("the temperature in service", "°C").min(-273.15, "is below absolute zero").default(REFERENCE_C).meta({ description: "temperature in service", unit: "°C", origin: "20 °C, ISO 1" }),
  holeMaterial: z.string().optional().meta({ description: "material of the part with the hole, by its code" }),
  shaftMaterial: z.string().optional().meta({ description: "material of the shaft, by its code" }),
  holeCoating_mm: atLeastZero("growth of the hole's wall by coating, a side", "mm").default(0),
  shaftCoating_mm: atLeastZero("growth of the shaft by coating, a side", "mm").default(0),
  clearance_mm: pair("the wanted clearance; negative: interference", "mm").optional(),
});

const sources = ["ISO 286-1:2010, tables 1 to 5: tolerances and fundamental deviations", "ISO 1: sizes hold at 20 °C", "linear expansion: table of materials"];

/** What play or interference do hole and shaft have, at worst, warm and coated? */
export const fit: Calculation<typeof inputs> = {
  kind: "fit",
  title: "Fit",
  question: "What play or interference do hole and shaft have at worst?",
  inputs,
  sources,
  run(given): CalculationResult {
    const hole = sizeOf("hole", given.nominal_mm, given.holeClass, given.holeLimits_mm);
    const shaft = sizeOf("shaft", given.nominal_mm, given.shaftClass, given.shaftLimits_mm);
    const rise = given.temperature_C - REFERENCE_C;
    const grownHole = grow(hole, expansion("holeMaterial", given.holeMaterial, rise), rise, -2 * given.holeCoating_mm);
    const grownShaft = grow(shaft, expansion("shaftMaterial", given.shaftMaterial, rise), rise, 2 * given.shaftCoating_mm);
    const clearance: [number, number] = [grownHole[0] - grownShaft[1], grownHole[1] - grownShaft[0]];
    const kind = clearance[0] >= -RESOLUTION_MM ? "clearance" : clearance[1] <= RESOLUTION_MM ? "interference" : "transition";
    const wanted = given.clearance_mm;
    const room = wanted ? Math.min(clearance[0] - wanted[0], wanted[1] - clearance[1]) : null;
    const remarks = rise !== 0 && grownHole !== hole ? [`at ${given.temperature_C} °C, both parts taken as warm through`] : [];
    return {
      kind: "fit",
      verdict: room === null ? "information" : room >= -RESOLUTION_MM ? "pass" : "fail",
      room: room === null ? null : { value: room, unit: "mm" },
      results: { hole_mm: hole, shaft_mm: shaft, clearance_mm: clearance, fit: kind },
      steps: [
        { name: "hole, least", value: hole[0], unit: "mm", formula: "nominal + lower deviation" },
        { name: "hole, largest", value: hole[1], unit: "mm", formula: "nominal + upper deviation" },
        { name: "shaft, least", value: shaft[0], unit: "mm", formula: "nominal + lower deviation" },
        { name: "shaft, largest", value: shaft[1], unit: "mm", formula: "nominal + upper deviation" },
        { name: "least clearance", value: clearance[0], unit: "mm", formula: "least hole − largest shaft, in service" },
        { name: "largest clearance", value: clearance[1], unit: "mm", formula: "largest hole − least shaft, in service" },
      ],
      remarks,
      cautions: [CHECK_CAUTION],
      sources,
    };
  },
};

function sizeOf(what: "hole" | "shaft", nominal: number, text: string | undefined, limits: [number, number] | undefined): [number, number] {
  const key = `${what}Class`;
  if (limits) {
    if (text !== undefined) throw new InputFault(key, `give the class or the limits of the ${what}, not both`);
    if (limits[0] <= 0) throw new InputFault(`${what}Limits_mm`, "limits are sizes: they must be above zero");
    return limits;
  }
  if (text === undefined) throw new InputFault(key, `give the class of the ${what}, or its limits`);
  const found = limitsOfClass(nominal, text);
  if (found?.kind !== what) throw new InputFault(key, found ? `${text} is the class of a ${found.kind}` : `${nominal} ${text} is outside the tables of ISO 286`);
  return [found.lower_mm, found.upper_mm];
}

function expansion(key: "holeMaterial" | "shaftMaterial", code: string | undefined, rise: number): number {
  if (rise === 0) return 0;
  if (code === undefined) throw new InputFault(key, "away from 20 °C the material decides: name it");
  const material = materials.find((one) => one.code === code);
  if (!material) throw new InputFault(key, `${code} is outside the table of materials`);
  if (material.expansion_per_K === null) throw new InputFault(key, `no expansion is known for ${code}`);
  return material.expansion_per_K;
}

const grow = ([low, high]: [number, number], perK: number, rise: number, coating_mm: number): [number, number] => [low * (1 + perK * rise) + coating_mm, high * (1 + perK * rise) + coating_mm];
