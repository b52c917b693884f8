import type { Json } from "#app/domain/canonical.ts";
import { entryHash, FIRST_PREVIOUS_HASH, verifyChain, type ChainedEntry, type ChainVerdict, type LogbookEntry, type LogbookHead } from "#app/domain/logbook.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { listPage, type ListPage, type ListQuery } from "./list.server.ts";
import type { Tx } from "./scope.server.ts";

export interface NewEntry {
  shopId: string;
  actorId: string | null;
  actor: string;
  action: string;
  subjectType: string;
  subjectId: string | null;
  jobId?: string | null;
  detail?: { readonly [key: string]: Json };
}

/**
 * Enters something that happened, chained to the entry before. Call it last in a transaction:
 * the shop's chain is locked until it commits.
 */
export async function writeLog(tx: Tx, entry: NewEntry): Promise<void> {
  await tx.raw("select pg_advisory_xact_lock(hashtextextended('logbook:' || ?, 0))", [entry.shopId]);
  const { rows } = await tx.raw<{ rows: Array<{ seq: string; hash: string }> }>("select * from scope.logbook_head(?)", [entry.shopId]);
  const previousHash = rows[0]?.hash ?? FIRST_PREVIOUS_HASH;
  const chained: LogbookEntry = {
    shopId: entry.shopId,
    seq: Number(rows[0]?.seq ?? 0) + 1,
    at: new Date().toISOString(),
    actorId: entry.actorId,
    actor: entry.actor,
    action: entry.action,
    subjectType: entry.subjectType,
    subjectId: entry.subjectId,
    jobId: entry.jobId ?? null,
    detail: entry.detail ?? {},
  };
  await tx("logbook").insert({
    shop_id: chained.shopId,
    seq: chained.seq,
    at: chained.at,
    actor_id: chained.actorId,
    actor: chained.actor,
    action: chained.action,
    subject_type: chained.subjectType,
    subject_id: chained.subjectId,
    job_id: chained.jobId,
    detail: JSON.stringify(chained.detail),
    previous_hash: previousHash,
    hash: entryHash(previousHash, chained),
  });
}

/** The usual entry: what this viewer did, to what. */
export function logOf(viewer: Viewer, action: string, subject: { type: string; id: string | null; jobId?: string | null }, detail: { readonly [key: string]: Json } = {}): NewEntry {
  return { shopId: viewer.shopId, actorId: viewer.personId ?? viewer.guestLinkId, actor: viewer.name, action, subjectType: subject.type, subjectId: subject.id, jobId: subject.jobId ?? null, detail };
}

interface LogbookRow {
  shop_id: string;
  seq: string;
  at: Date;
  actor_id: string | null;
  actor: string;
  action: string;
  subject_type: string;
  subject_id: string | null;
  job_id: string | null;
  detail: LogbookEntry["detail"];
  previous_hash: string;
  hash: string;
}

function toChained(row: LogbookRow): ChainedEntry {
  const entry: LogbookEntry = {
    shopId: row.shop_id,
    seq: Number(row.seq),
    at: row.at.toISOString(),
    actorId: row.actor_id,
    actor: row.actor,
    action: row.action,
    subjectType: row.subject_type,
    subjectId: row.subject_id,
    jobId: row.job_id,
    detail: row.detail,
  };
  return { entry, previousHash: row.previous_hash, hash: row.hash };
}

export const logbookSorts = { seq: "logbook.seq", actor: "logbook.actor", action: "logbook.action" } as const;

export async function listLogbook(tx: Tx, list: ListQuery, filter: { jobId?: string }, all = false): Promise<ListPage<ChainedEntry>> {
  const query = tx("logbook").select("logbook.*");
  if (filter.jobId) void query.where("logbook.job_id", filter.jobId);
  const page = await listPage<LogbookRow>(query, list, { sortColumns: logbookSorts, searched: ["logbook.actor", "logbook.action", "logbook.subject_type"], tieBreak: "logbook.seq", all });
  return { ...page, rows: page.rows.map(toChained) };
}

/** Reads the shop's whole chain and says whether each entry is the one that was written. */
export async function checkLogbook(tx: Tx, shopId: string): Promise<ChainVerdict> {
  const rows = (await tx("logbook").where({ shop_id: shopId }).orderBy("seq")) as LogbookRow[];
  return verifyChain(rows.map(toChained));
}

/** Where the shop's logbook stands; null before the first entry. */
export async function findLogbookHead(tx: Tx, shopId: string): Promise<LogbookHead | null> {
  const { rows } = await tx.raw<{ rows: Array<{ seq: string; hash: string }> }>("select * from scope.logbook_head(?)", [shopId]);
  return rows[0] ? { seq: Number(rows[0].seq), hash: rows[0].hash } : null;
}
