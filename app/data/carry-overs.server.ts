import { type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export type CarryBasis = "same-model" | "declared-unchanged" | "computed";

export interface CarryOver {
  id: string;
  characteristicId: string;
  fromRevisionId: string;
  fromOrdinal: number;
  basis: CarryBasis;
  reason: string;
  fromModelSha256: string;
  modelSha256: string;
  byName: string;
  at: Date;
}

export async function listCarryOvers(tx: Tx, revisionId: string): Promise<CarryOver[]> {
  const rows = (await tx("carry_overs as c").join("revisions as r", "r.id", "c.from_revision_id").where("c.revision_id", revisionId).orderBy("c.at")
    .select("c.id", "c.characteristic_id", "c.from_revision_id", "r.ordinal", "c.basis", "c.reason", "c.from_model_sha256", "c.model_sha256", "c.by_name", "c.at")) as Array<{
    id: string; characteristic_id: string; from_revision_id: string; ordinal: number; basis: CarryBasis; reason: string; from_model_sha256: string; model_sha256: string; by_name: string; at: Date;
  }>;
  return rows.map((row) => ({
    id: row.id,
    characteristicId: row.characteristic_id,
    fromRevisionId: row.from_revision_id,
    fromOrdinal: row.ordinal,
    basis: row.basis,
    reason: row.reason,
    fromModelSha256: row.from_model_sha256,
    modelSha256: row.model_sha256,
    byName: row.by_name,
    at: row.at,
  }));
}

/** What was found of a characteristic on an ancestor of a revision. */
export interface Evidence {
  characteristicId: string;
  revisionId: string;
  ordinal: number;
  /** Of the ancestor's STEP; null when it has none. */
  modelSha256: string | null;
  fitCheckId: string;
  printName: string;
  matingPartId: string;
  matingPartName: string;
  readingsMm: number[];
  answers: boolean[];
  photos: number;
  at: Date;
}

/**
 * For each characteristic the last result on the nearest ancestor that has any, on a print that
 * did not spoil and that was made of that ancestor's model. The parent comes first, then its parent, and so on.
 */
export async function listEvidenceOfAncestors(tx: Tx, revisionId: string): Promise<Evidence[]> {
  const { rows } = await tx.raw<{
    rows: Array<{ characteristic_id: string; revision_id: string; ordinal: number; model_sha256: string | null; fit_check_id: string; print_ordinal: number; mating_part_id: string; mating_part_name: string; readings_mm: NumericText[]; answers: boolean[]; photos: number; at: Date }>;
  }>(
    `with recursive line as (
       select r.parent_id as id, 1 as steps from revisions r where r.id = :revisionId and r.parent_id is not null
       union all
       select r.parent_id, line.steps + 1 from line join revisions r on r.id = line.id where r.parent_id is not null)
     select distinct on (fr.characteristic_id) fr.characteristic_id, rev.id as revision_id, rev.ordinal, fr.fit_check_id, p.ordinal as print_ordinal, fc.mating_part_id,
       m.name as mating_part_name, fr.readings_mm, fr.answers, fc.at,
       (select f.sha256 from revision_files rf join files f on f.id = rf.file_id where rf.revision_id = rev.id and rf.role = 'step' and rf.removed_at is null and f.state = 'stored' limit 1) as model_sha256,
       (select count(*)::integer from fit_photos ph where ph.fit_check_id = fc.id and (ph.characteristic_id = fr.characteristic_id or ph.characteristic_id is null)) as photos
     from line join revisions rev on rev.id = line.id
       join fit_results fr on fr.revision_id = rev.id
       join fit_checks fc on fc.id = fr.fit_check_id
       join prints p on p.id = fc.print_id and p.spoiled is null
       join mating_parts m on m.id = fc.mating_part_id
     where exists (select 1 from revision_files rf join files f on f.id = rf.file_id where rf.revision_id = rev.id and rf.removed_at is null and f.sha256 = p.model_sha256)
     order by fr.characteristic_id, line.steps, fc.at desc, fc.id`,
    { revisionId },
  );
  return rows.map((row) => ({
    characteristicId: row.characteristic_id,
    revisionId: row.revision_id,
    ordinal: row.ordinal,
    modelSha256: row.model_sha256,
    fitCheckId: row.fit_check_id,
    printName: `${row.ordinal}.${row.print_ordinal}`,
    matingPartId: row.mating_part_id,
    matingPartName: row.mating_part_name,
    readingsMm: row.readings_mm.map(Number),
    answers: row.answers,
    photos: row.photos,
    at: row.at,
  }));
}

/** Adds it unless the characteristic is carried over already; says whether it did. */
export async function addCarryOver(
  tx: Tx,
  carry: { shopId: string; jobId: string; revisionId: string; characteristicId: string; fromRevisionId: string; basis: CarryBasis; reason: string; fromModelSha256: string; modelSha256: string; by: { personId: string | null; name: string } },
): Promise<boolean> {
  const added = await tx("carry_overs")
    .insert({
      shop_id: carry.shopId,
      job_id: carry.jobId,
      revision_id: carry.revisionId,
      characteristic_id: carry.characteristicId,
      from_revision_id: carry.fromRevisionId,
      basis: carry.basis,
      reason: carry.reason,
      from_model_sha256: carry.fromModelSha256,
      model_sha256: carry.modelSha256,
      distance_mm: carry.basis === "same-model" ? 0 : null,
      by_person_id: carry.by.personId,
      by_name: carry.by.name,
    })
    .onConflict(["shop_id", "revision_id", "characteristic_id"])
    .ignore()
    .returning("id");
  return added.length === 1;
}

export async function removeCarryOver(tx: Tx, revisionId: string, id: string): Promise<CarryOver | undefined> {
  const found = (await listCarryOvers(tx, revisionId)).find((carry) => carry.id === id);
  if (found) await tx("carry_overs").where({ id, revision_id: revisionId }).delete();
  return found;
}
