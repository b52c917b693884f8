import { href } from "react-router";
import { listCalculations, type StoredCalculation } from "#app/data/calculations.server.ts";
import { listCallouts } from "#app/data/callouts.server.ts";
import { listRevisionFiles, type ModelFile } from "#app/data/files.server.ts";
import { findInstructions, listHoleInstructions, type HoleInstruction } from "#app/data/instructions.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { listRevisionFacts, type RecordedFacts } from "#app/data/revision-facts.server.ts";
import { listRevisions, type Revision } from "#app/data/revisions.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import { findShownRevision, seesOnlyShared } from "#app/data/shared.server.ts";
import { groupHoles } from "#app/domain/hole-groups.ts";
import { countedPlaces, isClosed, modelFacts } from "#app/domain/model-facts.ts";
import { can } from "#app/domain/permissions.ts";
import { layOutRevisionTree } from "#app/domain/revision-tree.ts";
import { revisionStatus } from "#app/domain/status.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import type { MeasureDocument } from "#app/geometry/measure-document.ts";
import { evaluateRevision, gateViews, missingView } from "./gate.server.ts";

/**
 * Everything that the sheet of a revision shows, and nothing that this viewer may not see: what
 * a customer is not shown is not in here at all. A constant number of queries, however many
 * revisions the part has.
 */
export async function loadSheet(tx: Tx, viewer: Viewer, revisionId: string) {
  const may = (action: Parameters<typeof can>[1]) => can(viewer.roles, action);
  const revision = orNotFound(await findShownRevision(tx, viewer, revisionId));
  const part = orNotFound(await findPart(tx, revision.partId));
  const job = orNotFound(await findJob(tx, revision.jobId));
  const shown = shownRevisions(await listRevisions(tx, part.id), viewer);
  const facts = await listRevisionFacts(tx, part.id);
  const evaluated = await evaluateRevision(tx, revision.id);
  const cleared = new Set(evaluated?.result.verdict === "go" ? [revision.id] : []);
  // The only other one of which "cleared" is worth the asking: the newest that was tried and still counts.
  const other = shown.findLast(({ id }) => id !== revision.id && mayBeCleared(facts.get(id)!));
  if (other && (await evaluateRevision(tx, other.id))?.result.verdict === "go") cleared.add(other.id);
  const statusOf = (id: string) => revisionStatus({ ...facts.get(id)!, gateCleared: cleared.has(id) });

  const files = await listRevisionFiles(tx, revision.id);
  const model = findModel(files, viewer);
  const parent = shown.find(({ id }) => id === revision.parentId);
  const parentModel = parent && findModel(await listRevisionFiles(tx, parent.id), viewer);
  const holes = may("instructions:read") ? await listHoleInstructions(tx, revision.id) : [];
  const instructions = may("instructions:read") ? await findInstructions(tx, revision.id) : undefined;
  const callouts = may("callout:read") ? await listCallouts(tx, viewer, { revisionId: revision.id }) : [];
  const calculations = may("calculation:read") ? await listCalculations(tx, revision.id) : [];
  const recorded = facts.get(revision.id)!;
  return {
    job: { id: job.id, number: job.number, title: job.title },
    part: { id: part.id, name: part.name, number: part.number, stock: part.materialName, hasDensity: part.densityKgM3 !== null },
    shopName: viewer.shopName,
    revision: {
      id: revision.id,
      ordinal: revision.ordinal,
      letter: recorded.letter,
      branchName: revision.branchName,
      reason: revision.reason,
      status: statusOf(revision.id),
      sealed: revision.sealedAt !== null,
      setAside: revision.setAsideReason !== null,
      setAsideReason: may("revision:write") ? revision.setAsideReason : null,
      authorName: seesOnlyShared(viewer) ? null : revision.authorName,
      createdAt: revision.createdAt,
      prints: may("print:read") ? recorded.prints : null,
    },
    tree: treeView(shown, facts, revision.id, statusOf),
    nextOrdinal: Math.max(...[...facts.values()].map(({ ordinal }) => ordinal)) + 1,
    parent: parent ? { ordinal: parent.ordinal, facts: parentModel?.document ? modelFacts(parentModel.document, part.densityKgM3) : null } : null,
    model: model && { fileId: model.fileId, pictured: model.pictured, viewReady: model.viewReady, closed: model.document ? isClosed(model.document) : false, state: model.state, progress: model.progress, step: model.step, reason: model.reason, kind: model.kind },
    facts: model?.document ? modelFacts(model.document, part.densityKgM3) : null,
    warnings: may("model:download") ? (model?.document?.warnings ?? []) : [],
    holes: model?.document ? holeRows(model.document, holes) : [],
    instructions: instructions ? { generalTolerance: instructions.generalTolerance, edgeBreak: instructions.edgeBreak, coating: instructions.coating, confirmedName: instructions.confirmedName } : null,
    calculations: calculations.map(({ id, title, verdict, result }) => ({ id, title, verdict, room: roomOf(result) })),
    callouts: callouts.map((callout) => ({ id: callout.id, number: callout.number, pointMm: callout.pointMm, body: callout.body, open: callout.closedAt === null })),
    // That it is set aside the sheet says itself, with the way to take it up again.
    gate: evaluated && may("gate:read") ? { verdict: evaluated.result.verdict, lines: gateViews(viewer, evaluated).map(oneAction), blocked: evaluated.result.blocked.filter(({ action }) => action !== "take-up-again").map((missing) => missingView(viewer, evaluated.records, missing)) } : null,
    files: may("model:download") ? files.filter(({ role, state }) => state === "stored" && role !== "photo").map(({ id, role, name }) => ({ id, role, name })) : [],
    may: {
      write: may("revision:write") && !part.setAside,
      upload: may("file:upload") && revision.sealedAt === null,
      print: may("print:record"),
      calculate: may("calculation:write") && revision.sealedAt === null,
      instruct: may("instructions:read"),
      makeability: may("makeability:read"),
      recordApproval: may("approval:record"),
      giveApproval: may("approval:give"),
      cautions: may("gate:propose"),
      callouts: may("callout:read"),
      seePart: may("part:write"),
    },
  };
}

