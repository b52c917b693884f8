import { updateIfUnchanged } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Shop {
  id: string;
  name: string;
  currency: string;
  /** Where answers to the shop's mails go. */
  replyTo: string | null;
  rowVersion: number;
}

/** The shop of the scope. */
export async function findShop(tx: Tx): Promise<Shop | undefined> {
  const row = (await tx("shops").first("id", "name", "currency", "reply_to", "row_version")) as { id: string; name: string; currency: string; reply_to: string | null; row_version: number } | undefined;
  return row && { id: row.id, name: row.name, currency: row.currency, replyTo: row.reply_to, rowVersion: row.row_version };
}

export async function changeShop(tx: Tx, id: string, rowVersion: number, values: { name: string; currency: string; replyTo: string | null }): Promise<boolean> {
  return updateIfUnchanged(tx, "shops", id, rowVersion, { name: values.name, currency: values.currency, reply_to: values.replyTo });
}

/** Is any amount of money recorded in this shop? */
export async function hasRecordedMoney(tx: Tx): Promise<boolean> {
  const { rows } = await tx.raw<{ rows: Array<{ found: boolean }> }>(
    `select exists (select 1 from payments) or exists (select 1 from jobs where deposit_agreed_minor > 0)
       or exists (select 1 from machinist_replies where price_minor is not null) as found`,
  );
  return rows[0]!.found;
}
