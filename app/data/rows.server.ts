import type { Tx } from "./scope.server.ts";

/**
 * Changes a row if nobody changed it since the version that the form was filled from.
 *
 * @returns false when the row has another version by now (or is gone): the caller shows what
 *   changed meanwhile
 */
export async function updateIfUnchanged(tx: Tx, table: string, id: string, rowVersion: number, changes: Record<string, unknown>): Promise<boolean> {
  const changed = await tx(table).where({ id, row_version: rowVersion }).update({ ...changes, row_version: tx.raw("row_version + 1") });
  return changed === 1;
}

/** A `numeric` as the driver gives it: text, so that no digit is lost. */
export type NumericText = string;

export const toNumber = (text: NumericText | null): number | null => (text === null ? null : Number(text));

/** A calendar date as `yyyy-mm-dd`; the driver's Date would move it across time zones. */
export const dateText = (tx: Tx, column: string) => tx.raw("to_char(??, 'YYYY-MM-DD') as ??", [column, column.split(".").at(-1)!]);
