import type { GateConcession, GateLineName, GateRecords } from "#app/domain/gate-records.ts";
import { byTime, type Findings, type GateLine } from "#app/domain/gate/gate-line.ts";

/**
 * What state is a line in, concessions looked at? A line is conceded only when each thing it lacks
 * may be conceded and is: unread cautions and an invalid model never, pressure and bursting only by
 * a concession that names an outside approval.
 *
 * @param now decides whether a concession until a date still holds; its last day is included, in UTC
 */
export function concede(line: GateLineName, findings: Findings, records: GateRecords, now: Date): Omit<GateLine, "required"> {
  const { missing, remarks } = findings;
  if (missing.length === 0) return { line, state: "met", ...findings };
  const unconceded = { line, state: missing.some((one) => one.failed) ? ("failed" as const) : ("open" as const), ...findings };

  const covering = records.concessions.filter((concession) => concession.lines.includes(line)).sort(byTime);
  if (covering.length === 0) return unconceded;
  const holding = covering.filter((concession) => !isOver(concession, now));
  const notes = covering.filter((concession) => isOver(concession, now)).map((concession) => `the concession until ${concession.limit.until} is over`);
  if (holding.length === 0) return { ...unconceded, remarks: [...remarks, ...notes] };
  if (missing.some((one) => one.concedable === "no")) {
    return { ...unconceded, remarks: [...remarks, ...notes, "a concession can't cover this"] };
  }
  const approved = holding.filter((concession) => concession.outsideApproval !== null);
  if (missing.some((one) => one.concedable === "with-outside-approval") && approved.length === 0) {
    return { ...unconceded, remarks: [...remarks, ...notes, "a concession on pressure or bursting needs a named outside approval"] };
  }
  const needsApproval = missing.every((one) => one.concedable === "with-outside-approval");
  const used = needsApproval ? approved : holding;
  return {
    line,
    state: "conceded",
    by: used.map((concession) => concession.id),
    missing,
    remarks: [...remarks, ...notes, ...used.map(inWords)],
  };
}

function isOver({ limit }: GateConcession, now: Date): boolean {
  return limit.until !== null && now.toISOString().slice(0, 10) > limit.until;
}

function inWords({ by, reason, limit, outsideApproval }: GateConcession): string {
  const limits = [
    ...(limit.pieces === null ? [] : [`for ${limit.pieces} ${limit.pieces === 1 ? "piece" : "pieces"}`]),
    ...(limit.until === null ? [] : [`until ${limit.until}`]),
  ].join(", ");
  const outside = outsideApproval === null ? "" : `; approved outside by ${outsideApproval.name}, ${outsideApproval.organisation} (${outsideApproval.reference}, ${outsideApproval.on})`;
  return `conceded by ${by} ${limits}: ${reason}${outside}`;
}
