import type { GateLineName, GateModelFile, GateRecords } from "#app/domain/gate-records.ts";

export type GateRole = "owner" | "designer" | "machinist" | "customer";
export type GateLineState = "met" | "open" | "failed" | "conceded";

/** What the page turns into the one link or button that supplies what is missing. */
export const gateActions = [
  "upload-step",
  "upload-stl",
  "wait-for-measuring",
  "repair-model",
  "state-unit",
  "add-characteristic",
  "record-print",
  "record-fit-check",
  "name-cause",
  "make-revision",
  "measure-mating-part",
  "state-print-limits",
  "add-photo",
  "declare-unchanged",
  "attach-calculation",
  "recompute-calculation",
  "state-instructions",
  "confirm-instructions",
  "put-questions",
  "answer-questions",
  "close-objection",
  "ask-customer",
  "answer-customer",
  "close-callout",
  "agree-deposit",
  "record-payment",
  "state-hazard",
  "read-cautions",
  "take-up-again",
] as const;
export type GateAction = (typeof gateActions)[number];

/** One thing a line lacks. */
export interface Missing {
  /** A sentence's worth, for people. */
  what: string;
  who: GateRole;
  action: GateAction;
  /** Ids of the records it is about, for the link. */
  about: string[];
  /** Evidence speaks against it; false: evidence is lacking. */
  failed: boolean;
  concedable: "yes" | "no" | "with-outside-approval";
}

export interface GateLine {
  line: GateLineName;
  /** This part asks for the line. */
  required: boolean;
  state: GateLineState;
  /** Ids of the records the line rests on; of a conceded line, the concessions. */
  by: string[];
  /** Of a conceded line: what was conceded. */
  missing: Missing[];
  remarks: string[];
}

/** What a line found out before concessions are looked at. */
export interface Findings {
  by: string[];
  missing: Missing[];
  remarks: string[];
}

/** Gathers what one line finds; ids come out once each, in the order they were found. */
export function gatherFindings() {
  const by = new Set<string>();
  const missing: Missing[] = [];
  const remarks: string[] = [];
  return {
    restsOn: (...ids: string[]) => ids.forEach((id) => by.add(id)),
    lacks: (what: string, who: GateRole, action: GateAction, more: Partial<Pick<Missing, "about" | "failed" | "concedable">> = {}) => {
      missing.push({ what, who, action, about: [], failed: false, concedable: "yes", ...more });
    },
    remark: (text: string) => {
      if (!remarks.includes(text)) remarks.push(text);
    },
    done: (): Findings => ({ by: [...by], missing, remarks }),
  };
}

/** The STEP that defines the revision: the only one there is; null when there is none, or more than one. */
export function definingStep(records: GateRecords): GateModelFile | null {
  const steps = records.models.filter((model) => model.kind === "step");
  return steps.length === 1 ? steps[0]! : null;
}

/** Orders records by their time, then by id, so that the last one decides and equal times don't flicker. */
export function byTime(a: { at: string; id: string }, b: { at: string; id: string }): number {
  return Date.parse(a.at) - Date.parse(b.at) || (a.id < b.id ? -1 : 1);
}
