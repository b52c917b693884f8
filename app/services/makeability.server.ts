import { notify } from "#app/data/events.server.ts";
import { listRevisionFiles } from "#app/data/files.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { addReply, closeObjection } from "#app/data/makeability.server.ts";
import { findRevision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";

/** The STEP that defines a revision now; null while there is none. */
export async function definingModel(tx: Tx, revisionId: string): Promise<{ id: string; sha256: string; name: string } | null> {
  const step = (await listRevisionFiles(tx, revisionId)).find(({ role, state }) => role === "step" && state === "stored");
  return step ? { id: step.id, sha256: step.sha256, name: step.name } : null;
}

export interface ReplyInput {
  modelSha256: string;
  priceMinor: number | null;
  readyOn: string | null;
  remark: string;
  answers: Array<{ questionId: string | null; stance: "agree" | "object"; text: string }>;
  /** Who said it and how, where the shop records what came by text or call. */
  recorded: { name: string; how: string } | null;
}

export type ReplyResult = { ok: true } | { ok: false; reason: "sealed" | "model-changed" };

/** A machinist's answers to "can this be made, for how much, by when", of exactly this model. */
export async function answerMakeability(viewer: Viewer, revisionId: string, input: ReplyInput): Promise<ReplyResult> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await findRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    const model = await definingModel(tx, revisionId);
    if (model?.sha256 !== input.modelSha256) return { ok: false, reason: "model-changed" };
    const by = input.recorded ? { personId: null, guestLinkId: null, name: input.recorded.name } : { personId: viewer.personId, guestLinkId: viewer.guestLinkId, name: viewer.name };
    const id = await addReply(tx, { shopId: viewer.shopId, jobId: revision.jobId, revisionId, ...input, recordedHow: input.recorded?.how ?? null, by });
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    const objections = input.answers.filter(({ stance }) => stance === "object").length;
    await writeLog(tx, logOf(viewer, input.recorded ? "recorded a machinist's answer" : "answered whether it can be made", { type: "machinist-reply", id, jobId: revision.jobId }, { ordinal: revision.ordinal, objections, by: by.name }));
    return { ok: true };
  });
}

export async function settleObjection(viewer: Viewer, revisionId: string, answerId: string, how: string): Promise<{ ok: true } | { ok: false; reason: "sealed" | "closed" }> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await findRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    if (!(await closeObjection(tx, revisionId, answerId, viewer.name, how))) return { ok: false, reason: "closed" };
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "closed an objection", { type: "machinist-answer", id: answerId, jobId: revision.jobId }, { how }));
    return { ok: true };
  });
}
