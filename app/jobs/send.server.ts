import PgBoss from "pg-boss";
import type { Tx } from "#app/data/scope.server.ts";
import { env } from "#app/env.server.ts";
import type { JobPayload, QueueName } from "./queues.ts";

let sender: PgBoss | undefined;

/**
 * Sends a job inside the caller's transaction: it exists when, and only when, that commits.
 * The worker is woken by the notice, and would find the job by polling all the same.
 */
export async function sendJob(tx: Tx, queue: QueueName, payload: JobPayload, options: { startAfter?: number; singletonKey?: string } = {}): Promise<void> {
  sender ??= new PgBoss({ connectionString: env.DATABASE_URL, supervise: false, schedule: false, migrate: false });
  const connection = (await tx.client.acquireConnection()) as { query(text: string, values?: unknown[]): Promise<{ rows: unknown[] }> };
  await sender.send(queue, payload, { ...options, db: { executeSql: (text: string, values: unknown[]) => connection.query(text, values) as never } });
  await tx.raw("select pg_notify('spotblue_jobs', ?)", [queue]);
}
