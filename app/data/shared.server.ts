import type { Viewer } from "#app/domain/viewer.ts";
import { viewerCan } from "#app/domain/viewer.ts";
import { findRevision, type Revision } from "./revisions.server.ts";
import type { Tx } from "./scope.server.ts";

/** Customers see of their jobs what the shop has shown them; everybody else who reaches a job sees it whole. */
export const seesOnlyShared = (viewer: Viewer): boolean => !viewerCan(viewer, "print:read");

/** The revision, if this viewer may know of it. */
export async function findShownRevision(tx: Tx, viewer: Viewer, id: string): Promise<Revision | undefined> {
  const revision = await findRevision(tx, id);
  return revision && seesOnlyShared(viewer) && revision.sharedAt === null ? undefined : revision;
}

/**
 * May a customer see what was derived from this file? Photos and models of shared revisions,
 * and photos of their own mating parts; nothing else, whatever its id.
 */
export async function isShownToCustomer(tx: Tx, fileId: string): Promise<boolean> {
  const { rows } = await tx.raw<{ rows: Array<{ shown: boolean }> }>(
    `select exists (
       select 1 from revision_files rf join revisions r on r.id = rf.revision_id
         where rf.file_id = :fileId and rf.removed_at is null and rf.role in ('photo', 'step', 'stl') and r.shared_at is not null
       union all select 1 from fit_photos p join revisions r on r.id = p.revision_id where p.file_id = :fileId and r.shared_at is not null
       union all select 1 from mating_part_photos m where m.file_id = :fileId) as shown`,
    { fileId },
  );
  return rows[0]!.shown;
}

/** Where a photo belongs, for its page. */
export interface PhotoPlace {
  fileId: string;
  jobId: string;
  name: string;
  uploadedByName: string;
  at: Date;
  /** The revision it shows; null for a photo of the customer's hardware. */
  revisionId: string | null;
  fitCheckId: string | null;
  characteristicName: string | null;
  matingPartId: string | null;
  matingPartName: string | null;
  /** Of the screen-sized picture; null until it is made. */
  width: number | null;
  height: number | null;
}

/** The photo as this viewer may see it; the newest revision that shows it counts. */
export async function findPhotoPlace(tx: Tx, viewer: Viewer, fileId: string): Promise<PhotoPlace | undefined> {
  if (seesOnlyShared(viewer) && !(await isShownToCustomer(tx, fileId))) return undefined;
  const { rows } = await tx.raw<{
    rows: Array<{ id: string; job_id: string; name: string; uploaded_by_name: string; created_at: Date; width: number | null; height: number | null; revision_id: string | null; fit_check_id: string | null; characteristic_name: string | null; mating_part_id: string | null; mating_part_name: string | null }>;
  }>(
    `select f.id, f.job_id, f.name, f.uploaded_by_name, f.created_at, d.width, d.height, shown.revision_id, shown.fit_check_id, shown.characteristic_name, m.id as mating_part_id, m.name as mating_part_name
     from files f
       left join derived_files d on d.file_id = f.id and d.kind = 'screen'
       left join lateral (
         select one.* from (
           select p.revision_id, p.fit_check_id, c.name as characteristic_name from fit_photos p left join characteristics c on c.id = p.characteristic_id where p.file_id = f.id
           union all select rf.revision_id, null, null from revision_files rf where rf.file_id = f.id and rf.role = 'photo' and rf.removed_at is null) one
         join revisions r on r.id = one.revision_id and (not :onlyShared or r.shared_at is not null)
         order by r.ordinal desc, one.fit_check_id limit 1) shown on true
       left join lateral (
         select mp.id, mp.name from mating_part_photos x join mating_parts mp on mp.id = x.mating_part_id where x.file_id = f.id order by mp.name limit 1) m on true
     where f.id = :fileId and f.kind = 'photo' and f.state = 'stored'`,
    { fileId, onlyShared: seesOnlyShared(viewer) },
  );
  const row = rows[0];
  return (
    row && {
      fileId: row.id,
      jobId: row.job_id,
      name: row.name,
      uploadedByName: row.uploaded_by_name,
      at: row.created_at,
      revisionId: row.revision_id,
      fitCheckId: row.fit_check_id,
      characteristicName: row.characteristic_name,
      matingPartId: row.mating_part_id,
      matingPartName: row.mating_part_name,
      width: row.width,
      height: row.height,
    }
  );
}
