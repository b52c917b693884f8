import { readTableQuery } from "#app/components/table-query.ts";
import { customerSorts, listCustomers } from "#app/data/customers.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { csvResponse } from "#app/http/csv.server.ts";
import type { Route } from "./+types/customers-csv.ts";

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "customer:read");
  const { searchParams } = new URL(request.url);
  const list = { ...readTableQuery(searchParams, Object.keys(customerSorts), "name"), withSetAside: searchParams.get("aside") === "1" };
  const { rows } = await inShop(viewer, (tx) => listCustomers(tx, list, true));
  return csvResponse("customers", [
    { key: "name", header: "Name" },
    { key: "email", header: "E-mail" },
    { key: "phone", header: "Phone" },
    { key: "jobs", header: "Jobs" },
    { key: "note", header: "Note" },
  ], rows.map((row) => ({ ...row })));
}
