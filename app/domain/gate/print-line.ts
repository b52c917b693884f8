import type { GateCharacteristic, GateModelFile, GatePrint, GateRecords } from "#app/domain/gate-records.ts";
import { standingCarryOver } from "#app/domain/gate/carry-over.ts";
import { gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";
import { inWords } from "#app/domain/numbers-in-words.ts";

/** A print that can count as evidence, with the stored file it was made from. */
export interface CountingPrint {
  print: GatePrint;
  file: GateModelFile;
}

/** Prints that were made from a stored, verified file of this revision and did not spoil. */
export function countingPrints(records: GateRecords): CountingPrint[] {
  return records.prints.flatMap((print) => {
    const file = records.models.find((model) => model.sha256 === print.modelSha256);
    return print.spoiled === null && file?.hashVerified ? [{ print, file }] : [];
  });
}

export function canProve(print: GatePrint, characteristic: { id: string }): boolean {
  return print.whole || print.proves.includes(characteristic.id);
}

/** What a print has to show before this part may go. */
export function characteristicsToProve(records: GateRecords): GateCharacteristic[] {
  return records.characteristics.filter((characteristic) => characteristic.required && characteristic.provableOnPrint);
}

/** Do prints of this revision's model together cover what has to be proven? Carried-over evidence needs no print. */
export function printLine(records: GateRecords): Findings {
  const { restsOn, lacks, remark, done } = gatherFindings();
  const toProve = characteristicsToProve(records);
  if (toProve.length === 0) {
    lacks("no required characteristic is named that a print could prove", "designer", "add-characteristic");
  }
  const counting = countingPrints(records);
  const uncovered: GateCharacteristic[] = [];
  for (const characteristic of toProve) {
    const covering = counting.find(({ print }) => canProve(print, characteristic));
    if (covering !== undefined) {
      restsOn(covering.print.id, covering.file.id);
      continue;
    }
    const carried = standingCarryOver(records, characteristic);
    if (carried !== null) {
      restsOn(...carried.by);
      remark(`${characteristic.name} is carried over from revision ${carried.carryOver.fromRevision}`);
    } else uncovered.push(characteristic);
  }
  if (uncovered.length > 0) {
    const names = inWords(uncovered.map((characteristic) => characteristic.name));
    const what = records.prints.length === 0 ? `no print is recorded that proves ${names}` : `no print of this revision's model proves ${names}`;
    lacks(what, "designer", "record-print", { about: uncovered.map((characteristic) => characteristic.id) });
  }
  for (const print of records.prints.filter((one) => one.spoiled !== null)) {
    remark(`print ${print.name} does not count: ${print.spoiled}`);
  }
  for (const { print } of counting.filter((one) => !one.print.whole)) remark(`print ${print.name} is partial`);
  const laterProof = records.characteristics.filter((characteristic) => characteristic.required && !characteristic.provableOnPrint);
  if (laterProof.length > 0) {
    remark(`a print can't prove ${inWords(laterProof.map((characteristic) => characteristic.name))}: to be shown on the cut piece`);
  }
  return done();
}
