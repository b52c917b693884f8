import type { Tx } from "./scope.server.ts";

export interface Revision {
  id: string;
  jobId: string;
  partId: string;
  ordinal: number;
  parentId: string | null;
  branchName: string | null;
  /** Why it exists: what changed against its parent. */
  reason: string;
  authorName: string;
  createdAt: Date;
  sharedAt: Date | null;
  setAsideReason: string | null;
  sealedAt: Date | null;
  rowVersion: number;
}

interface RevisionRow {
  id: string;
  job_id: string;
  part_id: string;
  ordinal: number;
  parent_id: string | null;
  branch_name: string | null;
  reason: string;
  author_name: string;
  created_at: Date;
  shared_at: Date | null;
  set_aside_reason: string | null;
  sealed_at: Date | null;
  row_version: number;
}

function toRevision(row: RevisionRow): Revision {
  return {
    id: row.id,
    jobId: row.job_id,
    partId: row.part_id,
    ordinal: row.ordinal,
    parentId: row.parent_id,
    branchName: row.branch_name,
    reason: row.reason,
    authorName: row.author_name,
    createdAt: row.created_at,
    sharedAt: row.shared_at,
    setAsideReason: row.set_aside_reason,
    sealedAt: row.sealed_at,
    rowVersion: row.row_version,
  };
}

export async function findRevision(tx: Tx, id: string): Promise<Revision | undefined> {
  const row = await tx<RevisionRow>("revisions").where({ id }).first();
  return row && toRevision(row as RevisionRow);
}

/** Locks the revision until the transaction ends: what is decided on it is decided once. */
export async function lockRevision(tx: Tx, id: string): Promise<Revision | undefined> {
  const row = await tx<RevisionRow>("revisions").where({ id }).forUpdate().first();
  return row && toRevision(row as RevisionRow);
}

export async function listRevisions(tx: Tx, partId: string): Promise<Revision[]> {
  const rows = (await tx<RevisionRow>("revisions").where({ part_id: partId }).orderBy("ordinal")) as RevisionRow[];
  return rows.map(toRevision);
}

/** Adds the part's next revision. The part's row is locked, so that two at once get two numbers. */
export async function addRevision(
  tx: Tx,
  shopId: string,
  part: { id: string; jobId: string },
  values: { parentId: string | null; branchName: string | null; reason: string; authorId: string | null; authorName: string },
): Promise<{ id: string; ordinal: number }> {
  await tx("parts").where({ id: part.id }).forUpdate().first("id");
  const [row] = await tx("revisions")
    .insert({
      shop_id: shopId,
      job_id: part.jobId,
      part_id: part.id,
      ordinal: tx.raw("(select coalesce(max(ordinal), 0) + 1 from revisions where part_id = ?)", [part.id]),
      parent_id: values.parentId,
      branch_name: values.branchName,
      reason: values.reason,
      author_id: values.authorId,
      author_name: values.authorName,
    })
    .returning(["id", "ordinal"]);
  return { id: row.id as string, ordinal: row.ordinal as number };
}

export async function setRevisionAside(tx: Tx, id: string, reason: string | null): Promise<void> {
  await tx("revisions").where({ id }).update({ set_aside_at: reason === null ? null : tx.fn.now(), set_aside_reason: reason, row_version: tx.raw("row_version + 1") });
}

export async function shareRevision(tx: Tx, id: string): Promise<void> {
  await tx("revisions").where({ id }).whereNull("shared_at").update({ shared_at: tx.fn.now() });
}

export async function nameBranch(tx: Tx, id: string, name: string | null): Promise<void> {
  await tx("revisions").where({ id }).update({ branch_name: name, row_version: tx.raw("row_version + 1") });
}
