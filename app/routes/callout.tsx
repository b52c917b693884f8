import { data, href, redirect } from "react-router";
import { z } from "zod";
import { Day } from "#app/components/day.tsx";
import { SelectField, TextArea } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { useLive } from "#app/components/live.tsx";
import { Length } from "#app/components/measure.tsx";
import { PhotoWithSpots } from "#app/components/photo-with-spots.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { shownCrumbs } from "#app/components/shown-crumbs.ts";
import { Thread } from "#app/components/thread.tsx";
import { ModelViewer } from "#app/components/viewer/model-viewer.tsx";
import { findCallout, listCalloutReplies } from "#app/data/callouts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { findPhotoPlace } from "#app/data/shared.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosenOrNull, words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { loadShownPlace } from "#app/services/callout-pages.server.ts";
import { calloutView } from "#app/services/callout-views.server.ts";
import { assignCallout, closeCallout, listAssignable, mayCloseCallout, replyToCallout } from "#app/services/callouts.server.ts";
import { findViewModel } from "#app/services/view-model.server.ts";
import type { Route } from "./+types/callout.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Callout ${loaderData?.callout.number}: ${loaderData?.place.part.name} ${loaderData?.place.revision.ordinal} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ place, callout }) => [...shownCrumbs(place, "Callouts").slice(0, -1), { label: "Callouts", to: href("/revisions/:revisionId/callouts", { revisionId: place.revision.id }) }, { label: `Callout ${callout.number}` }],
};

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "callout:read");
  return inShop(viewer, async (tx) => {
    const callout = orNotFound(await findCallout(tx, viewer, idParam(params.calloutId)));
    const place = await loadShownPlace(tx, viewer, callout.revisionId);
    const photo = callout.fileId === null ? undefined : await findPhotoPlace(tx, viewer, callout.fileId);
    const inside = can(viewer.roles, "callout:internal");
    return {
      place,
      callout: calloutView(viewer, callout),
      replies: await listCalloutReplies(tx, callout.id),
      photo: photo ? { fileId: photo.fileId, name: photo.name, width: photo.width, height: photo.height } : null,
      model: callout.pointMm ? await findViewModel(tx, callout.revisionId) : null,
      people: inside ? (await listAssignable(tx)).map(({ personId, name }) => ({ personId, name })) : null,
      mayClose: can(viewer.roles, "callout:write") && mayCloseCallout(viewer, callout),
      mayWrite: can(viewer.roles, "callout:write"),
    };
  });
}

const replyForm = z.object({ body: words("Write your answer", 4000) });
const assignForm = z.object({ assigneeId: chosenOrNull });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "callout:write");
  const calloutId = idParam(params.calloutId);
  const formData = await request.formData();
  const intent = String(formData.get("intent"));
  const here = href("/callouts/:calloutId", { calloutId });
  const refused = (status: 400 | 409, errors: Record<string, string[]>, values: Record<string, string> = {}) => data({ intent, errors, values }, { status });
  switch (intent) {
    case "reply": {
      const form = parseForm(replyForm, formData);
      if (!form.ok) return refused(400, form.errors, form.values);
      await replyToCallout(viewer, calloutId, form.value.body);
      return redirect(here);
    }
    case "close":
    case "open": {
      const done = await closeCallout(viewer, calloutId, intent === "close");
      if (done.ok || done.reason === "was-so") return redirect(here);
      return refused(409, { form: ["Only the shop and whoever put a callout close it. Answer instead."] });
    }
    case "assign": {
      requireCan(context, "callout:internal");
      const form = parseForm(assignForm, formData);
      if (!form.ok) return refused(400, form.errors, form.values);
      const done = await assignCallout(viewer, calloutId, form.value.assigneeId);
      return done.ok ? redirect(here) : refused(409, { assigneeId: ["This person left the shop meanwhile. Pick another."] });
    }
    default:
      throw new Response("Not found", { status: 404, statusText: "Not found" });
  }
}

