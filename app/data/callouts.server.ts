import type { Viewer } from "#app/domain/viewer.ts";
import { viewerCan } from "#app/domain/viewer.ts";
import { type NumericText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export type Visibility = "customer" | "internal";

export interface Callout {
  id: string;
  jobId: string;
  revisionId: string;
  number: number;
  /** On a photo: which, and where on it as fractions from the left and the top. */
  fileId: string | null;
  fileName: string | null;
  x: number | null;
  y: number | null;
  /** On the model: a point in its own coordinates, mm. */
  pointMm: [number, number, number] | null;
  visibility: Visibility;
  assigneeId: string | null;
  assigneeName: string | null;
  body: string;
  fromCustomer: boolean;
  byPersonId: string | null;
  byGuestLinkId: string | null;
  byName: string;
  at: Date;
  closedAt: Date | null;
  closedByName: string | null;
  replies: number;
}

interface CalloutRow {
  id: string;
  job_id: string;
  revision_id: string;
  number: number;
  file_id: string | null;
  file_name: string | null;
  x: NumericText | null;
  y: NumericText | null;
  point_mm: NumericText[] | null;
  visibility: Visibility;
  assignee_id: string | null;
  assignee_name: string | null;
  body: string;
  from_customer: boolean;
  by_person_id: string | null;
  by_guest_link_id: string | null;
  by_name: string;
  at: Date;
  closed_at: Date | null;
  closed_by_name: string | null;
  replies: number;
}

/**
 * Callouts that this viewer may see: all for the shop and its machinists; for customers those
 * meant for them, on photos and models of revisions that were shown to them.
 */
function selectCallouts(tx: Tx, viewer: Viewer) {
  const query = tx("callouts as c")
    .join("revisions as r", "r.id", "c.revision_id")
    .leftJoin("files as f", "f.id", "c.file_id")
    .leftJoin("people as p", "p.id", "c.assignee_id")
    .orderBy("c.number")
    .select("c.id", "c.job_id", "c.revision_id", "c.number", "c.file_id", "f.name as file_name", "c.x", "c.y", "c.point_mm", "c.visibility", "c.assignee_id", "p.name as assignee_name", "c.body", "c.from_customer")
    .select("c.by_person_id", "c.by_guest_link_id", "c.by_name", "c.at", "c.closed_at", "c.closed_by_name")
    .select(tx.raw("(select count(*)::integer from callout_replies a where a.callout_id = c.id) as replies"));
  if (!viewerCan(viewer, "callout:internal")) void query.where("c.visibility", "customer").whereNotNull("r.shared_at");
  return query;
}

const toNumberOrNull = (text: NumericText | null) => (text === null ? null : Number(text));

const toCallout = (row: CalloutRow): Callout => ({
  id: row.id,
  jobId: row.job_id,
  revisionId: row.revision_id,
  number: row.number,
  fileId: row.file_id,
  fileName: row.file_name,
  x: toNumberOrNull(row.x),
  y: toNumberOrNull(row.y),
  pointMm: row.point_mm === null ? null : (row.point_mm.map(Number) as [number, number, number]),
  visibility: row.visibility,
  assigneeId: row.assignee_id,
  assigneeName: row.assignee_name,
  body: row.body,
  fromCustomer: row.from_customer,
  byPersonId: row.by_person_id,
  byGuestLinkId: row.by_guest_link_id,
  byName: row.by_name,
  at: row.at,
  closedAt: row.closed_at,
  closedByName: row.closed_by_name,
  replies: row.replies,
});

export async function findCallout(tx: Tx, viewer: Viewer, id: string): Promise<Callout | undefined> {
  const row = (await selectCallouts(tx, viewer).where("c.id", id).first()) as CalloutRow | undefined;
  return row && toCallout(row);
}

export async function listCallouts(tx: Tx, viewer: Viewer, of: { revisionId: string } | { fileId: string } | { fileIds: readonly string[] }): Promise<Callout[]> {
  const query = selectCallouts(tx, viewer);
  if ("revisionId" in of) void query.where("c.revision_id", of.revisionId);
  else if ("fileId" in of) void query.where("c.file_id", of.fileId);
  else void query.whereIn("c.file_id", of.fileIds);
  return ((await query) as CalloutRow[]).map(toCallout);
}

export interface CalloutReply {
  id: string;
  body: string;
  byName: string;
  at: Date;
}

/** Who may see the callout may see its replies. */
export async function listCalloutReplies(tx: Tx, calloutId: string): Promise<CalloutReply[]> {
  const rows = (await tx("callout_replies").where({ callout_id: calloutId }).orderBy("at").orderBy("id").select("id", "body", "by_name", "at")) as Array<{ id: string; body: string; by_name: string; at: Date }>;
  return rows.map((row) => ({ id: row.id, body: row.body, byName: row.by_name, at: row.at }));
}

interface By {
  personId: string | null;
  guestLinkId: string | null;
  name: string;
}

const signedBy = (by: By) => ({ by_person_id: by.personId, by_guest_link_id: by.guestLinkId, by_name: by.name });

export interface NewCallout {
  shopId: string;
  jobId: string;
  revisionId: string;
  spot: { fileId: string; x: number; y: number } | { pointMm: readonly [number, number, number] };
  visibility: Visibility;
  assigneeId: string | null;
  body: string;
  fromCustomer: boolean;
  by: By;
}

export async function addCallout(tx: Tx, callout: NewCallout): Promise<{ id: string; number: number }> {
  // Two at once get two numbers. Not the revision's row: a conversation must not wait for a release.
  await tx.raw("select pg_advisory_xact_lock(hashtextextended('callouts:' || ?, 0))", [callout.revisionId]);
  const [row] = await tx("callouts")
    .insert({
      shop_id: callout.shopId,
      job_id: callout.jobId,
      revision_id: callout.revisionId,
      number: tx.raw("(select coalesce(max(number), 0) + 1 from callouts where revision_id = ?)", [callout.revisionId]),
      ...("fileId" in callout.spot ? { file_id: callout.spot.fileId, x: callout.spot.x, y: callout.spot.y } : { point_mm: [...callout.spot.pointMm] }),
      visibility: callout.visibility,
      assignee_id: callout.assigneeId,
      body: callout.body,
      from_customer: callout.fromCustomer,
      ...signedBy(callout.by),
    })
    .returning(["id", "number"]);
  return { id: row.id as string, number: row.number as number };
}

export async function addCalloutReply(tx: Tx, reply: { shopId: string; callout: Pick<Callout, "id" | "jobId" | "revisionId">; body: string; by: By }): Promise<string> {
  const [row] = await tx("callout_replies")
    .insert({ shop_id: reply.shopId, job_id: reply.callout.jobId, revision_id: reply.callout.revisionId, callout_id: reply.callout.id, body: reply.body, ...signedBy(reply.by) })
    .returning("id");
  return row.id as string;
}

/** Closes or opens again; says whether that changed anything. */
export async function setCalloutClosed(tx: Tx, id: string, closedBy: string | null): Promise<boolean> {
  const query = tx("callouts").where({ id });
  void (closedBy === null ? query.whereNotNull("closed_at") : query.whereNull("closed_at"));
  return (await query.update({ closed_at: closedBy === null ? null : tx.fn.now(), closed_by_name: closedBy })) === 1;
}

export async function setCalloutAssignee(tx: Tx, id: string, assigneeId: string | null): Promise<void> {
  await tx("callouts").where({ id }).update({ assignee_id: assigneeId });
}
