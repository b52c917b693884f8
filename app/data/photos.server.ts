import type { Tx } from "./scope.server.ts";

export async function linkMatingPartPhoto(tx: Tx, link: { shopId: string; jobId: string; matingPartId: string; fileId: string }): Promise<void> {
  await tx("mating_part_photos").insert({ shop_id: link.shopId, job_id: link.jobId, mating_part_id: link.matingPartId, file_id: link.fileId }).onConflict().ignore();
}

export async function linkFitPhoto(tx: Tx, link: { shopId: string; jobId: string; fitCheckId: string; fileId: string; characteristicId: string | null }): Promise<void> {
  await tx("fit_photos")
    .insert({
      shop_id: link.shopId,
      job_id: link.jobId,
      revision_id: tx.raw("(select revision_id from fit_checks where id = ?)", [link.fitCheckId]),
      fit_check_id: link.fitCheckId,
      file_id: link.fileId,
      characteristic_id: link.characteristicId,
    })
    .onConflict()
    .ignore();
}

export interface Photo {
  fileId: string;
  name: string;
  ready: boolean;
  /** Of the screen-sized picture; null until it is ready. */
  width: number | null;
  height: number | null;
  at: Date;
}

interface PhotoRow {
  id: string;
  name: string;
  created_at: Date;
  width: number | null;
  height: number | null;
  derived_key: string | null;
}

const toPhoto = (row: PhotoRow): Photo => ({ fileId: row.id, name: row.name, ready: row.derived_key !== null, width: row.width, height: row.height, at: row.created_at });

function selectPhotos(tx: Tx, table: string) {
  return tx(table)
    .join("files", "files.id", `${table}.file_id`)
    .leftJoin("derived_files as d", (join) => void join.on("d.file_id", "files.id").andOnVal("d.kind", "screen"))
    .where("files.state", "stored")
    .orderBy(`${table}.created_at`)
    .select("files.id", "files.name", "files.created_at", "d.width", "d.height", "d.key as derived_key");
}

export async function listMatingPartPhotos(tx: Tx, matingPartId: string): Promise<Photo[]> {
  const rows = (await selectPhotos(tx, "mating_part_photos").where("mating_part_photos.mating_part_id", matingPartId)) as PhotoRow[];
  return rows.map(toPhoto);
}

/** The photos of all fit checks of a revision, each with the fit check and characteristic it shows. */
export async function listFitPhotos(tx: Tx, revisionId: string): Promise<Array<Photo & { fitCheckId: string; characteristicId: string | null }>> {
  const rows = (await selectPhotos(tx, "fit_photos").where("fit_photos.revision_id", revisionId).select("fit_photos.fit_check_id", "fit_photos.characteristic_id")) as Array<PhotoRow & { fit_check_id: string; characteristic_id: string | null }>;
  return rows.map((row) => ({ ...toPhoto(row), fitCheckId: row.fit_check_id, characteristicId: row.characteristic_id }));
}

export async function listRevisionPhotos(tx: Tx, revisionId: string): Promise<Photo[]> {
  const rows = (await selectPhotos(tx, "revision_files").where({ "revision_files.revision_id": revisionId, "revision_files.role": "photo" }).whereNull("revision_files.removed_at")) as PhotoRow[];
  return rows.map(toPhoto);
}
