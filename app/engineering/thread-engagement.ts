import { z } from "zod";
import { lengthText } from "../units.ts";
import { atLeastZero, byDefault, CHECK_CAUTION, COMMON_PRACTICE, InputFault, positive, words, type Calculation, type CalculationResult } from "./calculation.ts";
import { materialOf } from "./find-material.ts";
import { findThread, tensileStressArea, type Thread } from "./thread-table.ts";

/** No metal that is tapped or bolted is stronger. */
const STRONGEST_MPA = 3000;
/** Two forces nearer than this part of each other are one: the limit itself passes. */
const RELATIVE_RESOLUTION = 1e-9;

const inputs = z.object({
  thread: words("the thread, such as M6x1 or 1/4-20 UNC"),
  internalMaterial: z.string().trim().min(1, "name the material").optional().meta({ description: "material of the tapped part, by its code", note: "Or give the shear strength itself" }),
  internalShear_MPa: positive("the shear strength of the tapped part", "MPa", { most: STRONGEST_MPA }).optional().meta({ description: "the shear strength of the tapped part", unit: "MPa", note: "Given, it is taken instead of the material's" }),
  boltTensile_MPa: positive("the least tensile strength of the bolt", "MPa", { most: STRONGEST_MPA }),
  boltShearRatio: byDefault(positive("the shear strength of the bolt, as a share of its tensile strength", "", { most: 1 }), 0.5, "0.5, FED-STD-H28"),
  engagement_mm: positive("the full threads in contact, chamfers and run-out taken off", "mm", { most: 500 }),
  load_N: atLeastZero("the load on one bolt", "N", { most: 1e7 }).optional().meta({ description: "the load on one bolt", unit: "N", note: "Left out or 0: the bolt must break before a thread strips" }),
  safety: byDefault(positive("the least stripping load over load", "", { most: 100 }), 2, `2, ${COMMON_PRACTICE}`),
});

type Inputs = z.output<typeof inputs>;

const sources = [
  "FED-STD-H28/2B and ASME B1.1 appendix B: shear areas of external and internal threads",
  "ISO 898-1 (metric) and NBS Handbook H28 (unified): tensile stress area",
  "ISO 965-1 (6g/6H) and ASME B1.1 (2A/2B): limits of size",
];

/**
 * Is the thread strong enough in this material, and does the bolt break before it strips?
 *
 * Shear areas at the worst limits of the classes 6g/6H or 2A/2B: the least screw in the largest
 * tapped hole. Each thread is taken as shearing on a cylinder over the whole engagement at once,
 * as the standard does.
 */
export const threadEngagement: Calculation<typeof inputs> = {
  kind: "thread-engagement",
  title: "Thread engagement",
  question: "Is the thread strong enough in this material?",
  inputs,
  sources,
  run(given): CalculationResult {
    const thread = findThread(given.thread);
    if (!thread) throw new InputFault("thread", `${given.thread} is outside the table of threads: M2 to M24, #4 to 1 inch UNC and UNF`);
    const internal = internalShearOf(given);
    const areas = shearAreas(thread);
    const { boltTensile_MPa, boltShearRatio, engagement_mm: length, safety } = given;

    const tensileArea = tensileStressArea(thread);
    const externalArea = areas.externalPerMm * length;
    const internalArea = areas.internalPerMm * length;
    const boltBreak = tensileArea * boltTensile_MPa;
    const internalStrip = internalArea * internal.shear_MPa;
    const externalStrip = externalArea * boltTensile_MPa * boltShearRatio;
    const strip = Math.min(internalStrip, externalStrip);
    const fullStrength = (length * boltBreak) / strip;
    const boltFirst = atLeast(strip, boltBreak);
    const weakest = boltFirst ? "bolt" : internalStrip <= externalStrip ? "internal" : "external";
    const load = given.load_N === undefined || given.load_N === 0 ? undefined : given.load_N;
    const limit = load === undefined ? boltBreak : load * safety;
    const strengthRatio = externalStrip / internalStrip;

    return {
      kind: "thread-engagement",
      verdict: atLeast(strip, limit) ? "pass" : "fail",
      room: { value: strip - limit, unit: "N" },
      results: {
        tensileArea_mm2: tensileArea,
        internalShearArea_mm2: internalArea,
        externalShearArea_mm2: externalArea,
        boltBreak_N: boltBreak,
        internalStrip_N: internalStrip,
        externalStrip_N: externalStrip,
        fullStrengthEngagement_mm: fullStrength,
        engagementPerDiameter: length / thread.diameter,
        weakest,
        strengthRatio,
        thread: thread.designation,
        diameter_mm: thread.diameter,
        pitch_mm: thread.pitch,
        engagement_mm: length,
      },
      steps: [
        { name: "shear strength of the tapped part", value: internal.shear_MPa, unit: "MPa", formula: internal.origin },
        { name: "least pitch diameter of the screw", value: thread.screwPitchMin, unit: "mm", formula: `d2min, class ${thread.screwClass}` },
        { name: "least major diameter of the screw", value: thread.screwMajorMin, unit: "mm", formula: `dmin, class ${thread.screwClass}` },
        { name: "largest minor diameter of the tapped hole", value: thread.holeMinorMax, unit: "mm", formula: `D1max, class ${thread.holeClass}` },
        { name: "largest pitch diameter of the tapped hole", value: thread.holePitchMax, unit: "mm", formula: `D2max, class ${thread.holeClass}` },
        { name: "tensile stress area", value: tensileArea, unit: "mm²", formula: thread.system === "metric" ? "π/4 (d − 0.9382 P)²" : "π/4 (D − 0.9743/n)²" },
        { name: "shear area of the screw", value: externalArea, unit: "mm²", formula: "π n LE D1max [1/(2n) + (d2min − D1max)/√3]" },
        { name: "shear area of the tapped hole", value: internalArea, unit: "mm²", formula: "π n LE dmin [1/(2n) + (dmin − D2max)/√3]" },
        { name: "bolt breaks at", value: boltBreak, unit: "N", formula: "tensile stress area × tensile strength" },
        { name: "tapped hole strips at", value: internalStrip, unit: "N", formula: "its shear area × shear strength of the part" },
        { name: "screw strips at", value: externalStrip, unit: "N", formula: "its shear area × tensile strength × shear ratio" },
        { name: "screw strips over tapped hole strips", value: strengthRatio, unit: "", formula: "J of FED-STD-H28/2B; above 1 the tapped part is the weaker" },
        { name: "engagement for full strength", value: fullStrength, unit: "mm", formula: "LE × bolt breaks / lower stripping load" },
        load === undefined
          ? { name: "a thread must hold", value: limit, unit: "N", formula: "the bolt must break first" }
          : { name: "a thread must hold", value: limit, unit: "N", formula: "load × safety" },
      ],
      remarks: remarksOn(given, thread, load),
      cautions: [CHECK_CAUTION, ...cautionsOn(internal.typical, thread, length, limit, boltBreak)],
      sources: internal.source ? [...sources, `shear strength: ${internal.source}`] : sources,
    };
  },
};

