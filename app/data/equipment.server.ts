import type { Tx } from "./scope.server.ts";

/** What a shop owns and may set aside: kept for the records that name it, and offered no more. */
export type EquipmentTable = "instruments" | "printers" | "print_presets" | "materials" | "makeability_questions";

/** @returns false when there is no such row */
export async function setRowAside(tx: Tx, table: EquipmentTable, id: string, aside: boolean): Promise<boolean> {
  return (await tx(table).where({ id }).update({ set_aside_at: aside ? tx.fn.now() : null, row_version: tx.raw("row_version + 1") })) === 1;
}

/** Has the shop nothing of this kind, set aside or not? */
export async function isTableEmpty(tx: Tx, table: EquipmentTable): Promise<boolean> {
  return (await tx(table).first("id")) === undefined;
}
