import { dateText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Payment {
  id: string;
  amountMinor: number;
  paidOn: string;
  how: string;
  note: string;
}

export async function listPayments(tx: Tx, jobId: string): Promise<Payment[]> {
  const rows = (await tx("payments").where({ job_id: jobId }).orderBy("paid_on").orderBy("created_at").select("id", "amount_minor", "how", "note", dateText(tx, "paid_on"))) as Array<{ id: string; amount_minor: string; paid_on: string; how: string; note: string }>;
  return rows.map((row) => ({ id: row.id, amountMinor: Number(row.amount_minor), paidOn: row.paid_on, how: row.how, note: row.note }));
}

/** Records money that came, or, negative, that was given back. Payments are added and never changed. */
export async function addPayment(tx: Tx, payment: { shopId: string; jobId: string; amountMinor: number; paidOn: string; how: string; note: string; recordedBy: string | null }): Promise<string> {
  const [row] = await tx("payments")
    .insert({ shop_id: payment.shopId, job_id: payment.jobId, amount_minor: payment.amountMinor, paid_on: payment.paidOn, how: payment.how, note: payment.note, recorded_by: payment.recordedBy })
    .returning("id");
  return row.id as string;
}
