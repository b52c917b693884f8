import { createHash, randomUUID } from "node:crypto";
import { addFile, linkRevisionFile, putMeasure, setFileState, type FileKind, type UploadTarget } from "#app/data/files.server.ts";
import { linkFitPhoto } from "#app/data/photos.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { derivePhoto } from "#app/jobs/derive-photo.server.ts";
import { measureModel } from "#app/jobs/measure-model.server.ts";
import { sendJob } from "#app/jobs/send.server.ts";
import { store } from "#app/services/store.server.ts";

export interface DemoFile {
  jobId: string;
  name: string;
  kind: FileKind;
  mediaType: string;
  bytes: Uint8Array;
  target: UploadTarget;
}

/** Puts a file where an upload would have put it, with the same rows. */
export async function storeDemoFile(viewer: Viewer, file: DemoFile): Promise<string> {
  const id = randomUUID();
  const key = `shops/${viewer.shopId}/jobs/${file.jobId}/files/${id}`;
  await store().put(key, file.bytes, { contentType: file.mediaType });
  await inShop(viewer, async (tx) => {
    await addFile(tx, {
      id,
      shopId: viewer.shopId,
      jobId: file.jobId,
      kind: file.kind,
      name: file.name,
      key,
      uploadId: "demo",
      partBytes: file.bytes.length,
      bytes: file.bytes.length,
      sha256: createHash("sha256").update(file.bytes).digest("hex"),
      mediaType: file.mediaType,
      unit: file.kind === "stl" ? "mm" : null,
      target: file.target,
      uploadedBy: viewer.personId,
      uploadedByName: viewer.name,
    });
    await setFileState(tx, id, "stored");
    const place = { shopId: viewer.shopId, jobId: file.jobId, fileId: id };
    if (file.target.to === "revision" && (file.kind === "step" || file.kind === "stl")) {
      await linkRevisionFile(tx, { ...place, revisionId: file.target.id, role: file.kind });
      await putMeasure(tx, { ...place, state: "waiting" });
    }
    if (file.target.to === "fit-check") await linkFitPhoto(tx, { ...place, fitCheckId: file.target.id, characteristicId: file.target.characteristicId });
  });
  return id;
}

/** Measures now what the story goes on from; the rest is left to the worker. */
export async function measureDemoFile(viewer: Viewer, id: string, now: boolean): Promise<void> {
  if (now) await measureModel({ shopId: viewer.shopId, id }, new AbortController().signal);
  else await inShop(viewer, (tx) => sendJob(tx, "measure-model", { shopId: viewer.shopId, id }));
}

export async function deriveDemoPhoto(viewer: Viewer, id: string): Promise<void> {
  await derivePhoto({ shopId: viewer.shopId, id });
}
