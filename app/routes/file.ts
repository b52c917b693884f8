import { redirect } from "react-router";
import { idParam, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { originalAddress } from "#app/services/files.server.ts";
import type { Route } from "./+types/file.ts";

/** A file as it was uploaded. The address stays, and asks for permission each time. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "model:download");
  return redirect(orNotFound(await originalAddress(viewer, idParam(params.fileId))), { headers: { "Cache-Control": "no-store" } });
}
