import { href } from "react-router";
import { loadGateRecords } from "#app/data/gate-records.server.ts";
import type { Tx } from "#app/data/scope.server.ts";
import { evaluateGate, type GateAction, type GateResultDocument, type Missing } from "#app/domain/gate.ts";
import type { GateRecords } from "#app/domain/gate-records.ts";
import { can, type Action } from "#app/domain/permissions.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { findKit } from "#app/engineering/kits.ts";

/** Until distances are computed, mesh and STEP are compared by size and volume: shop practice, no source. */
const meshAgreement = { bounds_mm: 0.1, volume_pct: 0.5 };

/** Calculations that only inform and never judge. */
const informing = new Set(["galvanic", "stock", "cycle-time", "accessory-drive"]);

const rules = {
  hazardsToState: (kit: string) => findKit(kit).hazardsToState,
  informationOnly: (kind: string) => informing.has(kind),
  meshAgreement,
};

export interface EvaluatedRevision {
  records: GateRecords;
  result: GateResultDocument;
}

/** What the gate says of a revision now; the one way in which page, mail, decision and packet ask it. */
export async function evaluateRevision(tx: Tx, revisionId: string, now = new Date()): Promise<EvaluatedRevision | undefined> {
  const records = await loadGateRecords(tx, revisionId, rules);
  return records && { records, result: evaluateGate(records, now) };
}

interface ActionLink {
  label: string;
  /** Who may follow it; others read only what is missing. */
  needs: Action;
  to: (records: GateRecords, missing: Missing) => string;
}

const revisionOf = (records: GateRecords) => ({ revisionId: records.revision.id });
const files: ActionLink["to"] = (records) => href("/revisions/:revisionId/files", revisionOf(records));
const aboutOne = (records: GateRecords, missing: Missing, of: ReadonlyArray<{ id: string }>) => of.find(({ id }) => missing.about.includes(id))?.id;

// The deposit is the job's; its record carries the job's id.
const depositOf: ActionLink["to"] = ({ deposit }) => href("/jobs/:jobId/deposit", { jobId: deposit!.id.replace("deposit-", "") });

