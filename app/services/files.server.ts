import { findDerivedFile, findFile, type DerivedKind } from "#app/data/files.server.ts";
import { can } from "#app/domain/permissions.ts";
import { inShop } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { store } from "./store.server.ts";

/** An address from the store holds for a minute: long enough to follow, too short to pass on. */
const addressLife = 60;

/**
 * A fresh address of a file's original, or null where there is none for this viewer.
 * Originals of models are for those who may download; photos leave the shop only as the
 * derived pictures, since the original carries its EXIF.
 */
export async function originalAddress(viewer: Viewer, fileId: string): Promise<string | null> {
  const file = await inShop(viewer, (tx) => findFile(tx, fileId));
  if (!file || file.state !== "stored" || !can(viewer.roles, "model:download")) return null;
  return store().presignGet(file.key, { seconds: addressLife, filename: file.name, contentType: file.mediaType, inline: false });
}

const extensions: Record<DerivedKind, string> = { "view-mesh": "glb", "customer-mesh": "glb", thumbnail: "webp", screen: "webp" };

/** A fresh address of what was derived from a file. A customer who asks for the view mesh gets the coarser one. */
export async function derivedAddress(viewer: Viewer, fileId: string, kind: DerivedKind): Promise<string | null> {
  const shown = kind === "view-mesh" && !can(viewer.roles, "model:download") ? "customer-mesh" : kind;
  const found = await inShop(viewer, async (tx) => {
    const file = await findFile(tx, fileId);
    return file?.state === "stored" ? findDerivedFile(tx, fileId, shown) : undefined;
  });
  if (!found) return null;
  return store().presignGet(found.key, { seconds: addressLife, filename: `${kind}.${extensions[kind]}`, contentType: found.mediaType, inline: true });
}
