import { addAnswer, listAnswerPictures, listAnswersOfPart, type AnswerWord, type CustomerAnswer, type RecordedHow } from "#app/data/approvals.server.ts";
import { notify } from "#app/data/events.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { findRevision, listRevisions, shareRevision, type Revision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { definingModel } from "./makeability.server.ts";

/** The last answer that said yes, on which a reconfirmation builds. */
export function standingApproval(answers: readonly CustomerAnswer[]): CustomerAnswer | undefined {
  return answers[0]?.answer === "refused" ? undefined : answers[0];
}

/** What changed since the revision that was approved, in the words of each revision's reason. */
export async function changesSince(tx: Tx, revision: Revision, approvedOrdinal: number): Promise<string[]> {
  return (await listRevisions(tx, revision.partId)).filter(({ ordinal, setAsideReason }) => ordinal > approvedOrdinal && ordinal <= revision.ordinal && setAsideReason === null).map(({ ordinal, reason }) => `${ordinal}: ${reason}`);
}

export type AnswerResult = { ok: true } | { ok: false; reason: "sealed" | "not-shown" | "no-model" | "model-changed" | "picture-missing" };

export interface AnswerInput {
  /** "yes" becomes approved, or reconfirmed where there is an earlier yes to another model. */
  answer: "yes" | "no";
  reason: string;
  /** The model that the page showed. */
  modelSha256: string;
  changesSeen: boolean;
}

/** The customer's own click, by account or by guest link. Only what was shown to them can be answered. */
export async function answerAsCustomer(viewer: Viewer, revisionId: string, input: AnswerInput): Promise<AnswerResult> {
  return answer(viewer, revisionId, input, { personId: viewer.personId, guestLinkId: viewer.guestLinkId, name: viewer.name }, null);
}

/** An answer that came by text or call, recorded by the shop and shown as that. */
export async function recordAnswer(viewer: Viewer, revisionId: string, input: AnswerInput, recorded: { name: string; how: RecordedHow; saidOn: string; pictureFileId: string | null }): Promise<AnswerResult> {
  return answer(viewer, revisionId, input, { personId: null, guestLinkId: null, name: recorded.name }, { how: recorded.how, byName: viewer.name, saidOn: recorded.saidOn, pictureFileId: recorded.pictureFileId });
}

async function answer(viewer: Viewer, revisionId: string, input: AnswerInput, by: { personId: string | null; guestLinkId: string | null; name: string }, recorded: { how: RecordedHow; byName: string; saidOn: string; pictureFileId: string | null } | null): Promise<AnswerResult> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await findRevision(tx, revisionId));
    if (!recorded && !revision.sharedAt) orNotFound(null);
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    const model = await definingModel(tx, revisionId);
    if (!model) return { ok: false, reason: "no-model" };
    if (model.sha256 !== input.modelSha256) return { ok: false, reason: "model-changed" };
    if (recorded?.pictureFileId && !(await listAnswerPictures(tx, revisionId)).some(({ id }) => id === recorded.pictureFileId)) return { ok: false, reason: "picture-missing" };

    const before = standingApproval(await listAnswersOfPart(tx, revision.partId));
    const builds = input.answer === "yes" && before !== undefined && before.modelSha256 !== model.sha256;
    const word: AnswerWord = input.answer === "no" ? "refused" : builds ? "reconfirmed" : "approved";
    const id = await addAnswer(tx, {
      shopId: viewer.shopId,
      jobId: revision.jobId,
      revisionId,
      answer: word,
      reason: input.reason,
      modelSha256: model.sha256,
      sinceAnswerId: builds ? before.id : null,
      changesSeen: builds && input.changesSeen,
      by,
      recorded,
    });
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, recorded ? "recorded the customer's answer" : `${word} a revision`, { type: "customer-answer", id, jobId: revision.jobId }, { ordinal: revision.ordinal, answer: word, by: by.name, how: recorded?.how ?? "own click" }));
    return { ok: true };
  });
}

/** Shows a revision to the customer: from then on their page has it, and they can answer. */
export async function showToCustomer(viewer: Viewer, revisionId: string): Promise<AnswerResult> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await findRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    if (!(await definingModel(tx, revisionId))) return { ok: false, reason: "no-model" };
    await shareRevision(tx, revisionId);
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "showed a revision to the customer", { type: "revision", id: revisionId, jobId: revision.jobId }, { ordinal: revision.ordinal }));
    return { ok: true };
  });
}

export const answerRefusals: Record<Exclude<AnswerResult, { ok: true }>["reason"], string> = {
  sealed: "This revision was released meanwhile.",
  "not-shown": "This revision was not shown yet.",
  "no-model": "There is no STEP yet to answer for.",
  "model-changed": "The model changed while you were looking. Look at it again, then answer.",
  "picture-missing": "The picture is not stored yet. Wait until it is, or leave it out.",
};
