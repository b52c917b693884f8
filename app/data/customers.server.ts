import { listPage, type ListPage, type ListQuery } from "./list.server.ts";
import { updateIfUnchanged } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Customer {
  id: string;
  name: string;
  email: string | null;
  phone: string | null;
  note: string;
  personId: string | null;
  setAside: boolean;
  rowVersion: number;
}

interface CustomerRow {
  id: string;
  name: string;
  email: string | null;
  phone: string | null;
  note: string;
  person_id: string | null;
  set_aside_at: Date | null;
  row_version: number;
}

const columns = ["customers.id", "customers.name", "customers.email", "customers.phone", "customers.note", "customers.person_id", "customers.set_aside_at", "customers.row_version"];

function toCustomer(row: CustomerRow): Customer {
  return { id: row.id, name: row.name, email: row.email, phone: row.phone, note: row.note, personId: row.person_id, setAside: row.set_aside_at !== null, rowVersion: row.row_version };
}

export const customerSorts = { name: "customers.name", email: "customers.email", jobs: "jobs" } as const;

export async function listCustomers(tx: Tx, list: ListQuery, all = false): Promise<ListPage<Customer & { jobs: number }>> {
  const query = tx("customers").select(columns).select(tx.raw("(select count(*)::integer from jobs where jobs.customer_id = customers.id and jobs.set_aside_at is null) as jobs"));
  if (!list.withSetAside) void query.whereNull("customers.set_aside_at");
  const page = await listPage<CustomerRow & { jobs: number }>(query, list, { sortColumns: customerSorts, searched: ["customers.name", "customers.email", "customers.phone"], tieBreak: "customers.id", all });
  return { ...page, rows: page.rows.map((row) => ({ ...toCustomer(row), jobs: row.jobs })) };
}

export async function findCustomer(tx: Tx, id: string): Promise<Customer | undefined> {
  const row = (await tx("customers").select(columns).where("customers.id", id).first()) as CustomerRow | undefined;
  return row && toCustomer(row);
}

/** For a select field: those not set aside, by name. */
export async function listCustomerNames(tx: Tx): Promise<Array<{ id: string; name: string }>> {
  return tx("customers").select("id", "name").whereNull("set_aside_at").orderBy("name");
}

export interface CustomerValues {
  name: string;
  email: string | null;
  phone: string | null;
  note: string;
}

export async function addCustomer(tx: Tx, shopId: string, values: CustomerValues): Promise<string> {
  const [row] = await tx("customers").insert({ shop_id: shopId, ...values }).returning("id");
  return row.id as string;
}

export async function changeCustomer(tx: Tx, id: string, rowVersion: number, values: CustomerValues): Promise<boolean> {
  return updateIfUnchanged(tx, "customers", id, rowVersion, { ...values });
}

export async function setCustomerAside(tx: Tx, id: string, aside: boolean): Promise<void> {
  await tx("customers").where({ id }).update({ set_aside_at: aside ? tx.fn.now() : null, row_version: tx.raw("row_version + 1") });
}
