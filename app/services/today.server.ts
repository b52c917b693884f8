import { href } from "react-router";
import { listWaiting } from "#app/data/today.server.ts";
import type { Tx } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { evaluateRevision, gateViews } from "./gate.server.ts";

export interface WaitingThing {
  key: string;
  title: string;
  text: string;
  since: Date;
  fileId: string | null;
  marks: Array<{ line: string; state: "met" | "open" | "failed" | "conceded" }> | null;
  action: { label: string; to: string };
}

export interface MovingRevision {
  revisionId: string;
  partName: string;
  ordinal: number;
  marks: Array<{ line: string; state: "met" | "open" | "failed" | "conceded" }>;
  who: string;
  dueOn: string | null;
}

/** As many revisions under way as are judged for the page; a one-off shop has fewer. */
const mostJudged = 12;

/** What waits on this person, oldest first, and what moves without them. */
export async function loadToday(tx: Tx, viewer: Viewer): Promise<{ waiting: WaitingThing[]; moving: MovingRevision[] }> {
  const rows = await listWaiting(tx);
  const waiting: WaitingThing[] = [];
  const moving: MovingRevision[] = [];
  const mayDecide = can(viewer.roles, "gate:decide");

  for (const packet of can(viewer.roles, "packet:acknowledge") ? rows.packets : []) {
    if (packet.acknowledged.includes(viewer.personId ?? viewer.guestLinkId ?? "")) continue;
    waiting.push({ key: `packet ${packet.decisionId}`, title: `${packet.partName} ${packet.letter} was released to you`, text: "Fetch the packet, and say that you have it.", since: packet.at, fileId: packet.fileId, marks: null, action: { label: "Open the packet", to: href("/packets/:decisionId", { decisionId: packet.decisionId }) } });
  }
  if (can(viewer.roles, "makeability:answer")) {
    for (const one of rows.revisions.filter(({ answeredByMachinist, hasModel }) => hasModel && !answeredByMachinist)) {
      waiting.push({ key: `make ${one.revisionId}`, title: `Can ${one.partName} ${one.ordinal} be made?`, text: one.reason, since: one.createdAt, fileId: one.fileId, marks: null, action: { label: "Answer", to: href("/revisions/:revisionId/makeability", { revisionId: one.revisionId }) } });
    }
  }
  if (can(viewer.roles, "approval:give")) {
    for (const one of rows.revisions.filter(({ shared, answeredByCustomer }) => shared && !answeredByCustomer)) {
      waiting.push({ key: `look ${one.revisionId}`, title: `Please look at ${one.partName}`, text: one.reason, since: one.createdAt, fileId: one.fileId, marks: null, action: { label: "Look", to: href("/your-job/:jobId", { jobId: one.jobId }) } });
    }
  }
  if (can(viewer.roles, "gate:read")) {
    for (const one of rows.revisions.slice(0, mostJudged)) {
      const evaluated = await evaluateRevision(tx, one.revisionId);
      if (!evaluated) continue;
      const lines = gateViews(viewer, evaluated);
      const marks = lines.map(({ line, state }) => ({ line, state }));
      const ready = evaluated.result.verdict === "go";
      const gate = href("/revisions/:revisionId/gate", { revisionId: one.revisionId });
      if (mayDecide && one.proposedAt) {
        const unmet = lines.filter(({ state }) => state === "open" || state === "failed").length;
        waiting.push({ key: `gate ${one.revisionId}`, title: `${one.partName} ${one.ordinal} is at the gate`, text: `Put there by ${one.proposedBy}. ${unmet === 0 ? "Every line is met or conceded." : `${unmet} ${unmet === 1 ? "line is" : "lines are"} not met.`}`, since: one.proposedAt, fileId: one.fileId, marks, action: { label: ready ? "Decide" : "Look", to: gate } });
        continue;
      }
      const next = lines.flatMap(({ missing = [] }) => missing).find(({ act, who }) => act && (viewer.roles as string[]).includes(who));
      if (next?.act && can(viewer.roles, "print:record")) {
        waiting.push({ key: `next ${one.revisionId}`, title: `${one.partName} ${one.ordinal}: ${next.what}`, text: one.reason, since: one.createdAt, fileId: one.fileId, marks, action: next.act });
      } else {
        moving.push({ revisionId: one.revisionId, partName: one.partName, ordinal: one.ordinal, marks, who: lines.flatMap(({ missing = [] }) => missing)[0]?.who ?? (one.proposedAt ? "the owner" : "ready for the gate"), dueOn: one.dueOn });
      }
    }
  }
  waiting.sort((a, b) => a.since.getTime() - b.since.getTime());
  return { waiting, moving };
}
