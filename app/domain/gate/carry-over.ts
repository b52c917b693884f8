import type { GateCarryOver, GateCharacteristic, GateRecords } from "#app/domain/gate-records.ts";
import { definingStep } from "#app/domain/gate/gate-line.ts";
import { judge } from "#app/domain/verdict.ts";

export interface StandingCarryOver {
  carryOver: GateCarryOver;
  /** Ids of the records it rests on. */
  by: string[];
  /** How it is known, in words. */
  because: string;
}

/** The first carried-over evidence of a characteristic that stands for this revision's model, or null. */
export function standingCarryOver(records: GateRecords, characteristic: GateCharacteristic): StandingCarryOver | null {
  for (const carryOver of records.carryOvers) {
    if (carryOver.characteristic !== characteristic.id) continue;
    if (whyCarryOverFalls(records, characteristic, carryOver) !== null) continue;
    const step = definingStep(records)!;
    return { carryOver, by: [carryOver.id, step.id, carryOver.matingPart, ...(characteristic.photoRequired ? carryOver.photos : [])], because: basisInWords(carryOver) };
  }
  return null;
}

/** Why carried-over evidence does not stand, in words; null when it does. */
export function whyCarryOverFalls(records: GateRecords, characteristic: GateCharacteristic, carryOver: GateCarryOver): string | null {
  const step = definingStep(records);
  if (step === null || carryOver.modelSha256 !== step.sha256) return "it was worked out for another model file";
  switch (carryOver.basis) {
    case "same-model":
      if (carryOver.fromModelSha256 !== step.sha256) return `revision ${carryOver.fromRevision} has another model file`;
      break;
    case "declared-unchanged":
      if (carryOver.declared === null) return "nobody has declared it unchanged";
      break;
    case "computed":
      if (carryOver.distance_mm === null || carryOver.allowed_mm === null) return "no distance is stated";
      if (carryOver.distance_mm > carryOver.allowed_mm) return `the faces moved by ${carryOver.distance_mm} mm (allowed ${carryOver.allowed_mm} mm)`;
      break;
  }
  if (!records.matingParts.some((matingPart) => matingPart.id === carryOver.matingPart)) return "its mating part is not among the records";
  if (characteristic.matingPart !== null && characteristic.matingPart !== carryOver.matingPart) return "it was tried against another mating part";
  const readings = characteristic.kind === "yes-no" ? carryOver.answers : carryOver.readings;
  const { verdict } = judge(characteristic, readings, { uncertainty: null, stage: "print" });
  if (verdict !== "conforms") return "what was found then does not hold today's print limits";
  if (characteristic.photoRequired && !hasVerifiedPhoto(records, carryOver.photos)) return "it has no stored photo";
  return null;
}

/** All photos named are stored and verified, and there is one at least. */
export function hasVerifiedPhoto(records: GateRecords, photoIds: readonly string[]): boolean {
  return photoIds.length > 0 && photoIds.every((photoId) => records.photos.some((photo) => photo.id === photoId && photo.hashVerified));
}

function basisInWords(carryOver: GateCarryOver): string {
  switch (carryOver.basis) {
    case "same-model":
      return "the model file is the same (distance 0 mm)";
    case "declared-unchanged":
      return `declared unchanged by ${carryOver.declared!.by}: ${carryOver.declared!.reason}${carryOver.distance_mm === null ? "" : ` (distance ${carryOver.distance_mm} mm)`}`;
    case "computed":
      return `the faces differ by ${carryOver.distance_mm} mm at most`;
  }
}
