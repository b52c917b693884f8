import type { Tx } from "./scope.server.ts";

export interface StoredCalculation {
  id: string;
  jobId: string;
  revisionId: string;
  kind: string;
  title: string;
  inputs: Record<string, unknown>;
  /** The result document of the calculation. */
  result: Record<string, unknown>;
  verdict: "pass" | "fail" | "information";
  modelSha256: string | null;
  hazard: "none" | "pressure" | "burst";
  byName: string;
  at: Date;
}

interface CalculationRow {
  id: string;
  job_id: string;
  revision_id: string;
  kind: string;
  title: string;
  inputs: Record<string, unknown>;
  result: Record<string, unknown>;
  verdict: StoredCalculation["verdict"];
  model_sha256: string | null;
  hazard: StoredCalculation["hazard"];
  by_name: string;
  at: Date;
}

const toCalculation = (row: CalculationRow): StoredCalculation => ({
  id: row.id,
  jobId: row.job_id,
  revisionId: row.revision_id,
  kind: row.kind,
  title: row.title,
  inputs: row.inputs,
  result: row.result,
  verdict: row.verdict,
  modelSha256: row.model_sha256,
  hazard: row.hazard,
  byName: row.by_name,
  at: row.at,
});

export async function listCalculations(tx: Tx, revisionId: string): Promise<StoredCalculation[]> {
  return ((await tx("calculations").where({ revision_id: revisionId }).whereNull("removed_at").orderBy("at")) as CalculationRow[]).map(toCalculation);
}

export async function findStoredCalculation(tx: Tx, id: string): Promise<StoredCalculation | undefined> {
  const row = (await tx("calculations").where({ id }).whereNull("removed_at").first()) as CalculationRow | undefined;
  return row && toCalculation(row);
}

export async function addCalculation(tx: Tx, calculation: Omit<StoredCalculation, "id" | "at"> & { shopId: string; byPersonId: string | null }): Promise<string> {
  const [row] = await tx("calculations")
    .insert({
      shop_id: calculation.shopId,
      job_id: calculation.jobId,
      revision_id: calculation.revisionId,
      kind: calculation.kind,
      title: calculation.title,
      inputs: JSON.stringify(calculation.inputs),
      result: JSON.stringify(calculation.result),
      verdict: calculation.verdict,
      model_sha256: calculation.modelSha256,
      hazard: calculation.hazard,
      by_person_id: calculation.byPersonId,
      by_name: calculation.byName,
    })
    .returning("id");
  return row.id as string;
}

/** Takes a calculation off its revision; another takes its place, or none. The row is kept. */
export async function removeCalculation(tx: Tx, id: string): Promise<boolean> {
  return (await tx("calculations").where({ id }).whereNull("removed_at").update({ removed_at: tx.fn.now() })) === 1;
}
