import { useState } from "react";
import { data, href, redirect } from "react-router";
import { z } from "zod";
import { CalloutForm } from "#app/components/callout-form.tsx";
import { LengthField } from "#app/components/fields.tsx";
import { FieldGroup } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { ModelViewer } from "#app/components/viewer/model-viewer.tsx";
import { listCallouts } from "#app/data/callouts.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { calloutFields } from "#app/http/callout-form.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { length } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import { listAssignable, putModelCallout } from "#app/services/callouts.server.ts";
import { findViewModel } from "#app/services/view-model.server.ts";
import type { Route } from "./+types/callout-new.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Callout on ${loaderData?.place.part.name} ${loaderData?.place.revision.ordinal} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => revisionCrumbs(place, "Callout on the model") };

/** A callout on a point of the model; customers put theirs on photos. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "callout:internal");
  return inShop(viewer, async (tx) => {
    const place = await loadRevisionPlace(tx, idParam(params.revisionId));
    const callouts = await listCallouts(tx, viewer, { revisionId: place.revision.id });
    return {
      place,
      model: await findViewModel(tx, place.revision.id),
      markers: callouts.flatMap(({ id, number, pointMm, body, closedAt }) => (pointMm && !closedAt ? [{ id, number, point_mm: pointMm, label: body, href: href("/callouts/:calloutId", { calloutId: id }) }] : [])),
      people: (await listAssignable(tx)).map(({ personId, name }) => ({ personId, name })),
    };
  });
}

const say = "Touch the model where you mean, or give its coordinates";
const modelCalloutForm = (units: "mm" | "in") => z.object({ ...calloutFields, x: length(units, say, { min: -10_000, max: 10_000 }), y: length(units, say, { min: -10_000, max: 10_000 }), z: length(units, say, { min: -10_000, max: 10_000 }) });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "callout:internal");
  const formData = await request.formData();
  const form = parseForm(modelCalloutForm, formData);
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  const { x, y, z: height, ...input } = form.value;
  const put = await putModelCallout(viewer, idParam(params.revisionId), [x, y, height], input);
  if (put.ok) return redirect(href("/callouts/:calloutId", { calloutId: put.calloutId }));
  return data({ errors: { assigneeId: ["This person left the shop meanwhile. Pick another."] } as Record<string, string[]>, values: Object.fromEntries([...formData].map(([name, value]) => [name, String(value)])) }, { status: 409 });
}

export default function CalloutNewPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, model, markers, people } = loaderData;
  const typed = actionData?.values;
  const [point, setPoint] = useState<{ mm: readonly [number, number, number]; on: string } | null>(null);
  return (
    <Sheet>
      <SheetHeading title={`A callout on ${place.part.name} ${place.revision.ordinal}`} lead="Touch the model where you mean, or give the coordinates of the point." />
      {model ? (
        <div className="mb-5 h-[55vh] min-h-80 border border-hairline">
          <ModelViewer
            meshUrl={href("/files/:fileId/:kind", { fileId: model.fileId, kind: "view-mesh" })}
            pictureUrl={model.pictured ? href("/files/:fileId/:kind", { fileId: model.fileId, kind: "thumbnail" }) : null}
            name={`${place.part.name}, revision ${place.revision.ordinal}`}
            closed={model.closed}
            markers={markers}
            onPickPoint={(mm, on) => setPoint({ mm, on })}
          />
        </div>
      ) : (
        <Notice kind="info" action={<LinkButton to={href("/revisions/:revisionId/files", { revisionId: place.revision.id })} weight="quiet">Look at the files</LinkButton>}>
          There is no view of the model yet. The point can be given by its coordinates.
        </Notice>
      )}
      <CalloutForm errors={actionData?.errors} values={typed && point ? without(typed, ["x", "y", "z"]) : typed} people={people}>
        <FieldGroup legend={point ? `The point, on ${point.on}` : "The point"} columns={3} key={point ? point.mm.join(" ") : "typed"}>
          {(["x", "y", "z"] as const).map((axis, index) => (
            <LengthField key={axis} name={axis} label={axis.toUpperCase()} defaultMm={point ? Number(point.mm[index]!.toFixed(3)) : null} />
          ))}
        </FieldGroup>
      </CalloutForm>
    </Sheet>
  );
}

/** A point that was picked takes the place of what was typed before. */
function without(values: Record<string, string>, names: string[]): Record<string, string> {
  return Object.fromEntries(Object.entries(values).filter(([name]) => !names.includes(name)));
}
