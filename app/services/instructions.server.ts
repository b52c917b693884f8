import { listRevisionFiles } from "#app/data/files.server.ts";
import { notify } from "#app/data/events.server.ts";
import { findInstructions, listHoleInstructions, putInstructions, type HoleInstruction, type InstructionValues } from "#app/data/instructions.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { findRevision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import { groupHoles } from "#app/domain/hole-groups.ts";
import type { Viewer } from "#app/domain/viewer.ts";

export interface ProposedInstructions {
  values: InstructionValues;
  holes: HoleInstruction[];
  /** The STEP the holes were recognised in; null while there is none or it is not measured. */
  model: { sha256: string; name: string } | null;
  rowVersion: number | null;
  confirmed: { name: string; at: Date; stale: boolean } | null;
}

/**
 * The instructions of a revision as they stand; where something was not stated yet, as they
 * would be proposed: holes as recognised in the STEP, statements as on the parent revision.
 */
export async function proposeInstructions(tx: Tx, revisionId: string): Promise<ProposedInstructions> {
  const revision = orNotFound(await findRevision(tx, revisionId));
  const step = (await listRevisionFiles(tx, revisionId)).find(({ role }) => role === "step");
  const groups = groupHoles(step?.measure?.document?.holes ?? []);
  const stated = await findInstructions(tx, revisionId);
  const inherited = stated || !revision.parentId ? undefined : await findInstructions(tx, revision.parentId);
  const before = await listHoleInstructions(tx, stated ? revisionId : (revision.parentId ?? revisionId));
  const from = stated ?? inherited;
  return {
    values: {
      generalTolerance: from?.generalTolerance ?? "ISO 2768-m",
      datums: from?.datums ?? "",
      criticalSurfaces: from?.criticalSurfaces ?? "",
      edgeBreak: from?.edgeBreak ?? "all edges 0.2 to 0.4 mm",
      coating: from?.coating ?? "none",
    },
    holes: groups.map((group) => {
      const known = before.find(({ label }) => label === group.label);
      return { label: group.label, holes: group.holes, treatment: known?.treatment ?? null, spec: known?.spec ?? "" };
    }),
    model: step && step.measure?.state === "done" ? { sha256: step.sha256, name: step.name } : null,
    rowVersion: stated?.rowVersion ?? null,
    confirmed: stated?.confirmedAt ? { name: stated.confirmedName!, at: stated.confirmedAt, stale: stated.modelSha256 !== step?.sha256 } : null,
  };
}

export type SaveInstructions = { ok: true } | { ok: false; reason: "sealed" | "changed" | "model-changed" };

/** Saves the instructions, and with `confirm` the designer's word that they hold for this model. */
export async function saveInstructions(
  viewer: Viewer,
  revisionId: string,
  input: InstructionValues & { treatments: Array<Pick<HoleInstruction, "treatment" | "spec">>; modelSha256: string; rowVersion: number | null; confirm: boolean },
): Promise<SaveInstructions> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await findRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    const proposed = await proposeInstructions(tx, revisionId);
    // The holes of the form are those of the model it was filled from.
    if (proposed.model?.sha256 !== input.modelSha256 || proposed.holes.length !== input.treatments.length) return { ok: false, reason: "model-changed" };
    const holes = proposed.holes.map((hole, i) => ({ ...hole, ...input.treatments[i]! }));
    const { generalTolerance, datums, criticalSurfaces, edgeBreak, coating, modelSha256 } = input;
    const confirmed = input.confirm && viewer.personId ? { personId: viewer.personId, name: viewer.name } : null;
    const place = { shopId: viewer.shopId, jobId: revision.jobId, revisionId };
    if (!(await putInstructions(tx, place, { generalTolerance, datums, criticalSurfaces, edgeBreak, coating, modelSha256, confirmed }, holes, input.rowVersion))) return { ok: false, reason: "changed" };
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, input.confirm ? "confirmed the instructions" : "stated the instructions", { type: "revision", id: revisionId, jobId: revision.jobId }, { ordinal: revision.ordinal, modelSha256 }));
    return { ok: true };
  });
}
