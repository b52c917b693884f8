import type { Tx } from "./scope.server.ts";

export interface CautionRead {
  caution: string;
  /** The data it followed from when it was read. */
  basis: string;
  byName: string;
  at: Date;
}

export async function listCautionReads(tx: Tx, revisionId: string): Promise<CautionRead[]> {
  const rows = (await tx("caution_reads").where({ revision_id: revisionId }).orderBy("at")) as Array<{ caution: string; basis: string; by_name: string; at: Date }>;
  return rows.map((row) => ({ caution: row.caution, basis: row.basis, byName: row.by_name, at: row.at }));
}

export async function addCautionRead(tx: Tx, read: { shopId: string; jobId: string; revisionId: string; caution: string; basis: string; byPersonId: string | null; byName: string }): Promise<void> {
  await tx("caution_reads")
    .insert({ shop_id: read.shopId, job_id: read.jobId, revision_id: read.revisionId, caution: read.caution, basis: read.basis, by_person_id: read.byPersonId, by_name: read.byName })
    .onConflict(["shop_id", "revision_id", "caution", "basis"])
    .ignore();
}
