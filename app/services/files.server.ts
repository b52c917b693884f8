import { findDerivedFile, findFile, type DerivedKind } from "#app/data/files.server.ts";
import { can } from "#app/domain/permissions.ts";
import { inShop } from "#app/data/scope.server.ts";
import { isShownToCustomer, seesOnlyShared } from "#app/data/shared.server.ts";
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

/**
 * A fresh address of what was derived from a file. A customer gets the pictures and meshes of what
 * the shop has shown, and the coarser mesh where the view mesh is asked for.
 */
export async function derivedAddress(viewer: Viewer, fileId: string, kind: DerivedKind): Promise<string | null> {
  const shown = kind === "view-mesh" && !can(viewer.roles, "model:download") ? "customer-mesh" : kind;
  const found = await inShop(viewer, async (tx) => {
    const file = await findFile(tx, fileId);
    if (file?.state !== "stored") return undefined;
    if (seesOnlyShared(viewer) && !(await isShownToCustomer(tx, fileId))) return undefined;
    return findDerivedFile(tx, fileId, shown);
  });
  if (!found) return null;
  return store().presignGet(found.key, { seconds: addressLife, filename: `${kind}.${extensions[kind]}`, contentType: found.mediaType, inline: true });
}
