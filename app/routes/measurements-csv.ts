import { findMatingPart, listMeasurements } from "#app/data/mating-parts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { csvResponse } from "#app/http/csv.server.ts";
import type { Route } from "./+types/measurements-csv.ts";

/** What was measured on a mating part, in mm as read; readings set aside are marked. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "mating-part:read");
  const { matingPart, rows } = await inShop(viewer, async (tx) => {
    const matingPart = orNotFound(await findMatingPart(tx, idParam(params.matingPartId)));
    return { matingPart, rows: await listMeasurements(tx, matingPart.id) };
  });
  return csvResponse(`measurements ${matingPart.name}`, [
    { key: "name", header: "Measured" },
    { key: "valueMm", header: "Reading (mm)" },
    { key: "uncertaintyMm", header: "Uncertainty U (mm)" },
    { key: "instrument", header: "Instrument" },
    { key: "note", header: "Note" },
    { key: "measuredBy", header: "By" },
    { key: "measuredOn", header: "On" },
    { key: "setAside", header: "Set aside" },
  ], rows.map((row) => ({ ...row })));
}
