import { requireViewer } from "#app/http/context.server.ts";
import { eventStream } from "#app/http/events.server.ts";
import type { Route } from "./+types/api-events.ts";

export function loader({ request, context }: Route.LoaderArgs) {
  return eventStream(requireViewer(context), request.signal);
}
