import { data, Link, redirect } from "react-router";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { PlainPage } from "#app/components/sheet.tsx";
import { requirePerson } from "#app/http/context.server.ts";
import { safeNext } from "#app/http/next.ts";
import { proveWithLink } from "#app/services/sign-in.server.ts";
import type { Route } from "./+types/prove-link.ts";

export const meta: Route.MetaFunction = () => [{ title: "Prove that it is you · Spotblue" }];

export function loader({ context }: Route.LoaderArgs) {
  requirePerson(context);
  return null;
}

export async function action({ request, params, context }: Route.ActionArgs) {
  const { session } = requirePerson(context);
  if (!(await proveWithLink(params.token, session.id))) return data({ refused: true }, { status: 410 });
  return redirect(safeNext(new URL(request.url).searchParams.get("next")));
}

export default function ProveLinkPage({ actionData }: Route.ComponentProps) {
  if (actionData?.refused) return <PlainPage title="This link does not open any more" lead="It was used already, is older than 15 minutes, or was asked for on another device." foot={<Link className="word" to="/prove">Ask for a new one</Link>} />;
  return (
    <PlainPage title="Prove that it is you" lead="One press, and you are back where you sign.">
      <EntryForm>
        <SubmitButton pendingText="Looking">It is me</SubmitButton>
      </EntryForm>
    </PlainPage>
  );
}
