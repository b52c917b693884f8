import { data } from "react-router";
import { idParam } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { cancelUpload, finishUpload, presignParts } from "#app/services/uploads.server.ts";
import type { Route } from "./+types/api-upload.ts";

const mostAtOnce = 100;

/** Addresses for parts: `?parts=3,4,5`. */
export async function loader({ request, params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "file:upload");
  const asked = (new URL(request.url).searchParams.get("parts") ?? "").split(",").map(Number).filter(Number.isInteger).slice(0, mostAtOnce);
  const parts = await presignParts(viewer, idParam(params.fileId), asked);
  if (!parts) throw new Response("Not found", { status: 404 });
  return data({ parts }, { headers: { "Cache-Control": "no-store" } });
}

/** POST: all parts are sent. DELETE: the upload is ended on purpose. */
export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "file:upload");
  const fileId = idParam(params.fileId);
  if (request.method === "DELETE") {
    if (!(await cancelUpload(viewer, fileId))) throw new Response("Not found", { status: 404 });
    return data({ ended: true });
  }
  const finished = await finishUpload(viewer, fileId);
  return finished.ok ? data({ checking: true }) : data({ reason: finished.reason }, { status: finished.status });
}
