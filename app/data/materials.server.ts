import type { Tx } from "./scope.server.ts";

/** For a select field: materials not set aside, by name. */
export async function listMaterialNames(tx: Tx): Promise<Array<{ id: string; name: string; code: string }>> {
  return tx("materials").select("id", "name", "code").whereNull("set_aside_at").orderBy("name");
}
