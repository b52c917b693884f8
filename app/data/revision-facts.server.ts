import type { RevisionFacts } from "#app/domain/status.ts";
import type { Tx } from "./scope.server.ts";

/** What the records say of a revision; whether its gate is clear only the gate can tell. */
export interface RecordedFacts extends Omit<RevisionFacts, "gateCleared"> {
  ordinal: number;
  /** Prints recorded of it, spoiled ones too. */
  prints: number;
  /** The letter that its release took. */
  letter: string | null;
}

interface FactRow {
  id: string;
  ordinal: number;
  set_aside: boolean;
  model_stored: boolean;
  prints: number;
  fit_checked: boolean;
  letter: string | null;
}

/** The facts that the status follows from, of every revision of a part, in one question. */
export async function listRevisionFacts(tx: Tx, partId: string): Promise<Map<string, RecordedFacts>> {
  const { rows } = await tx.raw<{ rows: FactRow[] }>(
    `select r.id, r.ordinal, r.set_aside_at is not null as set_aside,
       exists (select 1 from revision_files rf where rf.revision_id = r.id and rf.role in ('step', 'stl') and rf.removed_at is null) as model_stored,
       (select count(*)::integer from prints p where p.revision_id = r.id) as prints,
       exists (select 1 from fit_checks c where c.revision_id = r.id) as fit_checked,
       (select d.letter from decisions d where d.revision_id = r.id and d.letter is not null) as letter
     from revisions r where r.part_id = ? order by r.ordinal`,
    [partId],
  );
  const lastReleased = rows.findLast(({ letter }) => letter !== null)?.ordinal ?? 0;
  return new Map(
    rows.map((row) => [
      row.id,
      {
        ordinal: row.ordinal,
        modelStored: row.model_stored,
        printRecorded: row.prints > 0,
        prints: row.prints,
        fitChecked: row.fit_checked,
        released: row.letter !== null,
        letter: row.letter,
        piecesReceived: false,
        inspectionClosed: false,
        setAside: row.set_aside,
        laterReleased: row.ordinal < lastReleased,
      },
    ]),
  );
}
