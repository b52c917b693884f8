import { notify } from "#app/data/events.server.ts";
import { changeDeposit, findJob, lockJob, type Job } from "#app/data/jobs.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { addPayment, listPayments } from "#app/data/payments.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import { sumMoney } from "#app/domain/money.ts";
import type { Viewer } from "#app/domain/viewer.ts";

/** Minor units agreed, or why none is asked; both null while nothing is agreed. */
export type AgreedDeposit = Pick<Job, "depositAgreedMinor" | "depositNoneReason">;

// The logbook is read by people who may not see money: amounts stay out of it.

export async function agreeDeposit(tx: Tx, viewer: Viewer, jobId: string, rowVersion: number, agreed: AgreedDeposit): Promise<{ ok: true } | { ok: false; reason: "changed"; current: Job }> {
  orNotFound(await findJob(tx, jobId));
  if (!(await changeDeposit(tx, jobId, rowVersion, agreed))) return { ok: false, reason: "changed", current: orNotFound(await findJob(tx, jobId)) };
  await notify(tx, { shopId: viewer.shopId, jobId, topic: "gate", id: jobId });
  const action = agreed.depositNoneReason !== null ? "asked for no deposit" : agreed.depositAgreedMinor !== null ? "agreed a deposit" : "left the deposit open";
  await writeLog(tx, logOf(viewer, action, { type: "job", id: jobId, jobId }, agreed.depositNoneReason === null ? {} : { reason: agreed.depositNoneReason }));
  return { ok: true };
}

export interface NewPayment {
  /** Below zero: given back. */
  amountMinor: number;
  paidOn: string;
  how: string;
  note: string;
}

/** Records money that came or was given back; no more can be given back than came. */
export async function recordPayment(tx: Tx, viewer: Viewer, jobId: string, payment: NewPayment): Promise<{ ok: true; id: string } | { ok: false; reason: "more-than-came"; paidMinor: number }> {
  // The job's row is locked, so that two refunds at once are counted one after the other.
  orNotFound((await lockJob(tx, jobId)) || undefined);
  const paidMinor = sumMoney((await listPayments(tx, jobId)).map(({ amountMinor }) => amountMinor));
  if (paidMinor + payment.amountMinor < 0) return { ok: false, reason: "more-than-came", paidMinor };
  const id = await addPayment(tx, { shopId: viewer.shopId, jobId, ...payment, recordedBy: viewer.personId });
  await notify(tx, { shopId: viewer.shopId, jobId, topic: "gate", id: jobId });
  await writeLog(tx, logOf(viewer, payment.amountMinor < 0 ? "gave money back" : "recorded a payment", { type: "payment", id, jobId }, { how: payment.how, paidOn: payment.paidOn }));
  return { ok: true, id };
}
