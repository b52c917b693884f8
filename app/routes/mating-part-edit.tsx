import { href, redirect } from "react-router";
import { z } from "zod";
import { DateField, TextArea, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findJob } from "#app/data/jobs.server.ts";
import { findMatingPart, type MatingPartValues } from "#app/data/mating-parts.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { dayOrNull, words, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { mistaken, overtaken, readVersion } from "#app/http/refusals.server.ts";
import { editMatingPart, putMatingPartAside, takeInMatingPart } from "#app/services/mating-parts.server.ts";
import type { Route } from "./+types/mating-part-edit.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.matingPart?.name ?? "Take in hardware"} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job, matingPart }) => [
    { label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) },
    ...(matingPart ? [{ label: matingPart.name, to: href("/mating-parts/:matingPartId", { matingPartId: matingPart.id }) }, { label: "Change" }] : [{ label: "Take in hardware" }]),
  ],
};

/** /jobs/:jobId/mating-parts/new and /mating-parts/:matingPartId/edit. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "mating-part:write");
  return inShop(viewer, async (tx) => {
    const matingPart = params.matingPartId ? orNotFound(await findMatingPart(tx, idParam(params.matingPartId))) : null;
    const job = orNotFound(await findJob(tx, matingPart?.jobId ?? idParam(params.jobId)));
    return { job: { id: job.id, number: job.number, title: job.title }, matingPart, today: new Date().toISOString().slice(0, 10) };
  });
}

const matingPartForm = z
  .object({ name: words("Say what it is"), description: wordsOrNone(), cameInOn: dayOrNull, conditionIn: wordsOrNone(1000), wentOutOn: dayOrNull, conditionOut: wordsOrNone(1000) })
  .superRefine(({ cameInOn, wentOutOn }, context) => {
    if (wentOutOn === null) return;
    if (cameInOn === null) context.addIssue({ code: "custom", path: ["cameInOn"], message: "It can't go out before it came in: give the day" });
    else if (wentOutOn < cameInOn) context.addIssue({ code: "custom", path: ["wentOutOn"], message: "It went out before it came in" });
  });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "mating-part:write");
  const formData = await request.formData();
  const intent = formData.get("intent");
  const id = params.matingPartId === undefined ? null : idParam(params.matingPartId);
  if (id && (intent === "set-aside" || intent === "take-up")) {
    const { jobId } = await inShop(viewer, (tx) => putMatingPartAside(tx, viewer, id, intent === "set-aside"));
    return redirect(href("/jobs/:jobId", { jobId }));
  }
  const form = parseForm(matingPartForm, formData);
  if (!form.ok) return mistaken(form);
  if (!id) {
    const jobId = idParam(params.jobId);
    const matingPartId = await inShop(viewer, (tx) => takeInMatingPart(tx, viewer, jobId, form.value));
    return redirect(href("/mating-parts/:matingPartId", { matingPartId }));
  }
  const saved = await inShop(viewer, (tx) => editMatingPart(tx, viewer, id, readVersion(formData), form.value));
  if (saved.ok) return redirect(href("/mating-parts/:matingPartId", { matingPartId: id }));
  return overtaken(formData, { labels, yours: entryTexts(form.value), theirs: entryTexts(saved.current), rowVersion: saved.current.rowVersion });
}

const entryTexts = ({ name, description, cameInOn, conditionIn, wentOutOn, conditionOut }: MatingPartValues) => ({ name, description, cameInOn: cameInOn ?? "", conditionIn, wentOutOn: wentOutOn ?? "", conditionOut });

const labels = { name: "Hardware", description: "What it is from", cameInOn: "Came in", conditionIn: "Condition when it came", wentOutOn: "Went out", conditionOut: "Condition when it went" };

export default function MatingPartEditPage({ loaderData, actionData }: Route.ComponentProps) {
  const { matingPart, today } = loaderData;
  return (
    <Sheet>
      <SheetHeading title={matingPart ? matingPart.name : "Take in hardware"} lead={matingPart?.setAside ? "Set aside: kept for the record." : matingPart ? undefined : "The customer's part that prints are tried on. Photos and measurements come on its own page."} />
      <div className="max-w-3xl">
        {actionData?.conflict && <ConflictNotice changes={actionData.conflict} />}
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels} intent="save">
          {matingPart && <RowVersion value={actionData?.rowVersion ?? matingPart.rowVersion} />}
          <FieldGroup columns={2}>
            <TextField name="name" label={labels.name} defaultValue={matingPart?.name} placeholder="Fuel tank neck" wide />
            <TextArea name="description" label={labels.description} optional defaultValue={matingPart?.description} rows={2} wide />
            <DateField name="cameInOn" label={labels.cameInOn} optional defaultValue={matingPart ? matingPart.cameInOn : today} hint="Empty: it is not in the shop, only measured elsewhere." />
            <DateField name="wentOutOn" label={labels.wentOutOn} optional defaultValue={matingPart?.wentOutOn} />
            <TextArea name="conditionIn" label={labels.conditionIn} optional defaultValue={matingPart?.conditionIn} rows={2} />
            <TextArea name="conditionOut" label={labels.conditionOut} optional defaultValue={matingPart?.conditionOut} rows={2} />
          </FieldGroup>
          <SubmitButton>{matingPart ? "Save" : "Take it in"}</SubmitButton>
        </EntryForm>
        {matingPart && (
          <EntryForm intent={matingPart.setAside ? "take-up" : "set-aside"} className="mt-8">
            <SubmitButton weight="quiet">{matingPart.setAside ? "Take up again" : "Set aside"}</SubmitButton>
          </EntryForm>
        )}
      </div>
    </Sheet>
  );
}
