import { addCustomer, changeCustomer, findCustomer, setCustomerAside, type Customer, type CustomerValues } from "#app/data/customers.server.ts";
import { logOf, writeLog } from "#app/data/logbook.server.ts";
import { orNotFound, type Tx } from "#app/data/scope.server.ts";
import type { Viewer } from "#app/domain/viewer.ts";

export async function createCustomer(tx: Tx, viewer: Viewer, values: CustomerValues): Promise<string> {
  const id = await addCustomer(tx, viewer.shopId, values);
  await writeLog(tx, logOf(viewer, "added a customer", { type: "customer", id }, { name: values.name }));
  return id;
}

/** Changes a customer, unless somebody did meanwhile: then the caller gets what stands there now. */
export async function editCustomer(tx: Tx, viewer: Viewer, id: string, rowVersion: number, values: CustomerValues): Promise<{ ok: true } | { ok: false; current: Customer }> {
  if (!(await changeCustomer(tx, id, rowVersion, values))) return { ok: false, current: orNotFound(await findCustomer(tx, id)) };
  await writeLog(tx, logOf(viewer, "changed a customer", { type: "customer", id }, { name: values.name }));
  return { ok: true };
}

export async function putCustomerAside(tx: Tx, viewer: Viewer, id: string, aside: boolean): Promise<void> {
  orNotFound(await findCustomer(tx, id));
  await setCustomerAside(tx, id, aside);
  await writeLog(tx, logOf(viewer, aside ? "set a customer aside" : "took a customer up again", { type: "customer", id }));
}
