import { href, redirect } from "react-router";
import { z } from "zod";
import { TextField } from "#app/components/fields.tsx";
import { ConflictNotice, EntryForm, FieldGroup, RowVersion, SubmitButton } from "#app/components/form.tsx";
import { SheetHeading } from "#app/components/sheet.tsx";
import { ShopSheet } from "#app/components/shop-sheet.tsx";
import { inShop, orNotFound } from "#app/data/scope.server.ts";
import { findShop, type Shop } from "#app/data/shops.server.ts";
import { isCurrency } from "#app/domain/money.ts";
import { requireCan } from "#app/http/context.server.ts";
import { emailOrNull, rowVersion, words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { mistaken, overtaken, typedValues } from "#app/http/refusals.server.ts";
import { saveShop } from "#app/services/equipment.server.ts";
import type { Route } from "./+types/shop-settings.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = () => [{ title: "Settings of the shop · Spotblue" }];
export const handle: PageHandle<unknown> = { crumbs: () => [{ label: "Settings" }] };

export async function loader({ context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "shop:manage");
  return { shop: orNotFound(await inShop(viewer, findShop)) };
}

const shopForm = z.object({
  name: words("Give the shop a name", 120),
  currency: words("Give the currency").transform((code) => code.toUpperCase()).refine(isCurrency, "Give a currency by its three letters, such as EUR or USD"),
  replyTo: emailOrNull,
  rowVersion,
});

export async function action({ request, context }: Route.ActionArgs) {
  const viewer = requireCan(context, "shop:manage");
  const form = await request.formData();
  const read = parseForm(shopForm, form);
  if (!read.ok) return mistaken(read);
  const { rowVersion: version, ...values } = read.value;
  const saved = await inShop(viewer, (tx) => saveShop(tx, viewer, version, values));
  if (saved.ok) return redirect(href("/shop/settings"));
  if (saved.reason === "money-recorded") return mistaken({ errors: { currency: ["Amounts are recorded in the currency of before, and would change their meaning. It stays as it is"] }, values: typedValues(form) }, 409);
  const shown = ({ name, currency, replyTo }: Pick<Shop, "name" | "currency" | "replyTo">) => ({ name, currency, replyTo: replyTo ?? "" });
  return overtaken(form, { labels, yours: shown(values), theirs: shown(saved.current), rowVersion: saved.current.rowVersion });
}

const labels = { name: "Shop", currency: "Currency", replyTo: "Answers to mails go to" };

export default function ShopSettingsPage({ loaderData, actionData }: Route.ComponentProps) {
  const { shop } = loaderData;
  return (
    <ShopSheet owner>
      <SheetHeading title="Settings of the shop" />
      <div className="max-w-3xl">
        {actionData?.conflict && <ConflictNotice changes={actionData.conflict} />}
        <EntryForm key={shop.rowVersion} errors={actionData?.errors} values={actionData?.values} labels={labels} intent="save">
          <RowVersion value={actionData?.rowVersion ?? shop.rowVersion} />
          <FieldGroup columns={2}>
            <TextField name="name" label={labels.name} defaultValue={shop.name} hint="Stands on sheets, packets and mails." wide />
            <TextField name="currency" label={labels.currency} defaultValue={shop.currency} maxLength={3} suggestions={["EUR", "USD", "GBP", "NOK", "SEK", "DKK", "CHF", "CAD", "AUD"]} hint="By its three letters. It can't change once money is recorded." />
            <TextField name="replyTo" label={labels.replyTo} type="email" optional defaultValue={shop.replyTo} />
          </FieldGroup>
          <SubmitButton>Save</SubmitButton>
        </EntryForm>
      </div>
    </ShopSheet>
  );
}
