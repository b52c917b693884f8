import { listStaleUploads, setFileState } from "#app/data/files.server.ts";
import { inShop, outsideShops } from "#app/data/scope.server.ts";
import { housekeeper } from "#app/domain/viewer.ts";
import { store } from "#app/services/store.server.ts";

/** An upload that was begun so long ago and not finished will not be: its parts are thrown away. */
const uploadLife = 24 * 60 * 60 * 1000;

/** Hourly: clears what nobody will come back for. */
export async function sweep(): Promise<void> {
  await outsideShops((tx) => tx.raw("select scope.sweep_sessions()"));
  const before = new Date(Date.now() - uploadLife);
  for (const shopId of await listShopIds()) {
    const scope = housekeeper(shopId);
    for (const file of await inShop(scope, (tx) => listStaleUploads(tx, before))) {
      if (file.uploadId) await store().abortMultipart(file.key, file.uploadId);
      await inShop(scope, (tx) => setFileState(tx, file.id, "abandoned"));
    }
  }
  // Uploads that the store knows and no row does: begun just before a crash.
  for (const { key, uploadId } of await store().listUnfinished(before)) await store().abortMultipart(key, uploadId);
}

async function listShopIds(): Promise<string[]> {
  const { rows } = await outsideShops((tx) => tx.raw<{ rows: Array<{ id: string }> }>("select scope.shop_ids() as id"));
  return rows.map(({ id }) => id);
}
