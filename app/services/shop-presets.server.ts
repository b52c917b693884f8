import type { Tx } from "#app/data/scope.server.ts";
import { materials } from "#app/engineering/tables/materials.ts";

// Where a new shop begins: what most benches have, to be changed or set aside. Resolution and
// uncertainty of hand tools as in their makers' data sheets usually stand: common practice, no source.
const instruments = [
  { name: "Caliper 0-150", kind: "caliper", resolution_mm: 0.01, uncertainty_mm: 0.03 },
  { name: "Micrometer 0-25", kind: "micrometer", resolution_mm: 0.001, uncertainty_mm: 0.004 },
  { name: "Bore gauge 50-75", kind: "bore gauge", resolution_mm: 0.001, uncertainty_mm: 0.006 },
  { name: "Depth gauge 0-150", kind: "depth gauge", resolution_mm: 0.01, uncertainty_mm: 0.03 },
];

const presets = [
  { name: "Fit print", material: "PETG", layer_mm: 0.2, walls: 4, infill_pct: 25, note: "For trying on: quick, true enough for clearance holes and seats." },
  { name: "Fine fit print", material: "PETG", layer_mm: 0.12, walls: 5, infill_pct: 40, note: "For bores, pilots and sealing lands." },
];

const questions = [
  "Can the smallest inside corner be cut with a cutter you have?",
  "Can every hole be reached and tapped to its full depth?",
  "Can it be held for each set-up without marking a sealing face?",
  "Can the general tolerance and the critical surfaces be held?",
];

/** Gives a new shop its instruments, a printer with presets, materials and makeability questions, once. */
export async function givePresets(tx: Tx, shopId: string): Promise<void> {
  if (await tx("instruments").first("id")) return;
  await tx("instruments").insert(instruments.map((one) => ({ shop_id: shopId, trust: "unverified", ...one })));
  const [printer] = await tx("printers").insert({ shop_id: shopId, name: "Bench printer", process: "fused filament", bed_mm: "250 × 210 × 210" }).returning("id");
  await tx("print_presets").insert(presets.map((one) => ({ shop_id: shopId, printer_id: printer.id, ...one })));
  await tx("materials").insert(
    materials
      .filter(({ code }) => !/^(PLA|PETG|ABS|ASA|PA|resin)/.test(code))
      .map(({ code, name, density_kg_m3, yield_MPa, tensile_MPa, shear_MPa, typical, source }) => ({ shop_id: shopId, code, name, density_kg_m3, yield_mpa: yield_MPa, tensile_mpa: tensile_MPa, shear_mpa: shear_MPa, typical, source })),
  );
  await tx("makeability_questions").insert(questions.map((question, i) => ({ shop_id: shopId, question, sort: i + 1 })));
}