/** Every action a gate line can name, as the link that does it. */
const links: Record<GateAction, ActionLink> = {
  "upload-step": { label: "Upload the STEP", needs: "file:upload", to: files },
  "upload-stl": { label: "Upload the STL", needs: "file:upload", to: files },
  "wait-for-measuring": { label: "Look", needs: "file:upload", to: files },
  "repair-model": { label: "Upload a mended STEP", needs: "file:upload", to: files },
  "state-unit": { label: "State the unit", needs: "file:upload", to: files },
  "add-characteristic": { label: "Add a characteristic", needs: "part:write", to: ({ part }) => href("/parts/:partId/characteristics/new", { partId: part.id }) },
  "record-print": { label: "Record a print", needs: "print:record", to: (records) => href("/revisions/:revisionId/prints/new", revisionOf(records)) },
  "record-fit-check": {
    label: "Try it on",
    needs: "fit-check:record",
    to: (records) => {
      const print = records.prints.findLast(({ spoiled }) => spoiled === null);
      return print ? href("/prints/:printId/fit-checks/new", { printId: print.id }) : href("/revisions/:revisionId/prints/new", revisionOf(records));
    },
  },
  "name-cause": {
    label: "Say why",
    needs: "fit-check:record",
    to: (records, missing) => {
      const result = records.results.find(({ id }) => missing.about.includes(id));
      const id = result?.fitCheck ?? aboutOne(records, missing, records.fitChecks);
      return id ? href("/fit-checks/:fitCheckId", { fitCheckId: id }) : href("/revisions/:revisionId", revisionOf(records));
    },
  },
  "make-revision": { label: "Make the next revision", needs: "revision:write", to: ({ part, revision }) => `${href("/parts/:partId/revisions/new", { partId: part.id })}?parent=${revision.id}` },
  "measure-mating-part": {
    label: "Measure it again",
    needs: "mating-part:write",
    to: (records, missing) => {
      const id = aboutOne(records, missing, records.matingParts) ?? records.matingParts[0]?.id;
      return id ? href("/mating-parts/:matingPartId", { matingPartId: id }) : href("/parts/:partId", { partId: records.part.id });
    },
  },
  "state-print-limits": {
    label: "State print limits",
    needs: "part:write",
    to: (records, missing) => {
      const id = aboutOne(records, missing, records.characteristics);
      return id ? href("/characteristics/:characteristicId", { characteristicId: id }) : href("/parts/:partId", { partId: records.part.id });
    },
  },
  "add-photo": {
    label: "Add the photo",
    needs: "fit-check:record",
    to: (records, missing) => {
      const id = records.results.find((result) => missing.about.includes(result.id) || missing.about.includes(result.characteristic))?.fitCheck;
      return id ? href("/fit-checks/:fitCheckId", { fitCheckId: id }) : href("/revisions/:revisionId", revisionOf(records));
    },
  },
  "declare-unchanged": { label: "Carry over", needs: "fit-check:record", to: (records) => href("/revisions/:revisionId/carry-over", revisionOf(records)) },
  "attach-calculation": { label: "Attach it", needs: "calculation:write", to: (records) => href("/revisions/:revisionId/calculations/new", revisionOf(records)) },
  "recompute-calculation": {
    label: "Compute again",
    needs: "calculation:write",
    to: (records, missing) => {
      const id = aboutOne(records, missing, records.calculations);
      return id ? href("/calculations/:calculationId", { calculationId: id }) : href("/revisions/:revisionId/calculations/new", revisionOf(records));
    },
  },
  "state-instructions": { label: "State them", needs: "instructions:write", to: (records) => href("/revisions/:revisionId/instructions", revisionOf(records)) },
  "confirm-instructions": { label: "Confirm", needs: "instructions:write", to: (records) => href("/revisions/:revisionId/instructions", revisionOf(records)) },
  "put-questions": { label: "Put questions", needs: "equipment:write", to: () => href("/shop/questions") },
  "answer-questions": { label: "Answer", needs: "makeability:read", to: (records) => href("/revisions/:revisionId/makeability", revisionOf(records)) },
  "close-objection": { label: "Close it", needs: "makeability:record", to: (records) => href("/revisions/:revisionId/makeability", revisionOf(records)) },
  "ask-customer": { label: "Ask the customer", needs: "approval:record", to: (records) => href("/revisions/:revisionId/approval", revisionOf(records)) },
  "answer-customer": { label: "Answer", needs: "approval:record", to: (records) => href("/revisions/:revisionId/approval", revisionOf(records)) },
  "close-callout": { label: "Answer", needs: "callout:write", to: (records) => href("/revisions/:revisionId/callouts", revisionOf(records)) },
  "agree-deposit": { label: "Agree one", needs: "deposit:record", to: depositOf },
  "record-payment": { label: "Record it", needs: "deposit:record", to: depositOf },
  "state-hazard": { label: "State it", needs: "part:write", to: ({ part }) => href("/parts/:partId/edit", { partId: part.id }) },
  "read-cautions": { label: "Read them", needs: "gate:propose", to: (records) => href("/revisions/:revisionId/cautions", revisionOf(records)) },
  "take-up-again": { label: "Look", needs: "revision:write", to: (records) => href("/revisions/:revisionId", revisionOf(records)) },
};

/** What is missing, in words, with the one action that supplies it for those who may. */
export function missingView(viewer: Viewer, records: GateRecords, missing: Missing) {
  const link = links[missing.action];
  return { what: missing.what, who: missing.who, act: can(viewer.roles, link.needs) ? { label: link.label, to: link.to(records, missing) } : undefined };
}

/** The nine lines as a page shows them. */
export function gateViews(viewer: Viewer, { records, result }: EvaluatedRevision) {
  return result.lines.map((line) => ({
    line: line.line,
    state: line.state,
    detail: line.state === "met" || line.state === "conceded" ? line.remarks[0] : undefined,
    missing: line.missing.map((missing) => missingView(viewer, records, missing)),
  }));
}
