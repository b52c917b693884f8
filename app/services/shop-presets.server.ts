import { addInstrument, type InstrumentValues } from "#app/data/instruments.server.ts";
import { addMaterial } from "#app/data/materials.server.ts";
import { addPreset, addPrinter, type PresetValues } from "#app/data/printers.server.ts";
import { addQuestion } from "#app/data/questions.server.ts";
import type { Tx } from "#app/data/scope.server.ts";
import { isTableEmpty } from "#app/data/equipment.server.ts";
import { materials } from "#app/engineering/tables/materials.ts";

const unverified = { trust: "unverified", calibratedUntil: null, checkedOn: null, checkedWith: "" } as const;

/**
 * What a small shop usually has at the bench, with an uncertainty on the careful side: common
 * practice, no source. Nobody has checked them yet, and so they are shown.
 */
const instruments: readonly InstrumentValues[] = [
  { name: "Caliper 150", kind: "caliper", resolutionMm: 0.01, uncertaintyMm: 0.03, ...unverified },
  { name: "Micrometer 0-25", kind: "micrometer", resolutionMm: 0.001, uncertaintyMm: 0.004, ...unverified },
  { name: "Micrometer 25-50", kind: "micrometer", resolutionMm: 0.001, uncertaintyMm: 0.005, ...unverified },
  { name: "Bore gauge 35-60", kind: "bore gauge", resolutionMm: 0.01, uncertaintyMm: 0.01, ...unverified },
  { name: "Depth gauge 200", kind: "depth gauge", resolutionMm: 0.01, uncertaintyMm: 0.03, ...unverified },
  { name: "Gauge pins", kind: "gauge pins", resolutionMm: 0.01, uncertaintyMm: 0.005, ...unverified },
];

/** Settings to begin with: common practice, no source; the shop's own prints correct the scale. */
const asModelled = { scaleX: 1, scaleY: 1, scaleZ: 1 };
const presets: readonly Omit<PresetValues, "printerId">[] = [
  { name: "Fit check", material: "PETG", layerMm: 0.16, walls: 4, infillPct: 30, ...asModelled, note: "Slow outer wall; let it cool on the bed." },
  { name: "Quick shape", material: "PLA", layerMm: 0.28, walls: 3, infillPct: 15, ...asModelled, note: "For room and clocking, not for bores." },
];

const questions = [
  "Can the smallest inside corner be cut?",
  "Can every hole and thread be reached with your tools?",
  "Can the stated tolerances be held on your machine?",
  "Can it be held for every side that is cut, and may the clamping leave marks?",
  "Can you get the stock in this grade and size?",
];

/** Gives a new shop its instruments, printer, presets, materials and questions. What a shop has one of already is left as it is. */
export async function givePresets(tx: Tx, shopId: string): Promise<void> {
  if (await isTableEmpty(tx, "instruments")) for (const instrument of instruments) await addInstrument(tx, shopId, instrument);
  if (await isTableEmpty(tx, "printers")) {
    const printerId = await addPrinter(tx, shopId, { name: "Bench printer", process: "filament", bedMm: "220 × 220 × 250" });
    for (const preset of presets) await addPreset(tx, shopId, { ...preset, printerId });
  }
  if (await isTableEmpty(tx, "materials")) {
    for (const { code, name, density_kg_m3, yield_MPa, tensile_MPa, shear_MPa, typical, source } of materials) {
      await addMaterial(tx, shopId, { code, name, densityKgM3: density_kg_m3, yieldMPa: yield_MPa, tensileMPa: tensile_MPa, shearMPa: shear_MPa, typical, source });
    }
  }
  if (await isTableEmpty(tx, "makeability_questions")) for (const question of questions) await addQuestion(tx, shopId, question);
}
