import { data, href, redirect } from "react-router";
import { CalculationResultView } from "#app/components/calculation-result.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Day } from "#app/components/day.tsx";
import { Facts } from "#app/components/facts.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findStoredCalculation } from "#app/data/calculations.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import type { CalculationResult } from "#app/engineering/calculation.ts";
import { entriesOf, entryText } from "#app/engineering/entries.ts";
import { requireCan } from "#app/http/context.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { takeOffCalculation } from "#app/services/calculations.server.ts";
import { definingModel } from "#app/services/makeability.server.ts";
import type { Route } from "./+types/calculation.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.calculation.title} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place, calculation }) => revisionCrumbs(place, calculation.title) };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "calculation:read");
  return inShop(viewer, async (tx) => {
    const calculation = orNotFound(await findStoredCalculation(tx, idParam(params.calculationId)));
    const place = await loadRevisionPlace(tx, calculation.revisionId);
    const model = await definingModel(tx, calculation.revisionId);
    return {
      place,
      calculation,
      inputs: entriesOf(calculation.kind).filter(({ key }) => calculation.inputs[key] !== undefined).map(({ key, label, unit }) => ({ label, value: `${entryText(calculation.inputs[key])} ${unit}`.trim() })),
      stale: calculation.modelSha256 !== (model?.sha256 ?? null),
      mayWrite: can(viewer.roles, "calculation:write") && !place.revision.sealed,
    };
  });
}

export async function action({ params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "calculation:write");
  const removed = await takeOffCalculation(viewer, idParam(params.calculationId));
  if (!removed.ok) return data({ refused: "This revision was released: its calculations stay." }, { status: 409 });
  return redirect(href("/revisions/:revisionId/gate", { revisionId: removed.revisionId }));
}

export default function CalculationPage({ loaderData, actionData }: Route.ComponentProps) {
  const { calculation, place, inputs, stale, mayWrite } = loaderData;
  const again = `${href("/revisions/:revisionId/calculations/new", { revisionId: place.revision.id })}?kind=${calculation.kind}&from=${calculation.id}`;
  return (
    <Sheet
      left={
        <>
          <Section title="Inputs">
            <Facts facts={inputs} />
          </Section>
          {mayWrite && (
            <div className="mt-5 grid gap-3">
              <LinkButton to={again} wide>
                Compute again
              </LinkButton>
              <Confirm trigger="Take it off" weight="quiet" title="Take this calculation off?" text="The gate no longer counts it. It stays in the logbook." confirmText="Take it off" />
            </div>
          )}
        </>
      }
    >
      <SheetHeading title={calculation.title} lead={<>Attached by {calculation.byName}, <Day at={calculation.at} time />.</>} />
      {actionData?.refused && <Notice kind="error">{actionData.refused}</Notice>}
      {stale && <Notice kind="info">The model changed since. Compute it again before the gate counts it.</Notice>}
      <CalculationResultView result={calculation.result as unknown as CalculationResult} />
    </Sheet>
  );
}
