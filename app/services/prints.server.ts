import { listCharacteristics } from "#app/data/characteristics.server.ts";
import { notify } from "#app/data/events.server.ts";
import { listRevisionFiles } from "#app/data/files.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { addPrint, findPrint, listPresetsToPick, setPrintSpoiled, type Scale } from "#app/data/prints.server.ts";
import { lockRevision } from "#app/data/revisions.server.ts";
import { inShop, orNotFound } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";

export interface PrintInput {
  presetId: string;
  whole: boolean;
  piece: string;
  /** Characteristics a partial print can prove. */
  proves: string[];
  fileId: string;
  /** null: as the preset says. */
  scale: { x: number | null; y: number | null; z: number | null };
  printedOn: string;
  note: string;
}

export type RecordPrint = { ok: true; printId: string } | { ok: false; reason: "sealed" } | { ok: false; reason: "not-there"; field: "presetId" | "fileId" | "proves" };

/** Records a print of a revision: from which preset, of which of its files, and what it can prove. */
export async function recordPrint(viewer: Viewer, revisionId: string, input: PrintInput): Promise<RecordPrint> {
  return inShop(viewer, async (tx) => {
    // Locked: a release that is under way sees this print, or this sees the seal.
    const revision = orNotFound(await lockRevision(tx, revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    const preset = (await listPresetsToPick(tx)).find(({ id }) => id === input.presetId);
    if (!preset) return { ok: false, reason: "not-there", field: "presetId" };
    const file = (await listRevisionFiles(tx, revisionId)).find(({ id, role, state }) => id === input.fileId && (role === "stl" || role === "step") && state === "stored");
    if (!file) return { ok: false, reason: "not-there", field: "fileId" };
    const provable = (await listCharacteristics(tx, revision.partId)).filter(({ provableOnPrint }) => provableOnPrint).map(({ id }) => id);
    const proves = input.whole ? [] : [...new Set(input.proves)];
    if (!proves.every((id) => provable.includes(id))) return { ok: false, reason: "not-there", field: "proves" };
    const scale: Scale = { x: input.scale.x ?? preset.scale.x, y: input.scale.y ?? preset.scale.y, z: input.scale.z ?? preset.scale.z };
    const printId = await addPrint(tx, {
      shopId: viewer.shopId,
      jobId: revision.jobId,
      revisionId,
      presetId: preset.id,
      presetName: preset.words,
      whole: input.whole,
      piece: input.whole ? "" : input.piece,
      fileId: file.id,
      modelSha256: file.sha256,
      scale,
      printedOn: input.printedOn,
      note: input.note,
      proves,
      by: viewer,
    });
    const print = orNotFound(await findPrint(tx, printId));
    await notify(tx, { shopId: viewer.shopId, jobId: revision.jobId, topic: "gate", id: revisionId });
    await writeLog(tx, logOf(viewer, "recorded a print", { type: "print", id: printId, jobId: revision.jobId }, { name: print.name, preset: preset.words, whole: input.whole, modelSha256: file.sha256 }));
    return { ok: true, printId };
  });
}

/** Says that a print does not count, and why; null says that it counts again. */
export async function spoilPrint(viewer: Viewer, printId: string, reason: string | null): Promise<{ ok: true } | { ok: false; reason: "sealed" }> {
  return inShop(viewer, async (tx) => {
    const print = orNotFound(await findPrint(tx, printId));
    const revision = orNotFound(await lockRevision(tx, print.revisionId));
    if (revision.sealedAt) return { ok: false, reason: "sealed" };
    await setPrintSpoiled(tx, printId, reason);
    await notify(tx, { shopId: viewer.shopId, jobId: print.jobId, topic: "gate", id: print.revisionId });
    await writeLog(tx, logOf(viewer, reason === null ? "let a print count again" : "said that a print does not count", { type: "print", id: printId, jobId: print.jobId }, { name: print.name, ...(reason === null ? {} : { reason }) }));
    return { ok: true };
  });
}
