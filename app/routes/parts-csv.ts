import { findJob } from "#app/data/jobs.server.ts";
import { listPartsWithLatest } from "#app/data/parts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { seesOnlyShared } from "#app/data/shared.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { csvResponse } from "#app/http/csv.server.ts";
import type { Route } from "./+types/parts-csv.ts";

/** The parts of a job, as the job's page lists them. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "part:read");
  const { job, parts } = await inShop(viewer, async (tx) => {
    const job = orNotFound(await findJob(tx, idParam(params.jobId)));
    return { job, parts: await listPartsWithLatest(tx, job.id, { onlyShared: seesOnlyShared(viewer) }) };
  });
  return csvResponse(`parts ${job.number}`, [
    { key: "number", header: "Number" },
    { key: "name", header: "Part" },
    { key: "kit", header: "Kind" },
    { key: "materialName", header: "Stock" },
    { key: "quantity", header: "Pieces" },
    { key: "latestOrdinal", header: "Newest revision" },
    { key: "letter", header: "Released as" },
  ], parts.map((part) => ({ ...part })));
}
