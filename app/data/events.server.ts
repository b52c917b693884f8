import type { Tx } from "./scope.server.ts";

/** Tells open pages that something changed, when this transaction commits. */
export async function notify(tx: Tx, event: { shopId: string; jobId: string; topic: "file" | "measure" | "callout" | "gate" | "packet"; id: string }): Promise<void> {
  await tx.raw("select pg_notify('spotblue_events', ?)", [JSON.stringify(event)]);
}
