export const revisionStatuses = ["modelled", "printed", "tried", "cleared", "released", "cut", "accepted", "set aside", "replaced"] as const;
export type RevisionStatus = (typeof revisionStatuses)[number];

/** What the records of a revision say; the status is never stored. */
export interface RevisionFacts {
  /** A model file is stored. */
  modelStored: boolean;
  printRecorded: boolean;
  fitChecked: boolean;
  /** Every gate line is met or conceded. */
  gateCleared: boolean;
  /** Decided go, and sealed. */
  released: boolean;
  /** Pieces were received. */
  piecesReceived: boolean;
  /** The inspection of the pieces is closed. */
  inspectionClosed: boolean;
  /** By a person, with a reason; can be taken up again. */
  setAside: boolean;
  /** A later revision of the part was released. */
  laterReleased: boolean;
}

/**
 * What is this revision's status: the last that applies? Set aside comes before all, since a person
 * has said so; then replaced. Only what was released can be cut and accepted, and what is cleared is
 * not decided yet.
 *
 * @returns null while there is no model
 */
export function revisionStatus(facts: RevisionFacts): RevisionStatus | null {
  if (facts.setAside) return "set aside";
  if (facts.laterReleased) return "replaced";
  if (facts.released) {
    if (facts.inspectionClosed) return "accepted";
    return facts.piecesReceived ? "cut" : "released";
  }
  if (facts.gateCleared) return "cleared";
  if (facts.fitChecked) return "tried";
  if (facts.printRecorded) return "printed";
  return facts.modelStored ? "modelled" : null;
}
