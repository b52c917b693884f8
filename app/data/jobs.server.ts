import { listPage, type ListPage, type ListQuery } from "./list.server.ts";
import { dateText, updateIfUnchanged } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Job {
  id: string;
  number: string;
  title: string;
  customerId: string;
  /** null for viewers who may not see customers. */
  customerName: string | null;
  dueOn: string | null;
  promise: string;
  /** Minor units of the shop's currency; null while nothing is agreed. */
  depositAgreedMinor: number | null;
  depositNoneReason: string | null;
  setAside: boolean;
  rowVersion: number;
}

interface JobRow {
  id: string;
  number: string;
  title: string;
  customer_id: string;
  customer_name: string | null;
  due_on: string | null;
  promise: string;
  deposit_agreed_minor: string | null;
  deposit_none_reason: string | null;
  set_aside_at: Date | null;
  row_version: number;
}

function selectJobs(tx: Tx) {
  // A left join: who is kept to jobs sees no customers, and still their job.
  return tx("jobs")
    .leftJoin("customers", "customers.id", "jobs.customer_id")
    .select("jobs.id", "jobs.number", "jobs.title", "jobs.customer_id", "customers.name as customer_name", "jobs.promise", "jobs.deposit_agreed_minor", "jobs.deposit_none_reason", "jobs.set_aside_at", "jobs.row_version")
    .select(dateText(tx, "jobs.due_on"));
}

function toJob(row: JobRow): Job {
  return {
    id: row.id,
    number: row.number,
    title: row.title,
    customerId: row.customer_id,
    customerName: row.customer_name,
    dueOn: row.due_on,
    promise: row.promise,
    depositAgreedMinor: row.deposit_agreed_minor === null ? null : Number(row.deposit_agreed_minor),
    depositNoneReason: row.deposit_none_reason,
    setAside: row.set_aside_at !== null,
    rowVersion: row.row_version,
  };
}

export const jobSorts = { number: "jobs.number", title: "jobs.title", customer: "customers.name", due: "jobs.due_on", parts: "parts" } as const;

export async function listJobs(tx: Tx, list: ListQuery, all = false): Promise<ListPage<Job & { parts: number }>> {
  const query = selectJobs(tx).select(tx.raw("(select count(*)::integer from parts where parts.job_id = jobs.id and parts.set_aside_at is null) as parts"));
  if (!list.withSetAside) void query.whereNull("jobs.set_aside_at");
  const page = await listPage<JobRow & { parts: number }>(query, list, { sortColumns: jobSorts, searched: ["jobs.number", "jobs.title", "customers.name"], tieBreak: "jobs.id", all });
  return { ...page, rows: page.rows.map((row) => ({ ...toJob(row), parts: row.parts })) };
}

export async function findJob(tx: Tx, id: string): Promise<Job | undefined> {
  const row = (await selectJobs(tx).where("jobs.id", id).first()) as JobRow | undefined;
  return row && toJob(row);
}

/** The number a new job is offered: the year and the next count in it, "2026-014". */
export async function nextJobNumber(tx: Tx, year: number): Promise<string> {
  const row = await tx("jobs").where("number", "like", `${year}-%`).max("number as last").first();
  const last = Number(/-(\d+)$/.exec((row?.last as string | null) ?? "")?.[1] ?? 0);
  return `${year}-${String(last + 1).padStart(3, "0")}`;
}

export interface JobValues {
  number: string;
  customerId: string;
  title: string;
  dueOn: string | null;
  promise: string;
}

const toColumns = (values: JobValues) => ({ number: values.number, customer_id: values.customerId, title: values.title, due_on: values.dueOn, promise: values.promise });

export async function addJob(tx: Tx, shopId: string, values: JobValues): Promise<string> {
  const [row] = await tx("jobs").insert({ shop_id: shopId, ...toColumns(values) }).returning("id");
  return row.id as string;
}

export async function changeJob(tx: Tx, id: string, rowVersion: number, values: JobValues): Promise<boolean> {
  return updateIfUnchanged(tx, "jobs", id, rowVersion, toColumns(values));
}

export async function setJobAside(tx: Tx, id: string, aside: boolean): Promise<void> {
  await tx("jobs").where({ id }).update({ set_aside_at: aside ? tx.fn.now() : null, row_version: tx.raw("row_version + 1") });
}

/** What was agreed of a deposit; the two exclude each other. */
export async function changeDeposit(tx: Tx, id: string, rowVersion: number, agreed: Pick<Job, "depositAgreedMinor" | "depositNoneReason">): Promise<boolean> {
  return updateIfUnchanged(tx, "jobs", id, rowVersion, { deposit_agreed_minor: agreed.depositAgreedMinor, deposit_none_reason: agreed.depositNoneReason });
}

/** Locks the job until the transaction ends; false when it is not here. */
export async function lockJob(tx: Tx, id: string): Promise<boolean> {
  return (await tx("jobs").where({ id }).forUpdate().first("id")) !== undefined;
}
