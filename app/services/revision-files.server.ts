import { listRevisionFiles, lockFile, putMeasure, setFileState, setFileUnit, unlinkRevisionFile, type ModelFile } from "#app/data/files.server.ts";
import { notify } from "#app/data/events.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { lockRevision, type Revision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { sendJob } from "#app/jobs/send.server.ts";
import { cancelUpload } from "./uploads.server.ts";

export type FileChange = { ok: true } | { ok: false; reason: "sealed" | "not-here" | "not-a-mesh" };

/** Does something with a file of a revision, while that was not released. */
async function withFile(viewer: Viewer, revisionId: string, fileId: string, work: (tx: Tx, revision: Revision, file: ModelFile) => Promise<FileChange>): Promise<FileChange> {
  return inShop(viewer, async (tx) => {
    const revision = orNotFound(await lockRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    const file = (await listRevisionFiles(tx, revisionId)).find(({ id }) => id === fileId);
    return file ? work(tx, revision, file) : { ok: false, reason: "not-here" };
  });
}

/** Takes a file off a revision. The file itself is kept: prints and answers may name it. */
export async function removeRevisionFile(viewer: Viewer, revisionId: string, fileId: string): Promise<FileChange> {
  return withFile(viewer, revisionId, fileId, async (tx, { jobId, ordinal }, file) => {
    await unlinkRevisionFile(tx, revisionId, fileId);
    await notify(tx, { shopId: viewer.shopId, jobId, topic: "file", id: fileId });
    await writeLog(tx, logOf(viewer, "took a file off a revision", { type: "revision", id: revisionId, jobId }, { ordinal, file: file.name, sha256: file.sha256 }));
    return { ok: true };
  });
}

/** States the unit in which the numbers of an STL are written, and measures it again. */
export async function stateMeshUnit(viewer: Viewer, revisionId: string, fileId: string, unit: "mm" | "in"): Promise<FileChange> {
  return withFile(viewer, revisionId, fileId, async (tx, { jobId, ordinal }, file) => {
    if (file.kind !== "stl") return { ok: false, reason: "not-a-mesh" };
    await setFileUnit(tx, fileId, unit);
    await measureAgain(tx, viewer, jobId, fileId);
    await writeLog(tx, logOf(viewer, "stated the unit of a mesh", { type: "revision", id: revisionId, jobId }, { ordinal, file: file.name, sha256: file.sha256, unit }));
    return { ok: true };
  });
}

/** Measures a model once more, after it could not be read. */
export async function remeasure(viewer: Viewer, revisionId: string, fileId: string): Promise<FileChange> {
  return withFile(viewer, revisionId, fileId, async (tx, { jobId }, file) => {
    if (file.kind !== "stl" && file.kind !== "step") return { ok: false, reason: "not-a-mesh" };
    await measureAgain(tx, viewer, jobId, fileId);
    return { ok: true };
  });
}

async function measureAgain(tx: Tx, viewer: Viewer, jobId: string, fileId: string): Promise<void> {
  await putMeasure(tx, { shopId: viewer.shopId, jobId, fileId, state: "waiting" });
  await sendJob(tx, "measure-model", { shopId: viewer.shopId, id: fileId });
  await notify(tx, { shopId: viewer.shopId, jobId, topic: "measure", id: fileId });
}

/** Ends an upload to a revision that was begun, or takes a refused one off the list. */
export async function giveUpUpload(viewer: Viewer, revisionId: string, fileId: string): Promise<FileChange> {
  const dismissed = await inShop(viewer, async (tx) => {
    const file = await lockFile(tx, fileId);
    if (file?.target.to !== "revision" || file.target.id !== revisionId || file.state !== "refused") return false;
    await setFileState(tx, fileId, "abandoned", file.refusal);
    return true;
  });
  return dismissed || (await cancelUpload(viewer, fileId)) ? { ok: true } : { ok: false, reason: "not-here" };
}
