import { outsideShops } from "#app/data/scope.server.ts";

/** Hourly: clears what nobody will come back for. */
export async function sweep(): Promise<void> {
  await outsideShops((tx) => tx.raw("select scope.sweep_sessions()"));
}
