import { listCharacteristics } from "#app/data/characteristics.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { listMatingParts } from "#app/data/mating-parts.server.ts";
import { findPart, type Part } from "#app/data/parts.server.ts";
import { listRevisionFacts } from "#app/data/revision-facts.server.ts";
import { listRevisions } from "#app/data/revisions.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import { seesOnlyShared } from "#app/data/shared.server.ts";
import { fluidWords, type Fluid } from "#app/domain/cautions.ts";
import { alwaysRequiredLines, gateLines } from "#app/domain/gate-records.ts";
import { can } from "#app/domain/permissions.ts";
import { revisionStatus } from "#app/domain/status.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { findKit, type StatedHazard } from "#app/engineering/kits.ts";
import { findCalculation } from "#app/engineering/registry.ts";

export type PartPage = Awaited<ReturnType<typeof loadPartPage>>;

/** The part as this viewer may see it: customers see what is made and the revisions that were shown to them. */
export async function loadPartPage(tx: Tx, viewer: Viewer, partId: string) {
  const part = orNotFound(await findPart(tx, partId));
  const job = orNotFound(await findJob(tx, part.jobId));
  const onlyShared = seesOnlyShared(viewer);
  const mayWrite = can(viewer.roles, "part:write");
  const recorded = await listRevisionFacts(tx, part.id);
  const revisions = (await listRevisions(tx, part.id)).filter(({ sharedAt }) => !onlyShared || sharedAt !== null);
  const matingParts = onlyShared ? [] : await listMatingParts(tx, job.id);
  const kit = findKit(part.kit);
  return {
    job: { id: job.id, number: job.number, title: job.title },
    part: { id: part.id, number: part.number, name: part.name, kitTitle: kit.title, setAside: part.setAside },
    facts: {
      part: [
        { label: "Number", value: part.number },
        { label: "Kind", value: kit.title.toLowerCase() },
        { label: "Stock", value: part.materialName ?? "not chosen" },
        { label: "Pieces", value: String(part.quantity) },
      ],
      service: onlyShared ? null : serviceFacts(part),
      toState: mayWrite ? kit.hazardsToState.filter((hazard) => hazardValue(part, hazard) === null).map((hazard) => hazardWords[hazard]) : [],
      asks: can(viewer.roles, "gate:read") ? asksOf(part) : null,
    },
    characteristics: onlyShared
      ? null
      : (await listCharacteristics(tx, part.id, { withSetAside: mayWrite }))
          .map(({ matingPartId, ...row }) => ({ ...row, matingPartName: matingParts.find(({ id }) => id === matingPartId)?.name ?? null }))
          .sort((a, b) => Number(a.setAside) - Number(b.setAside)),
    revisions: revisions.reverse().map((revision) => {
      const facts = recorded.get(revision.id)!;
      return {
        id: revision.id,
        ordinal: revision.ordinal,
        reason: revision.reason,
        branchName: revision.branchName,
        parentOrdinal: recorded.get(revision.parentId ?? "")?.ordinal ?? null,
        authorName: revision.authorName,
        createdAt: revision.createdAt,
        letter: facts.letter,
        // Whether its gate is clear only the gate can tell, on the revision's own sheet.
        status: revisionStatus({ ...facts, gateCleared: false }),
      };
    }),
    mayWrite,
  };
}

const hazardWords: Record<StatedHazard, string> = { speed_rpm: "speed", pressure_MPa: "pressure", temperature_C: "temperature", fluid: "fluid" };

function hazardValue(part: Part, hazard: StatedHazard): number | string | null {
  return { speed_rpm: part.speedRpm, pressure_MPa: part.pressureMPa, temperature_C: part.temperatureC, fluid: part.fluid }[hazard];
}

function serviceFacts(part: Part) {
  const stated = (value: number | null, unit: string) => (value === null ? "not stated" : `${value} ${unit}`);
  return [
    { label: "Speed", value: stated(part.speedRpm, "rpm") },
    { label: "Pressure", value: stated(part.pressureMPa, "MPa") },
    { label: "Temperature", value: stated(part.temperatureC, "°C") },
    { label: "Fluid", value: part.fluid === null ? "not stated" : fluidWords[part.fluid as Fluid] },
    { label: "Lifts or carries people or loads", value: part.lifting ? "yes" : "no" },
  ];
}

function asksOf(part: Part) {
  const lines = gateLines.filter((line) => part.requiredLines.includes(line) || alwaysRequiredLines.includes(line));
  const left = gateLines.filter((line) => !lines.includes(line));
  return [
    { label: "Lines", value: lines.join(", ") },
    ...(left.length > 0 ? [{ label: "Not asked", value: left.join(", ") }] : []),
    { label: "Calculations", value: part.requiredCalculations.map(({ kind, hazard }) => `${(findCalculation(kind)?.title ?? kind).toLowerCase()}${hazard === "none" ? "" : ` (${hazard})`}`).join(", ") || "none required" },
  ];
}
