import { redirect } from "react-router";
import type { DerivedKind } from "#app/data/files.server.ts";
import { idParam, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { derivedAddress } from "#app/services/files.server.ts";
import type { Route } from "./+types/file-derived.ts";

const kinds: readonly DerivedKind[] = ["view-mesh", "thumbnail", "screen"];

/** A picture or view mesh made from a file: /files/…/screen. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "model:view");
  const kind = orNotFound(kinds.find((one) => one === params.kind));
  return redirect(orNotFound(await derivedAddress(viewer, idParam(params.fileId), kind)), { headers: { "Cache-Control": "no-store" } });
}
