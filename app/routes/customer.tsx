import { data, href, redirect } from "react-router";
import { z } from "zod";
import { TextArea, TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { findCustomer, type Customer } from "#app/data/customers.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { emailOrNull, rowVersion, words, wordsOrNone, wordsOrNull } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { createCustomer, editCustomer, putCustomerAside } from "#app/services/customers.server.ts";
import type { Route } from "./+types/customer.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `${loaderData?.customer?.name ?? "New customer"} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = {
  crumbs: ({ customer }) => [{ label: "Customers", to: "/customers" }, { label: customer?.name ?? "New customer" }],
};

const customerForm = z.object({ name: words("Give the customer a name"), email: emailOrNull, phone: wordsOrNull(), note: wordsOrNone() });
const changeForm = customerForm.extend({ rowVersion });

const labels = { name: "Name", email: "E-mail", phone: "Phone", note: "Note" };

/** One page for a new customer (/customers/new) and for one that exists. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "customer:write");
  if (!params.customerId) return { customer: null };
  const customer = await inShop(viewer, (tx) => findCustomer(tx, idParam(params.customerId)));
  return { customer: orNotFound(customer) };
}

export async function action({ request, params, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "customer:write");
  const formData = await request.formData();
  if (!params.customerId) {
    const form = parseForm(customerForm, formData);
    if (!form.ok) return data({ errors: form.errors, values: form.values, current: null }, { status: 400 });
    await inShop(viewer, (tx) => createCustomer(tx, viewer, form.value));
    return redirect(href("/customers"));
  }
  const id = idParam(params.customerId);
  const intent = formData.get("intent");
  if (intent === "set-aside" || intent === "take-up") {
    await inShop(viewer, (tx) => putCustomerAside(tx, viewer, id, intent === "set-aside"));
    return redirect(href("/customers"));
  }
  const form = parseForm(changeForm, formData);
  if (!form.ok) return data({ errors: form.errors, values: form.values, current: null }, { status: 400 });
  const { rowVersion: version, ...values } = form.value;
  const result = await inShop(viewer, (tx) => editCustomer(tx, viewer, id, version, values));
  if (!result.ok) {
    // Saving again means the newer row was seen: the form carries its version from here on.
    return data({ errors: {}, values: { ...(Object.fromEntries(formData) as Record<string, string>), rowVersion: String(result.current.rowVersion) }, current: result.current }, { status: 409 });
  }
  return redirect(href("/customers"));
}

export default function CustomerPage({ loaderData, actionData }: Route.ComponentProps) {
  const { customer } = loaderData;
  return (
    <Sheet>
      <SheetHeading title={customer ? customer.name : "Add a customer"} lead={customer?.setAside ? "Set aside: kept for the record, not offered for new jobs." : undefined} />
      <div className="max-w-3xl">
        {actionData?.current && <ConflictNotice changes={conflicts(actionData.values, actionData.current)} />}
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={labels} intent="save">
          {customer && <RowVersion value={actionData?.current?.rowVersion ?? customer.rowVersion} />}
          <FieldGroup columns={2}>
            <TextField name="name" label={labels.name} defaultValue={customer?.name} wide />
            <TextField name="email" label={labels.email} type="email" optional defaultValue={customer?.email} hint="Needed for links to the job's page." />
            <TextField name="phone" label={labels.phone} type="tel" optional defaultValue={customer?.phone} />
            <TextArea name="note" label={labels.note} optional defaultValue={customer?.note} wide />
          </FieldGroup>
          <SubmitButton>{customer ? "Save" : "Add the customer"}</SubmitButton>
        </EntryForm>
        {customer && (
          <EntryForm intent={customer.setAside ? "take-up" : "set-aside"} className="mt-8">
            <SubmitButton weight="quiet">{customer.setAside ? "Take up again" : "Set aside"}</SubmitButton>
          </EntryForm>
        )}
      </div>
    </Sheet>
  );
}

function conflicts(yours: Record<string, string>, current: Customer) {
  const theirs = { name: current.name, email: current.email ?? "", phone: current.phone ?? "", note: current.note };
  return (Object.keys(theirs) as Array<keyof typeof theirs>)
    .filter((field) => (yours[field] ?? "") !== theirs[field])
    .map((field) => ({ field: labels[field], yours: yours[field] ?? "", theirs: theirs[field] }));
}