export default function CalloutPage({ loaderData, actionData }: Route.ComponentProps) {
  const { place, callout, replies, photo, model, people, mayClose, mayWrite } = loaderData;
  useLive(place.job.id);
  const faults = (intent: string) => (actionData?.intent === intent ? { errors: actionData.errors, values: actionData.values } : {});
  const first = { id: callout.id, who: callout.byName, at: new Date(callout.at).toISOString(), text: callout.body, internal: callout.internal, origin: callout.fromCustomer ? "the customer" : undefined };
  return (
    <Sheet
      rightLabel="The conversation"
      right={
        <>
          <Thread label="Conversation" messages={[first, ...replies.map((reply) => ({ id: reply.id, who: reply.byName, at: new Date(reply.at).toISOString(), text: reply.body }))]}>
            {mayWrite && (
              <EntryForm intent="reply" clearWhenSent {...faults("reply")} labels={{ body: "Answer" }}>
                <FieldGroup>
                  <TextArea name="body" label="Answer" maxLength={4000} />
                </FieldGroup>
                <SubmitButton pendingText="Sending" weight={callout.closed ? "secondary" : "primary"}>
                  Answer
                </SubmitButton>
              </EntryForm>
            )}
          </Thread>
          {people && (
            <Section title={callout.assignee ? `Given to ${callout.assignee}` : "Given to nobody yet"} ruled>
              <EntryForm intent="assign" {...faults("assign")} labels={{ assigneeId: "Given to" }} key={callout.assigneeId ?? "nobody"}>
                <FieldGroup>
                  <SelectField name="assigneeId" label="Give it to" optional prompt="Nobody" defaultValue={callout.assigneeId ?? ""} options={people.map(({ personId, name }) => ({ value: personId, label: name }))} />
                </FieldGroup>
                <SubmitButton weight="secondary">Give it</SubmitButton>
              </EntryForm>
            </Section>
          )}
          {mayClose && (
            <Section title={callout.closed ? "It is closed" : "Is it settled?"} ruled>
              <EntryForm intent={callout.closed ? "open" : "close"} {...faults(callout.closed ? "open" : "close")}>
                <SubmitButton weight="secondary">{callout.closed ? "Open it again" : "Close it"}</SubmitButton>
              </EntryForm>
            </Section>
          )}
        </>
      }
    >
      <SheetHeading
        title={`Callout ${callout.number} is ${callout.closed ? "closed" : "open"}`}
        lead={
          <>
            {callout.internal ? "Inside the shop only. " : people ? "The customer reads it too. " : ""}
            {callout.closed && callout.closedAt && (
              <>
                Closed by {callout.closedByName}, <Day at={callout.closedAt} time />.
              </>
            )}
          </>
        }
      />
      {photo && photo.width !== null && photo.height !== null && callout.spot && (
        <PhotoWithSpots
          src={href("/files/:fileId/:kind", { fileId: photo.fileId, kind: "screen" })}
          alt={`Photo ${photo.name}`}
          width={photo.width}
          height={photo.height}
          spots={[{ id: callout.id, number: callout.number, ...callout.spot, label: callout.body, closed: callout.closed, href: href("/photos/:fileId", { fileId: photo.fileId }) }]}
        />
      )}
      {callout.pointMm && (
        <>
          <p className="mb-3">
            On the model at X <Length mm={callout.pointMm[0]} digits={2} />, Y <Length mm={callout.pointMm[1]} digits={2} />, Z <Length mm={callout.pointMm[2]} digits={2} />
          </p>
          {model ? (
            <div className="h-[60vh] min-h-80 border border-hairline">
              <ModelViewer
                meshUrl={href("/files/:fileId/:kind", { fileId: model.fileId, kind: "view-mesh" })}
                pictureUrl={model.pictured ? href("/files/:fileId/:kind", { fileId: model.fileId, kind: "thumbnail" }) : null}
                name={`${place.part.name}, revision ${place.revision.ordinal}`}
                closed={model.closed}
                markers={[{ id: callout.id, number: callout.number, point_mm: callout.pointMm, label: callout.body, href: href("/callouts/:calloutId", { calloutId: callout.id }) }]}
              />
            </div>
          ) : (
            <p className="text-soft">The view of the model is not ready, or the model was replaced.</p>
          )}
        </>
      )}
    </Sheet>
  );
}
