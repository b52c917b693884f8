import { findFile, linkRevisionFile, lockFile, putMeasure, setFileKind, setFileState, type StoredFile } from "#app/data/files.server.ts";
import { linkFitPhoto, linkMatingPartPhoto } from "#app/data/photos.server.ts";
import { notify } from "#app/data/events.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { inShop, type Tx } from "#app/data/scope.server.ts";
import { kindOf, refuseSize } from "#app/domain/uploads.ts";
import { housekeeper } from "#app/domain/viewer.ts";
import { env } from "#app/env.server.ts";
import { SNIFF_BYTES, sniffModel } from "#app/geometry/sniff-model.ts";
import { store } from "#app/services/store.server.ts";
import type { JobPayload } from "./queues.ts";
import { sendJob } from "./send.server.ts";

/**
 * Decides whether an uploaded file counts: the stored bytes are hashed and must be the ones the
 * browser announced, and must be what they are taken for. What fails is kept out, with the reason.
 */
export async function checkFile({ shopId, id }: JobPayload): Promise<void> {
  const scope = housekeeper(shopId!);
  const file = await inShop(scope, (tx) => findFile(tx, id));
  if (!file || file.state !== "checking") return;
  const found = await look(file);
  await inShop(scope, async (tx) => {
    const locked = await lockFile(tx, id);
    if (!locked || locked.state !== "checking") return;
    if ("refusal" in found) {
      await setFileState(tx, id, "refused", found.refusal);
      await writeLog(tx, logOf({ ...scope, name: file.uploadedByName }, "refused a file", { type: "file", id, jobId: file.jobId }, { name: file.name, reason: found.refusal }));
    } else {
      await setFileKind(tx, id, found.kind, found.mediaType);
      await setFileState(tx, id, "stored");
      await settle(tx, shopId!, { ...file, kind: found.kind });
    }
    await notify(tx, { shopId: shopId!, jobId: file.jobId, topic: "file", id });
  });
  if ("refusal" in found) await store().remove(file.key);
}

async function look(file: StoredFile): Promise<ReturnType<typeof kindOf>> {
  const { sha256, bytes } = await store().hashStored(file.key);
  if (bytes !== file.bytes || sha256 !== file.sha256) {
    return { refusal: "What arrived is not what was sent: its hash differs. Upload the file again." };
  }
  const head = await store().getRange(file.key, 0, Math.min(bytes, SNIFF_BYTES) - 1);
  const kind = kindOf(head, sniffModel(head, bytes));
  if ("refusal" in kind) return kind;
  const refusal = refuseSize(kind.kind, bytes, { modelMb: env.MAX_MODEL_MB, photoMb: env.MAX_PHOTO_MB });
  return refusal ? { refusal } : kind;
}

/** Links the file to what it was meant for, and has it measured or turned into pictures. */
async function settle(tx: Tx, shopId: string, file: StoredFile): Promise<void> {
  const { target, jobId, id } = file;
  const model = file.kind === "step" || file.kind === "stl";
  if (target.to === "revision") {
    const role = file.kind === "pdf" ? "drawing" : file.kind === "photo" ? "photo" : file.kind;
    await linkRevisionFile(tx, { shopId, jobId, revisionId: target.id, fileId: id, role });
  } else if (target.to === "mating-part") {
    await linkMatingPartPhoto(tx, { shopId, jobId, matingPartId: target.id, fileId: id });
  } else if (target.to === "fit-check") {
    await linkFitPhoto(tx, { shopId, jobId, fitCheckId: target.id, fileId: id, characteristicId: target.characteristicId });
  }
  if (model) {
    await putMeasure(tx, { shopId, jobId, fileId: id, state: "waiting" });
    await sendJob(tx, "measure-model", { shopId, id });
  }
  if (file.kind === "photo") await sendJob(tx, "derive-photo", { shopId, id });
  const actor = { ...housekeeper(shopId), name: file.uploadedByName, personId: file.uploadedBy };
  await writeLog(tx, logOf(actor, "uploaded a file", { type: "file", id, jobId }, { name: file.name, sha256: file.sha256, bytes: file.bytes, to: target.to, toId: target.id }));
}
