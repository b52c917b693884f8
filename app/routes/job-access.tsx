import { data, href, redirect } from "react-router";
import { z } from "zod";
import { Day } from "#app/components/day.tsx";
import { RadioRow, TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findCustomer } from "#app/data/customers.server.ts";
import { listGuestLinks, listMachinists } from "#app/data/guest-links.server.ts";
import { findJob } from "#app/data/jobs.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { email, words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { revokeGuestLink, sendGuestLink, setShared } from "#app/services/access.server.ts";
import type { Route } from "./+types/job-access.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Who may look · Spotblue" }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ job }) => [{ label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) }, { label: "Who may look" }],
};

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "guest-link:manage");
  return inShop(viewer, async (tx) => {
    const job = orNotFound(await findJob(tx, idParam(params.jobId)));
    const customer = await findCustomer(tx, job.customerId);
    return {
      job: { id: job.id, number: job.number, title: job.title },
      customer: customer ? { name: customer.name, email: customer.email } : null,
      links: await listGuestLinks(tx, job.id),
      machinists: await listMachinists(tx, job.id),
    };
  });
}

const linkForm = z.object({ role: z.enum(["customer", "machinist"], { error: "Say for whom it is" }), name: words("Give a name"), email });

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "guest-link:manage");
  const jobId = idParam(params.jobId);
  const formData = await request.formData();
  const here = href("/jobs/:jobId/access", { jobId });
  switch (formData.get("intent")) {
    case "end":
      await revokeGuestLink(viewer, jobId, idParam(String(formData.get("linkId"))));
      return redirect(here);
    case "share":
    case "unshare":
      await setShared(viewer, jobId, idParam(String(formData.get("personId"))), formData.get("intent") === "share");
      return redirect(here);
    default: {
      const form = parseForm(linkForm, formData);
      if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
      await sendGuestLink(viewer, jobId, form.value);
      return redirect(here);
    }
  }
}

export default function JobAccessPage({ loaderData, actionData }: Route.ComponentProps) {
  const { customer, links, machinists } = loaderData;
  return (
    <Sheet>
      <SheetHeading title="Who may look at this job" lead="Owners and designers of the shop always may. Others see just this job, and of it only what their part in it needs." />
      <Section title="Machinists with an account">
        {machinists.length === 0 ? (
          <p className="text-soft">Nobody has that role yet. A guest link below needs no account.</p>
        ) : (
          <ul className="divide-y divide-hairline">
            {machinists.map(({ personId, name, email: address, shared }) => (
              <li key={personId} className="flex flex-wrap items-center justify-between gap-x-6 py-2">
                <span>
                  {name} <span className="text-soft">{address}{shared ? ", may look" : ""}</span>
                </span>
                <EntryForm intent={shared ? "unshare" : "share"}>
                  <input type="hidden" name="personId" value={personId} />
                  <SubmitButton weight={shared ? "quiet" : "secondary"}>{shared ? "Stop sharing" : "Share the job"}</SubmitButton>
                </EntryForm>
              </li>
            ))}
          </ul>
        )}
      </Section>
      <Section title="Guest links" ruled lead="A link opens the job on one device when its button is pressed. Ending it ends that device's access at once.">
        <ul className="divide-y divide-hairline border-b border-hairline">
          {links.map((link) => (
            <li key={link.id} className="flex flex-wrap items-center justify-between gap-x-6 py-2">
              <span>
                {link.name}, {link.role}{" "}
                <span className="text-soft">
                  {link.email}, {link.endedAt ? "ended" : link.exchangedAt ? <>opened <Day at={link.exchangedAt} time /></> : new Date(link.expiresAt) < new Date() ? "never opened, gone stale" : <>sent <Day at={link.createdAt} />, not opened yet</>}
                </span>
              </span>
              {!link.endedAt && (
                <EntryForm intent="end">
                  <input type="hidden" name="linkId" value={link.id} />
                  <SubmitButton weight="quiet">End it</SubmitButton>
                </EntryForm>
              )}
            </li>
          ))}
        </ul>
        <div className="mt-5 max-w-2xl">
          <EntryForm intent="send" errors={actionData?.errors} values={actionData?.values} clearWhenSent>
            <FieldGroup columns={2}>
              <RadioRow name="role" label="For" options={[{ value: "customer", label: "the customer" }, { value: "machinist", label: "a machine shop" }]} defaultValue="customer" wide />
              <TextField name="name" label="Name" defaultValue={customer?.name} />
              <TextField name="email" label="E-mail" type="email" defaultValue={customer?.email} />
            </FieldGroup>
            <SubmitButton pendingText="Sending">Send a link</SubmitButton>
          </EntryForm>
        </div>
      </Section>
    </Sheet>
  );
}
