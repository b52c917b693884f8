import { createWriteStream } from "node:fs";
import { mkdtemp, readFile, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import path from "node:path";
import { pipeline } from "node:stream/promises";
import sharp from "sharp";
import { findFile, putDerivedFile, putMeasure, type StoredFile } from "#app/data/files.server.ts";
import { notify } from "#app/data/events.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { housekeeper } from "#app/domain/viewer.ts";
import { UnreadableModel, type MeasureDocument } from "#app/geometry/measure-document.ts";
import { measureStl } from "#app/geometry/measure-stl.ts";
import { drawPicture } from "#app/geometry/draw-picture.ts";
import { readStl } from "#app/geometry/stl-reader.ts";
import { tessellateStep } from "#app/kernel/tessellate-step.server.ts";
import { measureStep } from "#app/kernel/measure-step.server.ts";
import { viewMeshFromStep, viewMeshFromStl } from "#app/kernel/view-mesh.server.ts";
import { store } from "#app/services/store.server.ts";
import type { JobPayload } from "./queues.ts";

/** How far the drawn mesh may lie from the true surface. */
const viewChordMm = 0.02;
/** Customers look at a coarser mesh, never at the file. */
const customerChordMm = 0.2;

/**
 * Measures a stored model and derives its view meshes. A model that can't be read is kept and
 * marked with the reason: that is an answer, not a failure, and the queue goes on.
 */
export async function measureModel({ shopId, id }: JobPayload, stopping: AbortSignal): Promise<void> {
  const scope = housekeeper(shopId!);
  const file = await inShop(scope, (tx) => findFile(tx, id));
  if (!file || file.state !== "stored") return;
  const say = (state: "running" | "done" | "failed", more: { progress?: number; step?: string; document?: MeasureDocument; reason?: string }) =>
    inShop(scope, async (tx) => {
      await putMeasure(tx, { shopId: shopId!, jobId: file.jobId, fileId: id, state, ...more });
      await notify(tx, { shopId: shopId!, jobId: file.jobId, topic: "measure", id });
    });

  const folder = await mkdtemp(path.join(tmpdir(), "spotblue-model-"));
  const local = path.join(folder, "model");
  try {
    await say("running", { progress: 0.05, step: "fetching the file" });
    await pipeline(await store().get(file.key), createWriteStream(local));
    await say("running", { progress: 0.2, step: "measuring" });
    const document = file.kind === "step"
      ? await measureStep(local, { name: file.name, sha256: file.sha256, bytes: file.bytes, signal: stopping })
      : measureStl(await readFile(local), { name: file.name, sha256: file.sha256, unit: file.unit ?? undefined });
    await say("running", { progress: 0.6, step: "making the view", document });
    await makeViews(scope.shopId, file, local, stopping);
    await say("running", { progress: 0.9, step: "drawing the picture", document });
    await makePicture(scope.shopId, file, local, stopping);
    await say("done", { progress: 1, document });
  } catch (fault) {
    if (!(fault instanceof UnreadableModel)) throw fault;
    await say("failed", { progress: 1, reason: fault.message });
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

/** The picture of the lists, of Today and of the release sheet. */
async function makePicture(shopId: string, file: StoredFile, local: string, signal: AbortSignal): Promise<void> {
  const mesh = file.kind === "step" ? await tessellateStep(local, { chord_mm: customerChordMm, signal }) : soup(readStl(await readFile(local)).positions);
  const { width, height, pixels } = drawPicture(mesh.positions, mesh.indices, 480, 360);
  const png = await sharp(Buffer.from(pixels.buffer), { raw: { width, height, channels: 4 } }).png({ compressionLevel: 9 }).toBuffer();
  const key = `${file.key}.thumbnail.png`;
  const { sha256, bytes } = await store().put(key, png, { contentType: "image/png" });
  await inShop(housekeeper(shopId), (tx) => putDerivedFile(tx, { shopId, jobId: file.jobId, fileId: file.id, kind: "thumbnail", key, bytes, sha256, mediaType: "image/png", width, height }));
}

const soup = (positions: Float32Array) => ({ positions, indices: Uint32Array.from({ length: positions.length / 3 }, (_, i) => i) });

async function makeViews(shopId: string, file: StoredFile, local: string, signal: AbortSignal): Promise<void> {
  for (const [kind, chord_mm] of [["view-mesh", viewChordMm], ["customer-mesh", customerChordMm]] as const) {
    const made = file.kind === "step" ? await viewMeshFromStep(local, { chord_mm, signal }) : await viewMeshFromStl(await readFile(local), { chord_mm, unit: file.unit ?? "mm" });
    const key = `${file.key}.${kind}.glb`;
    const { sha256 } = await store().put(key, made.glb, { contentType: "model/gltf-binary" });
    await inShop(housekeeper(shopId), (tx) =>
      putDerivedFile(tx, { shopId, jobId: file.jobId, fileId: file.id, kind, key, bytes: made.glb.length, sha256, mediaType: "model/gltf-binary", detail: { chord_mm, triangles: made.triangles } }),
    );
  }
}
