import type { Tx } from "./scope.server.ts";

export interface Instructions {
  generalTolerance: string;
  datums: string;
  criticalSurfaces: string;
  edgeBreak: string;
  coating: string;
  modelSha256: string;
  confirmedName: string | null;
  confirmedAt: Date | null;
  rowVersion: number;
}

export async function findInstructions(tx: Tx, revisionId: string): Promise<Instructions | undefined> {
  const row = await tx("instructions").where({ revision_id: revisionId }).first();
  return (
    row && {
      generalTolerance: row.general_tolerance,
      datums: row.datums,
      criticalSurfaces: row.critical_surfaces,
      edgeBreak: row.edge_break,
      coating: row.coating,
      modelSha256: row.model_sha256,
      confirmedName: row.confirmed_name,
      confirmedAt: row.confirmed_at,
      rowVersion: row.row_version,
    }
  );
}

export type Treatment = "tap" | "clearance" | "ream" | "leave";

export interface HoleInstruction {
  label: string;
  holes: number[];
  treatment: Treatment | null;
  spec: string;
}

export async function listHoleInstructions(tx: Tx, revisionId: string): Promise<HoleInstruction[]> {
  const rows = (await tx("instruction_holes").where({ revision_id: revisionId }).orderBy("ordinal")) as Array<{ label: string; holes: number[]; treatment: Treatment | null; spec: string }>;
  return rows.map((row) => ({ label: row.label, holes: row.holes, treatment: row.treatment, spec: row.spec }));
}

export interface InstructionValues {
  generalTolerance: string;
  datums: string;
  criticalSurfaces: string;
  edgeBreak: string;
  coating: string;
}

/**
 * Writes the instructions of a revision, and who confirmed them for which model.
 *
 * @param rowVersion as the form was filled from; null where there were none yet
 * @returns false when somebody saved meanwhile
 */
export async function putInstructions(
  tx: Tx,
  place: { shopId: string; jobId: string; revisionId: string },
  values: InstructionValues & { modelSha256: string; confirmed: { personId: string; name: string } | null },
  holes: HoleInstruction[],
  rowVersion: number | null,
): Promise<boolean> {
  const columns = {
    general_tolerance: values.generalTolerance,
    datums: values.datums,
    critical_surfaces: values.criticalSurfaces,
    edge_break: values.edgeBreak,
    coating: values.coating,
    model_sha256: values.modelSha256,
    confirmed_by: values.confirmed?.personId ?? null,
    confirmed_name: values.confirmed?.name ?? null,
    confirmed_at: values.confirmed ? tx.fn.now() : null,
  };
  const keys = { shop_id: place.shopId, job_id: place.jobId, revision_id: place.revisionId };
  if (rowVersion === null) {
    const added = await tx("instructions").insert({ ...keys, ...columns }).onConflict(["shop_id", "revision_id"]).ignore().returning("revision_id");
    if (added.length === 0) return false;
  } else {
    const changed = await tx("instructions").where({ revision_id: place.revisionId, row_version: rowVersion }).update({ ...columns, row_version: rowVersion + 1 });
    if (changed === 0) return false;
  }
  await tx("instruction_holes").where({ revision_id: place.revisionId }).delete();
  for (const [index, hole] of holes.entries()) {
    await tx("instruction_holes").insert({ ...keys, ordinal: index + 1, label: hole.label, holes: hole.holes, treatment: hole.treatment, spec: hole.spec });
  }
  return true;
}
