import type { GateModelFile, GateRecords } from "#app/domain/gate-records.ts";
import { gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";
import { decimals } from "#app/domain/numbers-in-words.ts";

/**
 * Is there one STEP that defines the part, whole and readable, and were the prints made of the same shape?
 *
 * Prints and STEP are compared by the size of their bounds, axis by axis, and by volume, within the
 * part's stated tolerance. The file of a partial print must not be larger than the part.
 */
export function modelLine(records: GateRecords): Findings {
  const findings = gatherFindings();
  const steps = records.models.filter((model) => model.kind === "step");
  if (steps.length === 0) findings.lacks("no STEP is stored", "designer", "upload-step", { concedable: "no" });
  if (steps.length > 1) {
    const names = steps.map((step) => step.name).join(", ");
    findings.lacks(`more than one STEP is stored (${names}): one file must define the part`, "designer", "upload-step", { about: steps.map((step) => step.id), concedable: "no" });
  }
  const step = steps.length === 1 ? steps[0]! : null;
  if (step !== null) {
    checkStep(step, findings);
    findings.restsOn(step.id);
  }

  for (const print of records.prints) {
    if (print.spoiled !== null) continue;
    const file = records.models.find((model) => model.sha256 === print.modelSha256);
    if (file === undefined) {
      findings.lacks(`print ${print.name} was made from a file that is not stored with this revision`, "designer", "upload-stl", { about: [print.id] });
    }
  }
  for (const mesh of records.models.filter((model) => model.kind === "stl")) {
    const prints = records.prints.filter((print) => print.spoiled === null && print.modelSha256 === mesh.sha256);
    checkMesh(mesh, prints, step, records, findings);
  }
  return findings.done();
}

type Gathering = ReturnType<typeof gatherFindings>;

function checkStep(step: GateModelFile, { lacks }: Gathering): void {
  const about = { about: [step.id], concedable: "no" as const };
  if (!step.hashVerified) lacks(`${step.name}: the stored bytes are not verified yet`, "designer", "wait-for-measuring", about);
  if (step.unreadable !== null) {
    lacks(`${step.name} can't be read: ${step.unreadable}`, "designer", "repair-model", { ...about, failed: true });
    return;
  }
  if (step.unit.assumed) lacks(`${step.name} does not state its unit`, "designer", "state-unit", about);
  if (step.measured === null) {
    lacks(`${step.name} is not measured yet`, "designer", "wait-for-measuring", about);
    return;
  }
  const { solids, valid, closed } = step.measured;
  if (solids === null || solids === 0) lacks(`${step.name} holds no solid`, "designer", "repair-model", { ...about, failed: true });
  if (closed !== true) lacks(`the solid of ${step.name} is not closed`, "designer", "repair-model", { ...about, failed: true });
  if (valid !== true) lacks(`the solid of ${step.name} is not valid`, "designer", "repair-model", { ...about, failed: true });
}

function checkMesh(mesh: GateModelFile, prints: GateRecords["prints"], step: GateModelFile | null, records: GateRecords, findings: Gathering): void {
  const { lacks, restsOn, remark } = findings;
  if (prints.length === 0) {
    if (step !== null && disagreement(mesh, step, records.part.meshAgreement, true) !== null) {
      remark(`${mesh.name} differs from the STEP; no print was made from it`);
    }
    return;
  }
  restsOn(mesh.id);
  const about = { about: [mesh.id] };
  if (!mesh.hashVerified) lacks(`${mesh.name}: the stored bytes are not verified yet`, "designer", "wait-for-measuring", about);
  if (mesh.unreadable !== null) {
    lacks(`${mesh.name} can't be read: ${mesh.unreadable}`, "designer", "upload-stl", { ...about, failed: true });
    return;
  }
  if (mesh.unit.assumed) lacks(`the unit of ${mesh.name} is assumed to be ${mesh.unit.source}, nobody has said so`, "designer", "state-unit", about);
  if (mesh.measured === null) {
    lacks(`${mesh.name} is not measured yet`, "designer", "wait-for-measuring", about);
    return;
  }
  if (mesh.measured.closed !== true) {
    lacks(`${mesh.name} is not closed, so its volume can't be compared with the STEP`, "designer", "upload-stl", { ...about, failed: true });
    return;
  }
  if (step === null || step.measured === null) return; // said already
  const whole = prints.some((print) => print.whole);
  const difference = disagreement(mesh, step, records.part.meshAgreement, whole);
  if (difference === null) {
    const { bounds_mm, volume_pct } = records.part.meshAgreement;
    remark(whole ? `${mesh.name} agrees with the STEP within ${bounds_mm} mm of size and ${volume_pct} % of volume` : `${mesh.name} is of a partial print and is not larger than the STEP`);
  } else {
    lacks(`${mesh.name} is not the shape of the STEP: ${difference}`, "designer", "upload-stl", { ...about, failed: true });
  }
}

/** How a mesh differs from the STEP beyond the tolerance, in words; null when it agrees. */
function disagreement(mesh: GateModelFile, step: GateModelFile, allowed: GateRecords["part"]["meshAgreement"], whole: boolean): string | null {
  const meshBounds = mesh.measured?.bounds_mm;
  const stepBounds = step.measured?.bounds_mm;
  const meshVolume = mesh.measured?.volume_mm3;
  const stepVolume = step.measured?.volume_mm3;
  if (!meshBounds || !stepBounds || meshVolume == null || stepVolume == null || !(stepVolume > 0)) return "one of them has no volume";
  for (const [axis, name] of (["x", "y", "z"] as const).entries()) {
    const meshSize = meshBounds.max[axis]! - meshBounds.min[axis]!;
    const stepSize = stepBounds.max[axis]! - stepBounds.min[axis]!;
    const difference = whole ? Math.abs(meshSize - stepSize) : meshSize - stepSize;
    if (!(difference <= allowed.bounds_mm + 1e-9)) {
      return `along ${name} it measures ${decimals(meshSize, 2)} mm, the STEP ${decimals(stepSize, 2)} mm (allowed ${allowed.bounds_mm} mm)`;
    }
  }
  const percent = ((meshVolume - stepVolume) / stepVolume) * 100;
  if (!((whole ? Math.abs(percent) : percent) <= allowed.volume_pct + 1e-9)) {
    return `its volume is ${decimals(Math.abs(percent), 2)} % ${percent > 0 ? "larger" : "smaller"} (allowed ${allowed.volume_pct} %)`;
  }
  return null;
}
