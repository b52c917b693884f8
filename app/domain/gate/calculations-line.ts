import type { GateRecords } from "#app/domain/gate-records.ts";
import { definingStep, gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";

/**
 * Is every calculation the part requires attached, computed from the inputs as they are now, and passed?
 *
 * All attached calculations of a required kind must pass. One that is not required but fails on
 * pressure or bursting counts too: nobody may release past it by leaving it out of the list.
 */
export function calculationsLine(records: GateRecords): Findings {
  const { restsOn, lacks, remark, done } = gatherFindings();
  const step = definingStep(records);
  if (records.part.requiredCalculations.length === 0) remark("this part requires no calculation");

  for (const required of records.part.requiredCalculations) {
    const attached = records.calculations.filter((calculation) => calculation.kind === required.kind);
    if (attached.length === 0) {
      lacks(`the calculation ${required.kind} is not attached`, "designer", "attach-calculation", { concedable: concedable(required.hazard) });
    }
    for (const calculation of attached) {
      restsOn(calculation.id);
      const about = { about: [calculation.id], concedable: concedable(calculation.hazard, required.hazard) };
      if (calculation.verdict === "fail") {
        lacks(`${calculation.title} fails`, "designer", "make-revision", { ...about, failed: true });
      } else if (calculation.verdict === "information" && !calculation.informationOnly) {
        lacks(`${calculation.title} has no limit to judge by`, "designer", "recompute-calculation", about);
      } else if (calculation.verdict === "information") {
        remark(`${calculation.title} is information, it does not judge`);
      }
      if (!calculation.inputsCurrent) {
        lacks(`${calculation.title} was computed from inputs that have changed since`, "designer", "recompute-calculation", about);
      }
      if (calculation.modelSha256 !== null) {
        if (calculation.modelSha256 === step?.sha256) restsOn(step.id);
        else lacks(`${calculation.title} was computed for another model file`, "designer", "recompute-calculation", about);
      }
    }
  }

  const requiredKinds = new Set(records.part.requiredCalculations.map((required) => required.kind));
  for (const calculation of records.calculations) {
    if (requiredKinds.has(calculation.kind) || calculation.verdict !== "fail") continue;
    if (calculation.hazard === "none") remark(`${calculation.title} fails; this part does not require it`);
    else lacks(`${calculation.title} fails`, "designer", "make-revision", { about: [calculation.id], concedable: concedable(calculation.hazard), failed: true });
  }
  return done();
}

type HazardClass = GateRecords["calculations"][number]["hazard"];

// Leaving such a calculation out, or out of date, must not be easier than failing it.
function concedable(...classes: HazardClass[]): "yes" | "with-outside-approval" {
  return classes.some((hazard) => hazard !== "none") ? "with-outside-approval" : "yes";
}
