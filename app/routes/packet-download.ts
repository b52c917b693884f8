import { redirect } from "react-router";
import { idParam } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { fetchPacket } from "#app/services/packets.server.ts";
import type { Route } from "./+types/packet-download.ts";

/** The packet, or with ?what=sheet the printed release sheet. Fetching the packet is entered in the logbook. */
export async function loader({ request, params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "packet:read");
  const what = new URL(request.url).searchParams.get("what") === "sheet" ? "sheet" : "packet";
  const address = await fetchPacket(viewer, idParam(params.decisionId), what);
  if (!address) throw new Response("The packet is still being made", { status: 409, statusText: "Still being made" });
  return redirect(address, { headers: { "Cache-Control": "no-store" } });
}
