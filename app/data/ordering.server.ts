import type { Tx } from "./scope.server.ts";

/** Tables whose rows a person puts in order. */
export type OrderedTable = "characteristics" | "makeability_questions";

/**
 * Moves a row one place up or down among those not set aside, and numbers them anew.
 *
 * @param among narrows to the rows that are ordered together, such as those of one part
 * @returns false when it stands at that end already, or is not among them
 */
export async function moveRow(tx: Tx, table: OrderedTable, id: string, by: 1 | -1, among: Record<string, string> = {}): Promise<boolean> {
  // Locked, so that two moves at once follow each other.
  const rows = (await tx(table).where(among).whereNull("set_aside_at").orderBy("sort").orderBy("created_at").forUpdate().select("id")) as Array<{ id: string }>;
  const ids = rows.map((row) => row.id);
  const from = ids.indexOf(id);
  const to = from + by;
  if (from < 0 || to < 0 || to >= ids.length) return false;
  ids.splice(to, 0, ...ids.splice(from, 1));
  await tx.raw(`update ?? set sort = numbered.place from unnest(?::uuid[]) with ordinality as numbered (id, place) where ??.id = numbered.id`, [table, ids, table]);
  return true;
}
