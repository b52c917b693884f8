import type { GateRecords } from "#app/domain/gate-records.ts";
import { gatherFindings, type Findings } from "#app/domain/gate/gate-line.ts";
import { depositStanding } from "#app/domain/money.ts";

/** Is the agreed deposit paid, or has the owner recorded why none is asked? */
export function depositLine(records: GateRecords): Findings {
  const { restsOn, lacks, remark, done } = gatherFindings();
  const { deposit } = records;
  if (deposit === null) {
    lacks("no deposit is agreed, and no reason is recorded why none is asked", "owner", "agree-deposit");
    return done();
  }
  const about = { about: [deposit.id] };
  restsOn(deposit.id);
  if (deposit.waived !== null) {
    remark(`no deposit is asked, recorded by ${deposit.waived.by}: ${deposit.waived.reason}`);
    return done();
  }
  if (deposit.agreed_minor === null || deposit.agreed_minor === 0) {
    lacks("no deposit is agreed, and no reason is recorded why none is asked", "owner", "agree-deposit", about);
    return done();
  }
  const counting = records.payments.filter((payment) => payment.currency === deposit.currency);
  const others = records.payments.length - counting.length;
  if (others > 0) remark("payments in another currency are not counted");
  const { settled, paid_minor } = depositStanding({ amount_minor: deposit.agreed_minor, currency: deposit.currency }, counting);
  restsOn(...counting.map((payment) => payment.id));
  // No amounts here: machinists and designers see the line, and a packet carries it; the money they may not see.
  if (!settled) {
    const what = paid_minor > 0 ? "the agreed deposit is paid only in part" : "the agreed deposit is not paid yet";
    lacks(what, "customer", "record-payment", about);
  }
  return done();
}
