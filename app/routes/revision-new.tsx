import { data, href, redirect } from "react-router";
import { z } from "zod";
import { SelectField, TextArea, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findJob } from "#app/data/jobs.server.ts";
import { findPart } from "#app/data/parts.server.ts";
import { listRevisions } from "#app/data/revisions.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosenOrNull, words, wordsOrNull } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { createRevision } from "#app/services/parts.server.ts";
import type { Route } from "./+types/revision-new.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Add revision ${loaderData?.next} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job, part, next }) => [
    { label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) },
    { label: part.name, to: href("/parts/:partId", { partId: part.id }) },
    { label: `Add revision ${next}` },
  ],
};

export async function loader({ request, params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "revision:write");
  const asked = new URL(request.url).searchParams.get("parent");
  return inShop(viewer, async (tx) => {
    const part = orNotFound(await findPart(tx, idParam(params.partId)));
    const job = orNotFound(await findJob(tx, part.jobId));
    const revisions = await listRevisions(tx, part.id);
    const newest = revisions.findLast(({ setAsideReason }) => setAsideReason === null) ?? revisions.at(-1);
    return {
      job: { id: job.id, number: job.number, title: job.title },
      part: { id: part.id, name: part.name },
      next: (revisions.at(-1)?.ordinal ?? 0) + 1,
      parent: revisions.find(({ id }) => id === asked)?.id ?? newest?.id ?? null,
      parents: revisions.map(({ id, ordinal, branchName, reason, setAsideReason }) => ({ id, ordinal, branchName, reason, setAside: setAsideReason !== null })),
    };
  });
}

const revisionForm = z.object({ parentId: chosenOrNull, reason: words("Say what changes, and why", 1000), branchName: wordsOrNull(60) });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "revision:write");
  const form = parseForm(revisionForm, await request.formData());
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  const made = await inShop(viewer, (tx) => createRevision(tx, viewer, idParam(params.partId), form.value));
  if (!made.ok) return data({ errors: { parentId: ["Pick a revision of this part"] }, values: { ...form.value, parentId: "", branchName: form.value.branchName ?? "" } as Record<string, string> }, { status: 400 });
  return redirect(href("/revisions/:revisionId/files", { revisionId: made.id }));
}

const labels = { parentId: "Comes from", reason: "What changes, and why", branchName: "Branch" };

export default function RevisionNewPage({ loaderData, actionData }: Route.ComponentProps) {
  const { part, next, parents } = loaderData;
  return (
    <Sheet>
      <SheetHeading title={`Revision ${next} of ${part.name}`} lead="Every revision says what it changes. Its model is the next step; everything recorded of the one it comes from stays there." />
      <div className="max-w-3xl">
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels}>
          <FieldGroup columns={2}>
            <SelectField
              name="parentId"
              label={labels.parentId}
              optional
              prompt="None: it begins anew"
              defaultValue={loaderData.parent}
              options={parents.map(({ id, ordinal, branchName, reason, setAside }) => ({ value: id, label: `${ordinal}${branchName ? ` ${branchName}` : ""}${setAside ? " (set aside)" : ""}: ${reason.length > 60 ? `${reason.slice(0, 58)} …` : reason}` }))}
            />
            <TextField name="branchName" label={labels.branchName} optional placeholder="Hinge towards the rider" hint="A name for another way that is tried beside the main one." />
            <TextArea name="reason" label={labels.reason} placeholder="Land widened by 1 mm, spigot bore opened 0.15" wide />
          </FieldGroup>
          <SubmitButton pendingText="Adding">Add it, then drop its model</SubmitButton>
        </EntryForm>
      </div>
    </Sheet>
  );
}
