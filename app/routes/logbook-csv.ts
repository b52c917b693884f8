import { readTableQuery } from "#app/components/table-query.ts";
import { listLogbook, logbookSorts } from "#app/data/logbook.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { csvResponse } from "#app/http/csv.server.ts";
import type { Route } from "./+types/logbook-csv.ts";

export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "logbook:read");
  const { searchParams } = new URL(request.url);
  const job = searchParams.get("job");
  const { rows } = await inShop(viewer, (tx) => listLogbook(tx, readTableQuery(searchParams, Object.keys(logbookSorts), "-seq"), job ? { jobId: idParam(job) } : {}, true));
  const columns = ["seq", "at", "actor", "action", "subjectType", "subjectId", "jobId", "detail", "previousHash", "hash"].map((key) => ({ key, header: key }));
  return csvResponse("logbook", columns, rows.map(({ entry, previousHash, hash }) => ({ ...entry, detail: JSON.stringify(entry.detail), previousHash, hash })));
}
