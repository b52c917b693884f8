import { addCarryOver, listCarryOvers, listEvidenceOfAncestors, removeCarryOver } from "#app/data/carry-overs.server.ts";
import { listCharacteristics } from "#app/data/characteristics.server.ts";
import { notify } from "#app/data/events.server.ts";
import { listFitChecks, listFitResults } from "#app/data/fit-checks.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { lockRevision, type Revision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { definingModel } from "./makeability.server.ts";

/** Where each characteristic of the part stands for a revision: tried here, carried over, or what could be. */
export async function loadCarryOverState(tx: Tx, revision: Pick<Revision, "id" | "partId">) {
  const characteristics = (await listCharacteristics(tx, revision.partId)).filter(({ required, provableOnPrint }) => required && provableOnPrint);
  const evidence = await listEvidenceOfAncestors(tx, revision.id);
  const carried = await listCarryOvers(tx, revision.id);
  const triedHere = new Set((await listFitResults(tx, (await listFitChecks(tx, revision.id)).map(({ id }) => id))).map(({ characteristicId }) => characteristicId));
  const model = await definingModel(tx, revision.id);
  const states = characteristics.map((characteristic) => {
    const found = evidence.find(({ characteristicId }) => characteristicId === characteristic.id);
    return {
      characteristic,
      evidence: found ?? null,
      carried: carried.find(({ characteristicId }) => characteristicId === characteristic.id) ?? null,
      triedHere: triedHere.has(characteristic.id),
      sameModel: found !== undefined && found.modelSha256 !== null && found.modelSha256 === model?.sha256,
    };
  });
  return { model, states };
}

export type CarryOverResult = { ok: true; carried: number } | { ok: false; reason: "sealed" | "no-model" | "no-evidence" | "other-model" | "there-already" };

/** Lets stand whatever was found on an ancestor with the very same model file: computed, one press for all. */
export async function carrySameModel(viewer: Viewer, revisionId: string): Promise<CarryOverResult> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await lockRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    const { model, states } = await loadCarryOverState(tx, revision);
    if (!model) return { ok: false, reason: "no-model" };
    const standing = states.filter(({ sameModel, triedHere, carried }) => sameModel && !triedHere && !carried);
    if (standing.length === 0) return { ok: false, reason: "no-evidence" };
    for (const { characteristic, evidence } of standing) {
      await addCarryOver(tx, { shopId: viewer.shopId, jobId: revision.jobId, revisionId, characteristicId: characteristic.id, fromRevisionId: evidence!.revisionId, basis: "same-model", reason: "", fromModelSha256: model.sha256, modelSha256: model.sha256, by: viewer });
    }
    await entered(tx, viewer, revision, "carried evidence over, the model file being the same", { characteristics: standing.map(({ characteristic }) => characteristic.name), modelSha256: model.sha256 });
    return { ok: true, carried: standing.length };
  });
}

/** The designer's recorded answer that what proves this characteristic did not change since, and why. */
export async function declareUnchanged(viewer: Viewer, revisionId: string, characteristicId: string, reason: string): Promise<CarryOverResult> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await lockRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    const { model, states } = await loadCarryOverState(tx, revision);
    if (!model) return { ok: false, reason: "no-model" };
    const state = orNotFound(states.find(({ characteristic }) => characteristic.id === characteristicId));
    if (!state.evidence) return { ok: false, reason: "no-evidence" };
    if (state.evidence.modelSha256 === null) return { ok: false, reason: "other-model" };
    const { evidence } = state;
    const added = await addCarryOver(tx, { shopId: viewer.shopId, jobId: revision.jobId, revisionId, characteristicId, fromRevisionId: evidence.revisionId, basis: "declared-unchanged", reason, fromModelSha256: state.evidence.modelSha256, modelSha256: model.sha256, by: viewer });
    if (!added) return { ok: false, reason: "there-already" };
    await entered(tx, viewer, revision, "declared a characteristic unchanged", { characteristic: state.characteristic.name, from: evidence.ordinal, reason, modelSha256: model.sha256 });
    return { ok: true, carried: 1 };
  });
}

export async function withdrawCarryOver(viewer: Viewer, revisionId: string, carryOverId: string): Promise<CarryOverResult> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await lockRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    const gone = orNotFound(await removeCarryOver(tx, revisionId, carryOverId));
    await entered(tx, viewer, revision, "withdrew carried-over evidence", { characteristicId: gone.characteristicId, basis: gone.basis, from: gone.fromOrdinal, reason: gone.reason, by: gone.byName });
    return { ok: true, carried: 0 };
  });
}

async function entered(tx: Tx, viewer: Viewer, revision: Revision, action: string, detail: Parameters<typeof logOf>[3]): Promise<void> {
  await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revision.id });
  await writeLog(tx, logOf(viewer, action, { type: "revision", id: revision.id, jobId: revision.jobId }, detail));
}
