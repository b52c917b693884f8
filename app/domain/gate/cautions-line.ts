import { cautionsFor } from "#app/domain/cautions.ts";
import type { GateRecords } from "#app/domain/gate-records.ts";
import { gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";
import { inWords } from "#app/domain/numbers-in-words.ts";

/** Are the hazards of this kind of part stated, and is every caution that follows read as it stands now? */
export function cautionsLine(records: GateRecords): Findings {
  const { restsOn, lacks, done } = gatherFindings();
  const { hazards, hazardsToState, id } = records.part;
  const unstated = hazardsToState.filter((hazard) => hazards[hazard] === null);
  if (unstated.length > 0) {
    lacks(`not stated: ${inWords(unstated.map((hazard) => hazardWords[hazard]))} in service`, "designer", "state-hazard", { about: [id], concedable: "no" });
  }
  const unread = cautionsFor(hazards).filter((caution) => {
    const readings = records.acknowledgements.filter((one) => one.cautions.some((read) => read.code === caution.code && read.basis === caution.basis));
    if (readings[0] !== undefined) restsOn(readings[0].id);
    return readings.length === 0;
  });
  for (const caution of unread) {
    lacks(`the caution "${caution.title}" (${caution.basis}) is not read yet`, "owner", "read-cautions", { concedable: "no" });
  }
  return done();
}

const hazardWords = { speed_rpm: "the speed", pressure_MPa: "the pressure", temperature_C: "the temperature", fluid: "the fluid" };
