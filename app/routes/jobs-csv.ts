import { readTableQuery } from "#app/components/table-query.ts";
import { jobSorts, listJobs } from "#app/data/jobs.server.ts";
import { inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { csvResponse } from "#app/http/csv.server.ts";
import type { Route } from "./+types/jobs-csv.ts";

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "job:read");
  const { searchParams } = new URL(request.url);
  const list = { ...readTableQuery(searchParams, Object.keys(jobSorts), "due"), withSetAside: searchParams.get("aside") === "1" };
  const { rows } = await inShop(viewer, (tx) => listJobs(tx, list, true));
  const columns = [
    { key: "number", header: "Number" },
    { key: "title", header: "Job" },
    ...(can(viewer.roles, "customer:read") ? [{ key: "customerName", header: "Customer" }] : []),
    { key: "parts", header: "Parts" },
    { key: "dueOn", header: "Due" },
  ];
  return csvResponse("jobs", columns, rows.map((row) => ({ ...row })));
}
