import { data } from "react-router";
import { z } from "zod";
import { requireCan } from "#app/http/context.server.ts";
import { beginUpload } from "#app/services/uploads.server.ts";
import type { Route } from "./+types/api-uploads.ts";

const target = z.discriminatedUnion("to", [
  z.object({ to: z.literal("revision"), id: z.uuid() }),
  z.object({ to: z.literal("mating-part"), id: z.uuid() }),
  z.object({ to: z.literal("fit-check"), id: z.uuid(), characteristicId: z.uuid().nullable() }),
  z.object({ to: z.literal("answer"), id: z.uuid() }),
]);

const announcement = z.object({
  name: z.string().trim().min(1).max(255),
  bytes: z.int().nonnegative(),
  sha256: z.string().regex(/^[0-9a-f]{64}$/),
  kind: z.enum(["step", "stl", "photo", "pdf"]),
  mediaType: z.string().max(100),
  unit: z.enum(["mm", "in"]).nullable(),
  target,
});

/** Announces a file; answers with the ticket to send it by. */
export async function action({ request, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "file:upload");
  const parsed = announcement.safeParse(await request.json().catch(() => null));
  if (!parsed.success) return data({ reason: `This is not an upload: ${parsed.error.issues.map((issue) => `${issue.path.join(".")}: ${issue.message}`).join("; ")}` }, { status: 400 });
  const begun = await beginUpload(viewer, parsed.data);
  return begun.ok ? data(begun.ticket, { status: 201 }) : data({ reason: begun.reason }, { status: begun.status });
}

/** Nothing to read here: what became of an upload stands on the page it was meant for. */
export function loader({ context }: Route.LoaderArgs) {
  requireCan(context, "file:upload");
  throw new Response("Not found", { status: 404 });
}
