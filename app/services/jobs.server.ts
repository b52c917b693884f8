import { addJob, changeJob, findJob, setJobAside, type Job, type JobValues } from "#app/data/jobs.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";

export type SaveJob = { ok: true; id: string } | { ok: false; reason: "number-taken" } | { ok: false; reason: "changed"; current: Job };

async function numberTaken(tx: Tx, number: string, exceptId: string | null): Promise<boolean> {
  const row = (await tx("jobs").where({ number }).first("id")) as { id: string } | undefined;
  return row !== undefined && row.id !== exceptId;
}

export async function createJob(tx: Tx, viewer: Viewer, values: JobValues): Promise<SaveJob> {
  if (await numberTaken(tx, values.number, null)) return { ok: false, reason: "number-taken" };
  const id = await addJob(tx, viewer.shopId, values);
  await writeLog(tx, logOf(viewer, "opened a job", { type: "job", id, jobId: id }, { number: values.number, title: values.title }));
  return { ok: true, id };
}

export async function editJob(tx: Tx, viewer: Viewer, id: string, rowVersion: number, values: JobValues): Promise<SaveJob> {
  if (await numberTaken(tx, values.number, id)) return { ok: false, reason: "number-taken" };
  if (!(await changeJob(tx, id, rowVersion, values))) return { ok: false, reason: "changed", current: orNotFound(await findJob(tx, id)) };
  await writeLog(tx, logOf(viewer, "changed a job", { type: "job", id, jobId: id }, { number: values.number }));
  return { ok: true, id };
}

export async function putJobAside(tx: Tx, viewer: Viewer, id: string, aside: boolean): Promise<void> {
  orNotFound(await findJob(tx, id));
  await setJobAside(tx, id, aside);
  await writeLog(tx, logOf(viewer, aside ? "set a job aside" : "took a job up again", { type: "job", id, jobId: id }));
}