export type SheetData = Awaited<ReturnType<typeof loadSheet>>;

const mayBeCleared = ({ fitChecked, released, setAside, laterReleased }: RecordedFacts) => fitChecked && !released && !setAside && !laterReleased;

/** A line asks for one thing at a time on the sheet; the gate's page has them all. */
function oneAction<Line extends { missing: { what: string }[] }>(line: Line): Line {
  const [first, ...rest] = line.missing;
  return { ...line, missing: first ? [rest.length === 0 ? first : { ...first, what: `${first.what}; and ${rest.length} more` }] : [] };
}

/** A customer knows the shown revisions; each hangs on the nearest ancestor that is shown too. */
function shownRevisions(revisions: readonly Revision[], viewer: Viewer): Revision[] {
  if (!seesOnlyShared(viewer)) return [...revisions];
  const byId = new Map(revisions.map((revision) => [revision.id, revision]));
  const shownParent = (id: string | null): string | null => {
    const parent = id === null ? undefined : byId.get(id);
    return !parent ? null : parent.sharedAt ? parent.id : shownParent(parent.parentId);
  };
  return revisions.filter(({ sharedAt }) => sharedAt !== null).map((revision) => ({ ...revision, parentId: shownParent(revision.parentId) }));
}

function treeView(revisions: readonly Revision[], facts: ReadonlyMap<string, RecordedFacts>, currentId: string, statusOf: (id: string) => string | null) {
  const released = revisions.findLast(({ id }) => facts.get(id)?.released);
  const tree = layOutRevisionTree(revisions.map(({ id, ordinal, parentId, setAsideReason }) => ({ id, ordinal, parentId, setAside: setAsideReason !== null })), released?.id ?? null);
  const byId = new Map(revisions.map((revision) => [revision.id, revision]));
  return {
    nodes: tree.nodes.map(({ id, lane, column }) => {
      const { ordinal, branchName, reason, setAsideReason } = byId.get(id)!;
      const letter = facts.get(id)?.letter;
      return { id, lane, column, href: href("/revisions/:revisionId", { revisionId: id }), label: letter ? `${ordinal} ${letter}` : String(ordinal), branchName, status: statusOf(id) ?? "no model", changeText: reason, current: id === currentId, setAside: setAsideReason !== null };
    }),
    edges: tree.edges.map(({ from, to }) => ({ from: { id: from.id }, to: { id: to.id } })),
  };
}

interface FoundModel {
  fileId: string;
  kind: "step" | "stl";
  document: MeasureDocument | null;
  state: NonNullable<ModelFile["measure"]>["state"];
  progress: number;
  step: string;
  reason: string | null;
  viewReady: boolean;
  pictured: boolean;
}

/** The model that speaks for a revision: its STEP, and while there is none, or none that can be read, the STL it is printed from. */
function findModel(files: readonly ModelFile[], viewer: Viewer): FoundModel | null {
  const of = (role: "step" | "stl") => files.find((file) => file.role === role && file.state === "stored");
  const step = of("step");
  const stl = of("stl");
  const file = step && !(step.measure?.state === "failed" && stl?.measure?.state === "done") ? step : stl;
  if (!file) return null;
  const { measure } = file;
  return {
    fileId: file.id,
    kind: file.role as "step" | "stl",
    document: measure?.document ?? null,
    state: measure?.state ?? "waiting",
    progress: measure?.progress ?? 0,
    step: measure?.step ?? "",
    reason: measure?.reason ?? null,
    viewReady: file.derived.includes(can(viewer.roles, "model:download") ? "view-mesh" : "customer-mesh"),
    pictured: file.derived.includes("thumbnail"),
  };
}

function roomOf({ room }: StoredCalculation["result"]): string | null {
  const { value, unit } = (room ?? {}) as { value?: unknown; unit?: unknown };
  return typeof value === "number" && typeof unit === "string" ? `${Number(value.toPrecision(3))} ${unit}` : null;
}

/** Alike holes as one line, with what the machinist is to do with them once that was said. */
function holeRows(document: MeasureDocument, instructions: readonly HoleInstruction[]) {
  return groupHoles(document.holes).map(({ label, holes, depth_mm, diameter_mm }) => {
    const { kind, entry, entryDiameter_mm, entryAngle_deg } = document.holes[holes[0]!]!;
    const circle = document.patterns.find((pattern) => holes.every((hole) => pattern.holes.includes(hole)) && pattern.holes.length === holes.length);
    const stated = instructions.find((one) => one.label === label);
    return {
      places: countedPlaces(holes),
      count: holes.length,
      diameterMm: diameter_mm,
      depthMm: kind === "through" ? null : depth_mm,
      entry,
      entryDiameterMm: entryDiameter_mm,
      entryAngleDeg: entryAngle_deg,
      circle: circle ? { diameterMm: circle.diameter_mm, equallySpaced: circle.equallySpaced } : null,
      instruction: stated?.treatment ? `${stated.treatment === "leave" ? "leave as modelled" : stated.treatment}${stated.spec ? ` ${stated.spec}` : ""}` : null,
    };
  });
}
