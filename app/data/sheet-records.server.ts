import type { MeasureDocument } from "#app/geometry/measure-document.ts";
import type { Decision } from "./decisions.server.ts";
import type { Tx } from "./scope.server.ts";

/** What the release sheet says beside the manifest: instructions in words, calculations with their room. */
export interface SheetRecords {
  instructions: { generalTolerance: string; datums: string; criticalSurfaces: string; edgeBreak: string; coating: string; confirmedName: string | null } | null;
  holes: Array<{ label: string; treatment: string | null; spec: string }>;
  calculations: Array<{ title: string; verdict: string; room: string }>;
  measure: MeasureDocument | null;
}

/** Reads what a release rests on; sealed, so that it reads the same at any later time. */
export async function loadSheetRecords(tx: Tx, decision: Decision): Promise<SheetRecords> {
  const of = { revision_id: decision.revisionId };
  const instructions = await tx("instructions").where(of).first();
  const calculations = await tx("calculations").where(of).whereNull("removed_at").orderBy("at").orderBy("id");
  const step = decision.records.models.find(({ kind }) => kind === "step");
  const measure = step && (await tx("measures").where({ file_id: step.id }).first("document"));
  return {
    instructions: instructions
      ? {
          generalTolerance: instructions.general_tolerance,
          datums: instructions.datums,
          criticalSurfaces: instructions.critical_surfaces,
          edgeBreak: instructions.edge_break,
          coating: instructions.coating,
          confirmedName: instructions.confirmed_name,
        }
      : null,
    holes: (await tx("instruction_holes").where(of).orderBy("ordinal")).map((row) => ({ label: row.label, treatment: row.treatment, spec: row.spec })),
    calculations: calculations.map((row) => ({ title: row.title, verdict: row.verdict, room: row.result.room ? `${Number(row.result.room.value.toPrecision(4))} ${row.result.room.unit}` : "" })),
    measure: measure?.document ?? null,
  };
}
