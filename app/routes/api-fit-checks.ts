import { data } from "react-router";
import { z } from "zod";
import { requireCan } from "#app/http/context.server.ts";
import { recordFitCheck } from "#app/services/fit-checks.server.ts";
import type { Route } from "./+types/api-fit-checks.ts";

const keyed = z.object({ text: z.string().trim().min(1).max(40), unit: z.enum(["mm", "in"]) });

const submission = z.object({
  draftKey: z.uuid(),
  printId: z.uuid(),
  matingPartId: z.uuid(),
  results: z
    .array(
      z.object({
        characteristicId: z.uuid(),
        readings: z.array(keyed).max(50),
        answers: z.array(z.boolean()).max(50),
        instrumentId: z.uuid().nullable(),
        bandPosition: keyed.nullable(),
        bandWidth: keyed.nullable(),
      }),
    )
    .max(500),
  cause: z.enum(["design", "print", "misread"]).nullable(),
  remarks: z.string().trim().max(2000),
  triedAt: z.iso.datetime(),
});

/** Takes a fit check as the phone kept it: the same draft twice is stored once, and answered the same. */
export async function action({ request, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "fit-check:record");
  const parsed = submission.safeParse(await request.json().catch(() => null));
  if (!parsed.success) return data({ reason: `This is not a fit check: ${parsed.error.issues.map((issue) => `${issue.path.join(".")}: ${issue.message}`).join("; ")}` }, { status: 400 });
  const recorded = await recordFitCheck(viewer, parsed.data);
  if (!recorded.ok) return data({ reason: recorded.reason }, { status: recorded.status });
  return data({ fitCheckId: recorded.fitCheckId }, { status: recorded.already ? 200 : 201 });
}

/** Nothing to read here: a fit check has its own page. */
export function loader({ context }: Route.LoaderArgs) {
  requireCan(context, "fit-check:record");
  throw new Response("Not found", { status: 404 });
}
