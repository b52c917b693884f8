import { z } from "zod";
import { atLeastZero, CHECK_CAUTION, InputFault, positive, words, type Calculation, type CalculationResult } from "./calculation.ts";
import { materials } from "./tables/materials.ts";
import { findThread, tensileStressArea } from "./thread-table.ts";

const inputs = z.object({
  thread: words("the thread, such as M6x1 or 1/4-20 UNC"),
  internalMaterial: z.string().optional().meta({ description: "material of the tapped part, by its code", note: "or give internalShear_MPa" }),
  internalShear_MPa: positive("the shear strength of the tapped part", "MPa").optional(),
  boltTensile_MPa: positive("the tensile strength of the bolt", "MPa"),
  boltShearRatio: positive("shear over tensile strength of the bolt", "").max(1, "must not be above 1").default(0.5).meta({ description: "shear over tensile strength of the bolt", unit: "", origin: "0.5, FED-STD-H28" }),
  engagement_mm: positive("full threads in contact, chamfers and run-out taken off", "mm"),
  load_N: atLeastZero("the load on one bolt", "N").optional(),
  safety: positive("stripping load over load", "").default(2).meta({ description: "least stripping load over load", unit: "", origin: "2, common practice, no source" }),
});

const sources = ["FED-STD-H28/2B and ASME B1.1 appendix B: shear areas of external and internal threads", "ISO 898-1 and NBS Handbook H28: tensile stress area", "ISO 965-1 (6g/6H), ASME B1.1 (2A/2B): limits of size"];

/**
 * Is the thread strong enough in this material, and does the bolt break before it strips?
 *
 * Shear areas at the worst limits of the classes 6g/6H or 2A/2B. Both threads are taken as
 * stripping on a cylinder at once over the whole engagement, as the standard does.
 */
export const threadEngagement: Calculation<typeof inputs> = {
  kind: "thread-engagement",
  title: "Thread engagement",
  question: "Is the thread strong enough in this material?",
  inputs,
  sources,
  run(given): CalculationResult {
    const thread = findThread(given.thread);
    if (!thread) throw new InputFault("thread", `${given.thread} is outside the table of threads`);
    const internalShear = shearOf(given);
    const { boltTensile_MPa, boltShearRatio, engagement_mm: length, load_N, safety } = given;

    const perThread = 1 / thread.pitch;
    const tensileArea = tensileStressArea(thread);
    const externalArea = Math.PI * perThread * length * thread.holeMinorMax * (thread.pitch / 2 + (thread.screwPitchMin - thread.holeMinorMax) / Math.sqrt(3));
    const internalArea = Math.PI * perThread * length * thread.screwMajorMin * (thread.pitch / 2 + (thread.screwMajorMin - thread.holePitchMax) / Math.sqrt(3));
    const boltBreak = tensileArea * boltTensile_MPa;
    const internalStrip = internalArea * internalShear;
    const externalStrip = externalArea * boltTensile_MPa * boltShearRatio;
    const strip = Math.min(internalStrip, externalStrip);
    const fullStrength = (length * boltBreak) / strip;
    const weakest = boltBreak <= strip ? "bolt" : internalStrip <= externalStrip ? "internal" : "external";

    // Written as a positive claim, with equality on the safe side of the limit counted as met.
    const limit = load_N !== undefined && load_N > 0 ? load_N * safety : boltBreak;
    const room = strip - limit;
    const passes = load_N !== undefined && load_N > 0 ? strip >= limit * (1 - 1e-12) : strip > limit;
    const ratio = length / thread.diameter;
    const remarks = [`${ratio.toFixed(2)} diameters of engagement; 2 to 2.5 in aluminium is common practice, no source`];
    if (length < thread.pitch) remarks.push("less than one turn is in contact: the formula says little about so few threads");
    if (given.internalMaterial !== undefined && given.internalShear_MPa === undefined && materials.find(({ code }) => code === given.internalMaterial)?.typical) {
      remarks.push("the strength of the tapped material is a typical value, not a minimum");
    }
    return {
      kind: "thread-engagement",
      verdict: passes ? "pass" : "fail",
      room: { value: room, unit: "N" },
      results: {
        tensileArea_mm2: tensileArea,
        internalShearArea_mm2: internalArea,
        externalShearArea_mm2: externalArea,
        boltBreak_N: boltBreak,
        internalStrip_N: internalStrip,
        externalStrip_N: externalStrip,
        fullStrengthEngagement_mm: fullStrength,
        engagementPerDiameter: ratio,
        weakest,
      },
      steps: [
        { name: "tensile stress area", value: tensileArea, unit: "mm²", formula: thread.system === "metric" ? "π/4 (d − 0.9382 P)²" : "π/4 (D − 0.9743/n)²" },
        { name: "shear area of the screw", value: externalArea, unit: "mm²", formula: "π n LE D1max [1/(2n) + (d2min − D1max)/√3]" },
        { name: "shear area of the tapped hole", value: internalArea, unit: "mm²", formula: "π n LE dmin [1/(2n) + (dmin − D2max)/√3]" },
        { name: "bolt breaks at", value: boltBreak, unit: "N", formula: "tensile area × tensile strength" },
        { name: "tapped hole strips at", value: internalStrip, unit: "N", formula: "shear area × shear strength of the part" },
        { name: "screw strips at", value: externalStrip, unit: "N", formula: "shear area × tensile strength × shear ratio" },
        { name: "engagement for full strength", value: fullStrength, unit: "mm", formula: "LE × bolt breaks / least stripping load" },
      ],
      remarks,
      cautions: [CHECK_CAUTION],
      sources,
    };
  },
};

function shearOf({ internalShear_MPa, internalMaterial }: z.output<typeof inputs>): number {
  if (internalShear_MPa !== undefined) return internalShear_MPa;
  if (internalMaterial === undefined) throw new InputFault("internalMaterial", "give the material of the tapped part, or its shear strength");
  const material = materials.find(({ code }) => code === internalMaterial);
  if (!material) throw new InputFault("internalMaterial", `${internalMaterial} is outside the table of materials`);
  if (material.shear_MPa === null) throw new InputFault("internalMaterial", `no shear strength is known for ${internalMaterial}: give internalShear_MPa`);
  return material.shear_MPa;
}
