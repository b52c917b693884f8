import { href, redirect } from "react-router";
import { Cautions } from "#app/components/caution.tsx";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { listCautionReads } from "#app/data/caution-reads.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { cautionsFor, type Fluid } from "#app/domain/cautions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { readCautions } from "#app/services/cautions.server.ts";
import type { Route } from "./+types/cautions.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Cautions · Spotblue" }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Cautions") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "gate:read");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    const part = orNotFound(await findPart(tx, place.part.id));
    const read = await listCautionReads(tx, place.revision.id);
    const cautions = cautionsFor({ speed_rpm: part.speedRpm, pressure_MPa: part.pressureMPa, temperature_C: part.temperatureC, fluid: part.fluid as Fluid | null, lifting: part.lifting });
    return { place, cautions: cautions.map((caution) => ({ ...caution, readBy: read.find(({ caution: code, basis }) => code === caution.code && basis === caution.basis)?.byName ?? null })) };
  });
}

export async function action({ params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "gate:propose");
  const revisionId = idParam(params.revisionId);
  await readCautions(viewer, revisionId);
  return redirect(href("/revisions/:revisionId/gate", { revisionId }));
}

export default function CautionsPage({ loaderData }: Route.ComponentProps) {
  const { place, cautions } = loaderData;
  const unread = cautions.filter(({ readBy }) => readBy === null);
  return (
    <Sheet>
      <SheetHeading title={unread.length === 0 ? "The cautions were read" : unread.length === 1 ? "One caution to read" : `${unread.length} cautions to read`} lead="They follow from what this part meets in service: speed, pressure, heat, fluid, lifting. When that changes, they are asked again." />
      <Cautions cautions={cautions.map(({ title, text, basis, code }) => ({ code, title, text, basis }))} title="Cautions" />
      <div className="mt-6">
        {place.revision.sealed ? null : unread.length > 0 ? (
          <EntryForm>
            <SubmitButton bench>I have read and understood them</SubmitButton>
          </EntryForm>
        ) : (
          <LinkButton to={href("/revisions/:revisionId/gate", { revisionId: place.revision.id })}>To the gate</LinkButton>
        )}
      </div>
    </Sheet>
  );
}
