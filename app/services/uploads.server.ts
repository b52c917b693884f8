import { randomUUID } from "node:crypto";
import { addFile, findUnfinishedUpload, lockFile, setFileState, type StoredFile, type UploadTarget } from "#app/data/files.server.ts";
import { findFitCheck } from "#app/data/fit-checks.server.ts";
import { notify } from "#app/data/events.server.ts";
import { findRevision } from "#app/data/revisions.server.ts";
import { inShop, type Tx } from "#app/data/scope.server.ts";
import { partBytes, partCount, refuseSize, type UploadKind } from "#app/domain/uploads.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { env } from "#app/env.server.ts";
import { sendJob } from "#app/jobs/send.server.ts";
import { store } from "./store.server.ts";

export interface BeginUpload {
  name: string;
  bytes: number;
  sha256: string;
  kind: UploadKind;
  mediaType: string;
  unit: "mm" | "in" | null;
  target: UploadTarget;
}

export interface UploadTicket {
  fileId: string;
  partBytes: number;
  parts: number;
  /** Numbers of parts that are stored already: resuming goes on behind them. */
  done: number[];
}

export type UploadRefusal = { ok: false; status: 404 | 409 | 400; reason: string };

/** A presigned part address holds for a quarter of an hour; the browser asks for them as it goes. */
const partLife = 15 * 60;

/**
 * Begins an upload, or finds the one that was begun of the same bytes to the same place: after
 * a lost connection or a reload, choosing the same file again goes on where it stopped.
 */
export async function beginUpload(viewer: Viewer, upload: BeginUpload): Promise<{ ok: true; ticket: UploadTicket } | UploadRefusal> {
  const refusal = refuseSize(upload.kind, upload.bytes, { modelMb: env.MAX_MODEL_MB, photoMb: env.MAX_PHOTO_MB });
  if (refusal) return { ok: false, status: 400, reason: refusal };
  const place = await inShop(viewer, (tx) => findPlace(tx, upload.target));
  if (!place.ok) return place;

  const begun = await inShop(viewer, (tx) => findUnfinishedUpload(tx, { jobId: place.jobId, ...upload }));
  if (begun?.uploadId) {
    const stored = await store().listParts(begun.key, begun.uploadId);
    if (stored) return { ok: true, ticket: ticketOf(begun, stored.map(({ partNumber }) => partNumber)) };
  }

  const id = randomUUID();
  const key = `shops/${viewer.shopId}/jobs/${place.jobId}/files/${id}`;
  const uploadId = await store().beginMultipart(key, upload.mediaType);
  await inShop(viewer, (tx) => addFile(tx, { ...upload, id, key, uploadId, partBytes, shopId: viewer.shopId, jobId: place.jobId, uploadedBy: viewer.personId, uploadedByName: viewer.name }));
  return { ok: true, ticket: { fileId: id, partBytes, parts: partCount(upload.bytes), done: [] } };
}

function ticketOf(file: StoredFile, done: number[]): UploadTicket {
  return { fileId: file.id, partBytes: file.partBytes ?? partBytes, parts: partCount(file.bytes), done };
}

/** The job that the target lies in, if it may take files at all. */
async function findPlace(tx: Tx, target: UploadTarget): Promise<{ ok: true; jobId: string } | UploadRefusal> {
  const gone: UploadRefusal = { ok: false, status: 404, reason: "What the file was meant for is not here." };
  switch (target.to) {
    case "revision": {
      const revision = await findRevision(tx, target.id);
      if (!revision) return gone;
      if (revision.sealedAt) return { ok: false, status: 409, reason: "This revision was released and is sealed. Add the next revision for another model." };
      return { ok: true, jobId: revision.jobId };
    }
    case "mating-part":
      return jobOf(tx, "mating_parts", target.id);
    case "fit-check": {
      const check = await findFitCheck(tx, target.id);
      if (!check) return gone;
      const revision = await findRevision(tx, check.revisionId);
      if (revision?.sealedAt) return { ok: false, status: 409, reason: "The revision of this fit check was released and is sealed: no photo can be added to it." };
      return { ok: true, jobId: check.jobId };
    }
    case "answer":
      return jobOf(tx, "revisions", target.id);
  }
}

async function jobOf(tx: Tx, table: "mating_parts" | "revisions", id: string): Promise<{ ok: true; jobId: string } | UploadRefusal> {
  const row = (await tx(table).where({ id }).first("job_id")) as { job_id: string } | undefined;
  return row ? { ok: true, jobId: row.job_id } : { ok: false, status: 404, reason: "What the file was meant for is not here." };
}

/** Addresses to which the browser sends these parts of an upload that is under way. */
export async function presignParts(viewer: Viewer, fileId: string, numbers: number[]): Promise<Array<{ partNumber: number; url: string }> | null> {
  const file = await inShop(viewer, (tx) => lockFile(tx, fileId));
  if (!file?.uploadId || file.state !== "uploading") return null;
  const { key, uploadId } = file;
  const wanted = numbers.filter((n) => n >= 1 && n <= partCount(file.bytes));
  const step = file.partBytes ?? partBytes;
  return Promise.all(
    wanted.map(async (partNumber) => ({
      partNumber,
      // The store refuses a part of any other size than the announced one.
      url: await store().presignPart(key, uploadId, partNumber, { seconds: partLife, bytes: Math.min(step, file.bytes - (partNumber - 1) * step) }),
    })),
  );
}

/** Joins the parts, and has the worker hash the stored bytes before the file counts. */
export async function finishUpload(viewer: Viewer, fileId: string): Promise<{ ok: true } | UploadRefusal> {
  const file = await inShop(viewer, (tx) => lockFile(tx, fileId));
  if (!file) return { ok: false, status: 404, reason: "This upload is not here." };
  if (file.state === "checking" || file.state === "stored") return { ok: true };
  if (file.state !== "uploading" || !file.uploadId) return { ok: false, status: 409, reason: file.refusal ?? "This upload was ended. Begin it again." };
  const parts = await store().listParts(file.key, file.uploadId);
  if (!parts || parts.length < partCount(file.bytes)) return { ok: false, status: 409, reason: "Parts of the file are missing. Choose the same file again; it goes on where it stopped." };
  await store().completeMultipart(file.key, file.uploadId, parts);
  await inShop(viewer, async (tx) => {
    await setFileState(tx, file.id, "checking");
    await sendJob(tx, "check-file", { shopId: viewer.shopId, id: file.id });
    await notify(tx, { shopId: viewer.shopId, jobId: file.jobId, topic: "file", id: file.id });
  });
  return { ok: true };
}

/** Ends an upload on purpose; what was sent of it is thrown away. */
export async function cancelUpload(viewer: Viewer, fileId: string): Promise<boolean> {
  const file = await inShop(viewer, async (tx) => {
    const found = await lockFile(tx, fileId);
    if (found?.state === "uploading") await setFileState(tx, fileId, "abandoned");
    return found;
  });
  if (!file) return false;
  if (file.state === "uploading" && file.uploadId) await store().abortMultipart(file.key, file.uploadId);
  return true;
}
