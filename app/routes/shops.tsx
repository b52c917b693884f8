import { data, redirect } from "react-router";
import { z } from "zod";
import { TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { PlainPage, Section } from "#app/components/sheet.tsx";
import { idParam } from "#app/data/scope.server.ts";
import { requirePerson } from "#app/http/context.server.ts";
import { readPreferences } from "#app/http/cookies.server.ts";
import { words } from "#app/http/fields.server.ts";
import { parseForm } from "#app/http/form.server.ts";
import { foundShop, switchShop } from "#app/services/account.server.ts";
import type { Route } from "./+types/shops.ts";

export const meta: Route.MetaFunction = () => [{ title: "Your shops · Spotblue" }];

export async function loader({ request, context }: Route.LoaderArgs) {
  const { session } = requirePerson(context);
  return { shops: session.memberships.map(({ shopId, shopName, roles }) => ({ shopId, shopName, roles, current: shopId === session.shopId })), preferences: await readPreferences(request) };
}

const shopForm = z.object({ name: words("Give the shop a name"), currency: z.string().trim().toUpperCase().regex(/^[A-Z]{3}$/, "Three letters, such as EUR") });

export async function action({ request, context }: Route.ActionArgs) {
  const { session, personId } = requirePerson(context);
  const person = { personId, sessionId: session.id };
  const formData = await request.formData();
  const shopId = formData.get("shopId");
  if (shopId) {
    if (!(await switchShop(person, idParam(String(shopId))))) throw new Response("Not found", { status: 404 });
    return redirect("/");
  }
  const form = parseForm(shopForm, formData);
  if (!form.ok) return data({ errors: form.errors, values: form.values }, { status: 400 });
  await foundShop(person, form.value.name, form.value.currency);
  return redirect("/");
}

export default function ShopsPage({ loaderData, actionData }: Route.ComponentProps) {
  const { shops } = loaderData;
  return (
    <PlainPage title={shops.length === 0 ? "You belong to no shop yet" : "Your shops"} lead={shops.length === 0 ? "Found one, or ask an owner to invite you by e-mail." : undefined} preferences={loaderData.preferences}>
      <ul className="divide-y divide-hairline">
        {shops.map(({ shopId, shopName, roles, current }) => (
          <li key={shopId} className="flex flex-wrap items-center justify-between gap-x-4 py-2">
            <span>
              {shopName} <span className="text-soft">{roles.join(" and ")}{current ? ", open now" : ""}</span>
            </span>
            <EntryForm>
              <input type="hidden" name="shopId" value={shopId} />
              <SubmitButton weight="secondary">Open</SubmitButton>
            </EntryForm>
          </li>
        ))}
      </ul>
      <Section title="Found a shop" ruled>
        <EntryForm errors={actionData?.errors} values={actionData?.values} labels={{ name: "Name", currency: "Currency" }}>
          <FieldGroup>
            <TextField name="name" label="Name" />
            <TextField name="currency" label="Currency" defaultValue="EUR" maxLength={3} />
          </FieldGroup>
          <SubmitButton pendingText="Founding">Found it</SubmitButton>
        </EntryForm>
      </Section>
    </PlainPage>
  );
}