const atLeast = (value: number, limit: number) => value >= limit * (1 - RELATIVE_RESOLUTION);

/**
 * Shear areas of a thread pair for a millimetre of engagement, mm²/mm, at the worst limits.
 *
 * FED-STD-H28/2B: external π n D1max [1/(2n) + (d2min − D1max)/√3], internal
 * π n dmin [1/(2n) + (dmin − D2max)/√3], with n threads a unit of length. Some printed copies
 * have dmin in the first or 1/(1/n) in the second: both are misprints.
 */
export function shearAreas({ pitch, holeMinorMax, screwPitchMin, screwMajorMin, holePitchMax }: Thread) {
  const perThread = Math.PI / pitch;
  return {
    externalPerMm: perThread * holeMinorMax * (pitch / 2 + (screwPitchMin - holeMinorMax) / Math.sqrt(3)),
    internalPerMm: perThread * screwMajorMin * (pitch / 2 + (screwMajorMin - holePitchMax) / Math.sqrt(3)),
  };
}

interface InternalShear {
  shear_MPa: number;
  origin: string;
  source?: string;
  typical: boolean;
}

function internalShearOf({ internalShear_MPa, internalMaterial }: Inputs): InternalShear {
  const material = internalMaterial === undefined ? undefined : materialOf("internalMaterial", internalMaterial);
  if (internalShear_MPa !== undefined) return { shear_MPa: internalShear_MPa, origin: "as given", typical: false };
  if (!material) throw new InputFault("internalMaterial", "give the material of the tapped part, or its shear strength");
  if (material.shear_MPa === null) throw new InputFault("internalMaterial", `no shear strength is known for ${material.code}: give internalShear_MPa`);
  return { shear_MPa: material.shear_MPa, origin: `${material.name}, table of materials`, source: material.source, typical: material.typical };
}

function remarksOn({ engagement_mm, internalMaterial, internalShear_MPa }: Inputs, thread: Thread, load: number | undefined): string[] {
  const remarks = [`${(engagement_mm / thread.diameter).toFixed(2)} diameters of engagement; 2 to 2.5 in aluminium is ${COMMON_PRACTICE}`];
  if (internalMaterial !== undefined && internalShear_MPa !== undefined) remarks.push(`the shear strength given was taken, not that of ${internalMaterial}`);
  if (load === undefined) remarks.push("no load was given: judged by whether the bolt breaks before a thread strips");
  return remarks;
}

function cautionsOn(typical: boolean, { pitch }: Thread, length: number, limit: number, boltBreak: number): string[] {
  const cautions: string[] = [];
  if (typical) cautions.push("The strength of the tapped material is a typical value, not a minimum: take the mill certificate's where strength decides.");
  if (!atLeast(boltBreak, limit)) cautions.push(`The bolt itself breaks at ${Math.round(boltBreak)} N, before the ${Math.round(limit)} N that the threads are asked to hold.`);
  if (length < 3 * pitch) cautions.push(`Only ${(length / pitch).toFixed(1)} turns are in contact over ${lengthText(length)}: the formula says little about so few threads.`);
  return cautions;
}
