import type { Knex } from "knex";
import { db } from "#db/connection.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";

/** One transaction of one shop. Queries take it as their first argument and use nothing else. */
export type Tx = Knex.Transaction;

/**
 * Runs `work` in a transaction that sees the viewer's shop, and of it only the viewer's jobs.
 *
 * Row-level security does the keeping: without this scope every tenant table is empty. The
 * settings are local to the transaction, so a pooled connection carries nothing over.
 * No mail, store or queue call and no deferred promise belongs inside.
 */
export async function inShop<T>(viewer: Pick<Viewer, "shopId" | "jobs">, work: (tx: Tx) => Promise<T>): Promise<T> {
  return db().transaction(async (tx) => {
    const jobIds = viewer.jobs === "*" ? "*" : `{${viewer.jobs.join(",")}}`;
    await tx.raw("select set_config('app.shop_id', ?, true), set_config('app.job_ids', ?, true)", [viewer.shopId, jobIds]);
    return work(tx);
  });
}

/** A transaction without a shop: accounts, sessions, and the doors in schema `scope`. */
export async function outsideShops<T>(work: (tx: Tx) => Promise<T>): Promise<T> {
  return db().transaction(work);
}

/** The row, or the 404 that a stranger's row gets too. */
export function orNotFound<T>(row: T | undefined | null): T {
  if (row === undefined || row === null) throw new Response("Not found", { status: 404, statusText: "Not found" });
  return row;
}

const uuidPattern = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/i;

/** An id from a URL. One that can't be an id is a 404, and never reaches the database as an error. */
export function idParam(value: string | undefined): string {
  if (!value || !uuidPattern.test(value)) throw new Response("Not found", { status: 404, statusText: "Not found" });
  return value.toLowerCase();
}
