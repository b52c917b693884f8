import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { addPart, changePart, findPart, setPartAside, type Part, type PartValues } from "#app/data/parts.server.ts";
import { addRevision, findRevision, nameBranch, setRevisionAside } from "#app/data/revisions.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { findKit } from "#app/engineering/kits.ts";

export type SavePart = { ok: true; id: string } | { ok: false; reason: "number-taken" } | { ok: false; reason: "changed"; current: Part };

async function numberTaken(tx: Tx, number: string, exceptId: string | null): Promise<boolean> {
  const row = (await tx("parts").where({ number }).first("id")) as { id: string } | undefined;
  return row !== undefined && row.id !== exceptId;
}

/** Adds a part from its kit: lines and calculations are the kit's, to be changed on the part. */
export async function createPart(
  tx: Tx,
  viewer: Viewer,
  jobId: string,
  values: Omit<PartValues, "requiredLines" | "requiredCalculations">,
): Promise<SavePart> {
  orNotFound(await findJob(tx, jobId));
  if (await numberTaken(tx, values.number, null)) return { ok: false, reason: "number-taken" };
  const { requiredLines, requiredCalculations } = findKit(values.kit);
  const id = await addPart(tx, viewer.shopId, jobId, { ...values, requiredLines, requiredCalculations });
  await writeLog(tx, logOf(viewer, "added a part", { type: "part", id, jobId }, { number: values.number, name: values.name, kit: values.kit }));
  return { ok: true, id };
}

export async function editPart(tx: Tx, viewer: Viewer, id: string, rowVersion: number, values: PartValues): Promise<SavePart> {
  const part = orNotFound(await findPart(tx, id));
  if (await numberTaken(tx, values.number, id)) return { ok: false, reason: "number-taken" };
  if (!(await changePart(tx, id, rowVersion, values))) return { ok: false, reason: "changed", current: orNotFound(await findPart(tx, id)) };
  await writeLog(tx, logOf(viewer, "changed a part", { type: "part", id, jobId: part.jobId }, { number: values.number }));
  return { ok: true, id };
}

export async function putPartAside(tx: Tx, viewer: Viewer, id: string, aside: boolean): Promise<void> {
  const part = orNotFound(await findPart(tx, id));
  await setPartAside(tx, id, aside);
  await writeLog(tx, logOf(viewer, aside ? "set a part aside" : "took a part up again", { type: "part", id, jobId: part.jobId }));
}

/** Adds the next revision of a part, on any of its revisions as parent. */
export async function createRevision(
  tx: Tx,
  viewer: Viewer,
  partId: string,
  values: { parentId: string | null; branchName: string | null; reason: string },
): Promise<{ ok: true; id: string; ordinal: number } | { ok: false; reason: "no-such-parent" }> {
  const part = orNotFound(await findPart(tx, partId));
  if (values.parentId !== null) {
    const parent = await findRevision(tx, values.parentId);
    if (parent?.partId !== partId) return { ok: false, reason: "no-such-parent" };
  }
  const revision = await addRevision(tx, viewer.shopId, part, { ...values, authorId: viewer.personId, authorName: viewer.name });
  await writeLog(tx, logOf(viewer, "added a revision", { type: "revision", id: revision.id, jobId: part.jobId }, { part: part.number, ordinal: revision.ordinal, reason: values.reason }));
  return { ok: true, ...revision };
}

/** Sets a revision aside with a reason, or (null) takes it up again. A released one stays what it is. */
export async function putRevisionAside(tx: Tx, viewer: Viewer, id: string, reason: string | null): Promise<{ ok: true } | { ok: false; reason: "sealed" }> {
  const revision = orNotFound(await findRevision(tx, id));
  if (revision.sealedAt) return { ok: false, reason: "sealed" };
  await setRevisionAside(tx, id, reason);
  await writeLog(tx, logOf(viewer, reason === null ? "took a revision up again" : "set a revision aside", { type: "revision", id, jobId: revision.jobId }, reason === null ? {} : { reason }));
  return { ok: true };
}

/** Names the branch that a revision begins, or (null) takes the name off. */
export async function nameRevisionBranch(tx: Tx, viewer: Viewer, id: string, name: string | null): Promise<{ ok: true } | { ok: false; reason: "sealed" }> {
  const revision = orNotFound(await findRevision(tx, id));
  if (revision.sealedAt) return { ok: false, reason: "sealed" };
  await nameBranch(tx, id, name);
  await writeLog(tx, logOf(viewer, "named a branch", { type: "revision", id, jobId: revision.jobId }, { ordinal: revision.ordinal, name }));
  return { ok: true };
}
