import { listCharacteristics } from "#app/data/characteristics.server.ts";
import { listMatingParts } from "#app/data/mating-parts.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { csvResponse } from "#app/http/csv.server.ts";
import type { Route } from "./+types/characteristics-csv.ts";

/** A part's characteristics in mm, in the order in which they are tried. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "fit-check:read");
  const { part, rows } = await inShop(viewer, async (tx) => {
    const part = orNotFound(await findPart(tx, idParam(params.partId)));
    const names = new Map((await listMatingParts(tx, part.jobId)).map(({ id, name }) => [id, name]));
    return { part, rows: (await listCharacteristics(tx, part.id)).map((row) => ({ ...row, matingPart: names.get(row.matingPartId ?? "") ?? "" })) };
  });
  return csvResponse(`characteristics ${part.number}`, [
    { key: "name", header: "Characteristic" },
    { key: "kind", header: "Kind" },
    { key: "question", header: "Question" },
    { key: "nominalMm", header: "Nominal (mm)" },
    { key: "fitClass", header: "Class" },
    { key: "lowerMm", header: "Lower limit (mm)" },
    { key: "upperMm", header: "Upper limit (mm)" },
    { key: "printLowerMm", header: "Print lower limit (mm)" },
    { key: "printUpperMm", header: "Print upper limit (mm)" },
    { key: "method", header: "Method" },
    { key: "places", header: "Places" },
    { key: "matingPart", header: "Tried on" },
    { key: "required", header: "Required" },
    { key: "critical", header: "Critical" },
    { key: "photoRequired", header: "Photo required" },
    { key: "provableOnPrint", header: "A print can show it" },
  ], rows);
}
