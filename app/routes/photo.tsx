import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import { CalloutForm } from "#app/components/callout-form.tsx";
import { CalloutList } from "#app/components/callout-list.tsx";
import { Day } from "#app/components/day.tsx";
import { useLive } from "#app/components/live.tsx";
import { Notice } from "#app/components/notice.tsx";
import { PhotoWithSpots } from "#app/components/photo-with-spots.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { shownCrumbs } from "#app/components/shown-crumbs.ts";
import { listCallouts } from "#app/data/callouts.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { findPhotoPlace } from "#app/data/shared.server.ts";
import { can } from "#app/domain/permissions.ts";
import { calloutFields } from "#app/http/callout-form.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { number } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadShownPlace } from "#app/services/callout-pages.server.ts";
import { calloutView } from "#app/services/callout-views.server.ts";
import { listAssignable, putPhotoCallout } from "#app/services/callouts.server.ts";
import type { Route } from "./+types/photo.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Photo of ${loaderData?.shows} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ place, job, shows }) => (place ? shownCrumbs(place, `Photo of ${shows}`) : [{ label: job.title, to: job.to }, { label: `Photo of ${shows}` }]),
};

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "photo:view");
  return inShop(viewer, async (tx) => {
    const photo = orNotFound(await findPhotoPlace(tx, viewer, idParam(params.fileId)));
    const place = photo.revisionId === null ? null : await loadShownPlace(tx, viewer, photo.revisionId);
    const job = orNotFound(await findJob(tx, photo.jobId));
    const inside = can(viewer.roles, "callout:internal");
    const callouts = photo.revisionId === null ? [] : (await listCallouts(tx, viewer, { fileId: photo.fileId })).filter(({ revisionId }) => revisionId === photo.revisionId);
    return {
      photo: { fileId: photo.fileId, name: photo.name, by: photo.uploadedByName, at: photo.at, width: photo.width, height: photo.height },
      shows: photo.characteristicName ?? photo.matingPartName ?? place?.part.name ?? "the part",
      place,
      job: { id: job.id, title: job.title, to: inside ? href("/jobs/:jobId", { jobId: job.id }) : href("/your-job/:jobId", { jobId: job.id }) },
      fitCheckId: can(viewer.roles, "fit-check:read") ? photo.fitCheckId : null,
      matingPartId: can(viewer.roles, "mating-part:read") ? photo.matingPartId : null,
      callouts: callouts.map((callout) => calloutView(viewer, callout)),
      nextNumber: inside ? Math.max(0, ...callouts.map((callout) => callout.number)) + 1 : callouts.length + 1,
      people: inside && place ? (await listAssignable(tx)).map(({ personId, name }) => ({ personId, name })) : null,
      mayPut: can(viewer.roles, "callout:write") && place !== null,
    };
  });
}

const share = number("Touch the photo where you mean", { min: 0, max: 1 });
const photoCalloutForm = z.object({ ...calloutFields, x: share, y: share });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "callout:write");
  const fileId = idParam(params.fileId);
  const form = parseForm(photoCalloutForm, await request.formData());
  if (!form.ok) {
    // One spot that is missing is one thing to mend.
    const { y: _, ...errors } = form.errors;
    return data({ errors: form.errors.x ? errors : form.errors, values: form.values }, { status: 400 });
  }
  const { x, y, ...input } = form.value;
  const put = await putPhotoCallout(viewer, fileId, { x, y }, input);
  if (put.ok) return redirect(href("/callouts/:calloutId", { calloutId: put.calloutId }));
  const why = put.reason === "no-revision" ? "This photo shows the customer's hardware and no revision: a callout has no place on it." : "This person left the shop meanwhile. Pick another.";
  return data({ errors: { form: [why] } as Record<string, string[]>, values: Object.fromEntries(Object.entries(form.value).map(([name, value]) => [name, String(value ?? "")])) }, { status: 409 });
}

export default function PhotoPage({ loaderData, actionData }: Route.ComponentProps) {
  const { photo, shows, place, callouts, mayPut, people } = loaderData;
  useLive(loaderData.job.id);
  const spots = callouts.flatMap(({ id, number, spot, body, closed, to }) => (spot ? [{ id, number, ...spot, label: body, closed, href: to }] : []));
  const values = actionData?.values;
  const start = values?.x && values.y ? { x: Number(values.x), y: Number(values.y) } : null;
  const picture = (pick?: { number: number; start: { x: number; y: number } | null }) =>
    photo.width !== null && photo.height !== null ? (
      <PhotoWithSpots src={href("/files/:fileId/:kind", { fileId: photo.fileId, kind: "screen" })} alt={`Photo of ${shows}`} width={photo.width} height={photo.height} spots={spots} pick={pick} />
    ) : (
      <Notice kind="info">The photo is being prepared. It appears here by itself.</Notice>
    );
  return (
    <Sheet
      rightLabel="Callouts on this photo"
      right={
        place ? (
          <Section title={callouts.length === 0 ? "No callout yet" : callouts.length === 1 ? "One callout" : `${callouts.length} callouts`} lead={callouts.length === 0 && mayPut ? "Touch the photo where you mean, and say what it is about." : undefined}>
            <CalloutList callouts={callouts} />
          </Section>
        ) : (
          <p className="text-soft">A photo of hardware that came in. Callouts are put on photos of a revision.</p>
        )
      }
    >
      <SheetHeading
        title={`Photo of ${shows}`}
        lead={
          <>
            {photo.by}, <Day at={photo.at} time />
            {loaderData.fitCheckId && (
              <>
                , in <Link className="word" to={href("/fit-checks/:fitCheckId", { fitCheckId: loaderData.fitCheckId })}>a fit check</Link>
              </>
            )}
            {loaderData.matingPartId && (
              <>
                , of <Link className="word" to={href("/mating-parts/:matingPartId", { matingPartId: loaderData.matingPartId })}>hardware that came in</Link>
              </>
            )}
          </>
        }
      />
      {mayPut && photo.width !== null ? (
        <CalloutForm key={callouts.length} errors={actionData?.errors} values={values} people={people}>
          {picture({ number: loaderData.nextNumber, start })}
        </CalloutForm>
      ) : (
        picture()
      )}
    </Sheet>
  );
}
