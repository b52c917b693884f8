import { data, href, redirect } from "react-router";
import { z } from "zod";
import { DateField, SelectField, TextArea, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { listCustomerNames } from "#app/data/customers.server.ts";
import { findJob, nextJobNumber, type Job } from "#app/data/jobs.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { chosen, dayOrNull, rowVersion, words, wordsOrNone } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { createJob, editJob, putJobAside } from "#app/services/jobs.server.ts";
import type { Route } from "./+types/job-edit.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.job?.title ?? "Open a job"} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job }) => (job ? [{ label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) }, { label: "Change" }] : [{ label: "Open a job" }]),
};

const jobForm = z.object({
  number: words("Give the job a number", 40),
  customerId: chosen("Pick the customer"),
  title: words("Say what the job is"),
  dueOn: dayOrNull,
  promise: wordsOrNone(),
});
const changeForm = jobForm.extend({ rowVersion });

const labels = { number: "Number", customerId: "Customer", title: "Job", dueOn: "Due", promise: "Promise, in the customer's words" };

/** /jobs/new and /jobs/:jobId/edit. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "job:write");
  return inShop(viewer, async (tx) => {
    const customers = await listCustomerNames(tx);
    if (!params.jobId) return { job: null, customers, offered: await nextJobNumber(tx, new Date().getUTCFullYear()) };
    const { id, number, title, customerId, dueOn, promise, setAside, rowVersion: version } = orNotFound(await findJob(tx, idParam(params.jobId)));
    return { job: { id, number, title, customerId, dueOn, promise, setAside, rowVersion: version }, customers, offered: null };
  });
}

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "job:write");
  const formData = await request.formData();
  const intent = formData.get("intent");
  if (params.jobId && (intent === "set-aside" || intent === "take-up")) {
    const id = idParam(params.jobId);
    await inShop(viewer, (tx) => putJobAside(tx, viewer, id, intent === "set-aside"));
    return redirect(href("/jobs"));
  }
  const form = params.jobId ? parseForm(changeForm, formData) : parseForm(jobForm, formData);
  if (!form.ok) return data({ errors: form.errors, values: form.values, current: null }, { status: 400 });
  const { number, customerId, title, dueOn, promise } = form.value;
  const values = { number, customerId, title, dueOn, promise };
  const saved = await inShop(viewer, (tx) => ("rowVersion" in form.value ? editJob(tx, viewer, idParam(params.jobId), form.value.rowVersion as number, values) : createJob(tx, viewer, values)));
  if (saved.ok) return redirect(href("/jobs/:jobId", { jobId: saved.id }));
  const typed = Object.fromEntries(formData) as Record<string, string>;
  if (saved.reason === "number-taken") return data({ errors: { number: ["Another job has this number"] }, values: typed, current: null }, { status: 400 });
  const { current } = saved;
  return data({ errors: {}, values: typed, current: { rowVersion: current.rowVersion, number: current.number, customerId: current.customerId, title: current.title, dueOn: current.dueOn, promise: current.promise } }, { status: 409 });
}

export default function JobEditPage({ loaderData, actionData }: Route.ComponentProps) {
  const { job, customers } = loaderData;
  const current = actionData?.current;
  return (
    <Sheet>
      <SheetHeading title={job ? `${job.number} ${job.title}` : "Open a job"} />
      <div className="max-w-3xl">
        {customers.length === 0 && (
          <Notice kind="info" action={<LinkButton to={href("/customers/new")}>Add a customer</LinkButton>}>
            A job belongs to a customer, and there is none yet.
          </Notice>
        )}
        {current && <ConflictNotice changes={conflicts(actionData.values, current, customers)} />}
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels} intent="save">
          {job && <RowVersion value={current?.rowVersion ?? job.rowVersion} />}
          <FieldGroup columns={2}>
            <TextField name="number" label={labels.number} defaultValue={job?.number ?? loaderData.offered} />
            <DateField name="dueOn" label={labels.dueOn} optional defaultValue={job?.dueOn} />
            <TextField name="title" label={labels.title} defaultValue={job?.title} wide />
            <SelectField name="customerId" label={labels.customerId} prompt="Pick one" defaultValue={job?.customerId} options={customers.map(({ id, name }) => ({ value: id, label: name }))} wide />
            <TextArea name="promise" label={labels.promise} optional defaultValue={job?.promise} hint="What the customer wants to be true in the end; the trial is held against it." wide />
          </FieldGroup>
          <SubmitButton>{job ? "Save" : "Open the job"}</SubmitButton>
        </EntryForm>
        {job && (
          <EntryForm intent={job.setAside ? "take-up" : "set-aside"} className="mt-8">
            <SubmitButton weight="quiet">{job.setAside ? "Take up again" : "Set aside"}</SubmitButton>
          </EntryForm>
        )}
      </div>
    </Sheet>
  );
}

function conflicts(yours: Record<string, string>, current: Pick<Job, "number" | "customerId" | "title" | "dueOn" | "promise">, customers: Array<{ id: string; name: string }>) {
  const nameOf = (id: string) => customers.find((customer) => customer.id === id)?.name ?? "";
  const theirs = { number: current.number, title: current.title, dueOn: current.dueOn ?? "", promise: current.promise, customerId: current.customerId };
  return (Object.keys(theirs) as Array<keyof typeof theirs>)
    .filter((field) => (yours[field] ?? "") !== theirs[field])
    .map((field) => ({ field: labels[field], yours: field === "customerId" ? nameOf(yours[field] ?? "") : (yours[field] ?? ""), theirs: field === "customerId" ? nameOf(theirs[field]) : theirs[field] }));
}
