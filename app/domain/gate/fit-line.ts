import type { GateCharacteristic, GateRecords, GateResult } from "#app/domain/gate-records.ts";
import { hasVerifiedPhoto, standingCarryOver, whyCarryOverFalls } from "#app/domain/gate/carry-over.ts";
import { byTime, gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";
import { canProve, characteristicsToProve, countingPrints, type CountingPrint } from "#app/domain/gate/print-line.ts";
import { alignedDecimals, counted } from "#app/domain/numbers-in-words.ts";
import { judge, type Judgement } from "#app/domain/verdict.ts";

/**
 * Did every required characteristic hold on a print of this revision, tried on its mating part?
 *
 * Of several results of one characteristic the last decides, so that a second print can put right
 * what the first got wrong; an earlier failure stays as a remark. Carried-over evidence counts where
 * there is no result.
 */
export function fitLine(records: GateRecords): Findings {
  const findings = gatherFindings();
  const toProve = characteristicsToProve(records);
  if (toProve.length === 0) {
    findings.lacks("no required characteristic is named that a print could prove", "designer", "add-characteristic");
  }
  for (const characteristic of toProve) judgeCharacteristic(records, characteristic, findings);

  // Evidence without its characteristic means the document is not complete: never a go.
  const known = new Set(records.characteristics.map((characteristic) => characteristic.id));
  const orphans = [...records.results, ...records.carryOvers].filter((record) => !known.has(record.characteristic));
  if (orphans.length > 0) {
    findings.lacks(`${counted(orphans.length, "result names", "results name")} a characteristic that is not among the records`, "designer", "add-characteristic", {
      about: orphans.map((record) => record.id),
      concedable: "no",
    });
  }
  return findings.done();
}

type Gathering = ReturnType<typeof gatherFindings>;

interface Tried {
  result: GateResult;
  fitCheck: GateRecords["fitChecks"][number];
  on: CountingPrint;
}

function judgeCharacteristic(records: GateRecords, characteristic: GateCharacteristic, findings: Gathering): void {
  const { restsOn, lacks, remark } = findings;
  restsOn(characteristic.id);
  const about = { about: [characteristic.id] };
  const tried = findTried(records, characteristic);
  const last = tried.at(-1);
  if (last === undefined) {
    const carried = standingCarryOver(records, characteristic);
    if (carried !== null) {
      restsOn(...carried.by);
      remark(`${characteristic.name}: carried over from revision ${carried.carryOver.fromRevision}; ${carried.because}`);
      return;
    }
    lacks(`${characteristic.name}: ${whyNothingCounts(records, characteristic)}`, "designer", "record-fit-check", about);
    return;
  }

  const { result, fitCheck, on } = last;
  restsOn(result.id, fitCheck.id, on.print.id, on.file.id, fitCheck.matingPart);
  const failedBefore = tried.slice(0, -1).filter((earlier) => judgeResult(characteristic, earlier.result).verdict === "fails");
  for (const earlier of failedBefore) remark(`${characteristic.name} failed before, on print ${earlier.on.print.name}`);

  const judgement = judgeResult(characteristic, result);
  const coarse = judgement.coarse ? `; ${result.instrument!.name} is coarse for it` : "";
  if (coarse !== "") remark(`${characteristic.name}${coarse.replace(";", ":")}`);
  if (result.instrument?.trust === "unverified") remark(`${characteristic.name} was read with an unverified instrument (${result.instrument.name})`);

  const aboutResult = { about: [characteristic.id, result.id] };
  if (judgement.verdict === "fails") {
    const what = failureInWords(characteristic, result, judgement);
    lacks(`${what}, on print ${on.print.name}${causeInWords[result.cause ?? "none"]}`, "designer", actionForCause[result.cause ?? "none"], { ...aboutResult, failed: true });
    return;
  }
  if (judgement.verdict !== "conforms") {
    if (judgement.limits === null && characteristic.kind !== "yes-no") {
      lacks(`${characteristic.name} has no print limits to judge by`, "designer", "state-print-limits", aboutResult);
    } else {
      const unit = characteristic.kind === "yes-no" ? ["answer", "answers"] : ["reading", "readings"];
      lacks(`${characteristic.name} lacks ${counted(judgement.placesMissing, unit[0]!, unit[1]!)} of ${characteristic.places}`, "designer", "record-fit-check", aboutResult);
    }
    return;
  }
  if (characteristic.photoRequired) {
    if (hasVerifiedPhoto(records, result.photos)) restsOn(...result.photos);
    else lacks(`${characteristic.name} needs a photo of the fit check`, "designer", "add-photo", aboutResult);
  }
}

/** Results of a characteristic that count, oldest first. */
function findTried(records: GateRecords, characteristic: GateCharacteristic): Tried[] {
  const counting = countingPrints(records);
  const tried = records.results.flatMap((result): Tried[] => {
    if (result.characteristic !== characteristic.id) return [];
    const fitCheck = records.fitChecks.find((one) => one.id === result.fitCheck);
    const on = counting.find(({ print }) => print.id === fitCheck?.print && canProve(print, characteristic));
    if (fitCheck === undefined || on === undefined || !isNamedMatingPart(records, characteristic, fitCheck.matingPart)) return [];
    return [{ result, fitCheck, on }];
  });
  return tried.sort((a, b) => byTime({ at: a.fitCheck.at, id: a.result.id }, { at: b.fitCheck.at, id: b.result.id }));
}

function isNamedMatingPart(records: GateRecords, characteristic: GateCharacteristic, matingPartId: string): boolean {
  if (characteristic.matingPart !== null && characteristic.matingPart !== matingPartId) return false;
  return records.matingParts.some((matingPart) => matingPart.id === matingPartId);
}

function judgeResult(characteristic: GateCharacteristic, result: GateResult): Judgement {
  const readings = characteristic.kind === "yes-no" ? result.answers : result.readings;
  return judge(characteristic, readings, { uncertainty: result.instrument?.uncertainty ?? null, stage: "print" });
}

function whyNothingCounts(records: GateRecords, characteristic: GateCharacteristic): string {
  const result = records.results.find((one) => one.characteristic === characteristic.id);
  if (result !== undefined) {
    const fitCheck = records.fitChecks.find((one) => one.id === result.fitCheck);
    if (fitCheck === undefined) return "its result has no fit check";
    const print = records.prints.find((one) => one.id === fitCheck.print);
    if (print === undefined) return "it was tried on a print that is not among the records";
    if (!isNamedMatingPart(records, characteristic, fitCheck.matingPart)) return "it was not tried against its mating part";
    if (print.spoiled !== null) return `print ${print.name} does not count (${print.spoiled})`;
    return `print ${print.name} can't prove it for this revision's model`;
  }
  const carryOver = records.carryOvers.find((one) => one.characteristic === characteristic.id);
  if (carryOver !== undefined) return `not tried, and the evidence of revision ${carryOver.fromRevision} does not carry over: ${whyCarryOverFalls(records, characteristic, carryOver) ?? ""}`;
  return "not tried on a print yet";
}

/** "spigot bore reads 62.09 mm, print limits 62.15 to 62.20 mm" */
function failureInWords(characteristic: GateCharacteristic, result: GateResult, judgement: Judgement): string {
  if (characteristic.kind === "yes-no" || judgement.limits === null) return `${characteristic.name}: answered no`;
  // One failing place stands for all: the one furthest out.
  const worst = judgement.places.reduce((most, place, index) => (place.outBy > judgement.places[most]!.outBy ? index : most), 0);
  const { low, high } = judgement.limits;
  const { unit } = characteristic;
  const values = [result.readings[worst]!, ...(low === null ? [] : [low]), ...(high === null ? [] : [high])];
  const [reading, first, second] = alignedDecimals(values);
  const limits = second !== undefined ? `print limits ${first} to ${second} ${unit}` : low !== null ? `print limit ${first} ${unit} at least` : `print limit ${first} ${unit} at most`;
  return `${characteristic.name} reads ${reading} ${unit}, ${limits}`;
}

const causeInWords = {
  design: "; the design is the cause",
  print: "; the print is the cause",
  "mating-part-reading": "; a wrong reading of the mating part is the cause",
  none: "; no cause is named yet",
};

// A bad print asks for a reprint, not for a revision.
const actionForCause = {
  design: "make-revision",
  print: "record-print",
  "mating-part-reading": "measure-mating-part",
  none: "name-cause",
} as const;
