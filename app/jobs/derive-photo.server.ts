import { buffer } from "node:stream/consumers";
import sharp from "sharp";
import { findFile, putDerivedFile, setFileState } from "#app/data/files.server.ts";
import { notify } from "#app/data/events.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { housekeeper } from "#app/domain/viewer.ts";
import { store } from "#app/services/store.server.ts";
import type { JobPayload } from "./queues.ts";

const sizes = { screen: 1600, thumbnail: 320 } as const;
/** Beyond any camera at a bench; a picture that unpacks to more is an attack or a mistake. */
const mostPixels = 120_000_000;

/**
 * Turns a photo upright by its EXIF and makes two WebP of it without any EXIF, so that no place
 * or device travels on. The original is kept as it came, for the shop.
 */
export async function derivePhoto({ shopId, id }: JobPayload): Promise<void> {
  const scope = housekeeper(shopId!);
  const file = await inShop(scope, (tx) => findFile(tx, id));
  if (!file || file.state !== "stored") return;
  const original = await buffer(await store().get(file.key));
  for (const kind of ["screen", "thumbnail"] as const) {
    const made = await render(original, sizes[kind]);
    if (!made) {
      await inShop(scope, async (tx) => {
        await setFileState(tx, id, "refused", "The picture is damaged: it can't be shown. Send it again.");
        await notify(tx, { shopId: shopId!, jobId: file.jobId, topic: "file", id });
      });
      return;
    }
    const key = `${file.key}.${kind}.webp`;
    const { sha256 } = await store().put(key, made.data, { contentType: "image/webp" });
    await inShop(scope, async (tx) => {
      await putDerivedFile(tx, { shopId: shopId!, jobId: file.jobId, fileId: id, kind, key, bytes: made.data.length, sha256, mediaType: "image/webp", width: made.info.width, height: made.info.height });
      await notify(tx, { shopId: shopId!, jobId: file.jobId, topic: "file", id });
    });
  }
}

async function render(original: Buffer, edge: number) {
  try {
    return await sharp(original, { limitInputPixels: mostPixels, failOn: "error" })
      .autoOrient()
      .resize({ width: edge, height: edge, fit: "inside", withoutEnlargement: true })
      .webp({ quality: 82 })
      .toBuffer({ resolveWithObject: true });
  } catch (fault) {
    // sharp has one error class for all: a damaged picture and a bomb read the same.
    console.error("derive-photo:", fault instanceof Error ? fault.message : fault);
    return null;
  }
}
