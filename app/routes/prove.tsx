import { data, redirect } from "react-router";
import { ProveForm } from "#app/components/prove-form.tsx";
import { PlainPage } from "#app/components/sheet.tsx";
import { requirePerson } from "#app/http/context.server.ts";
import { safeNext } from "#app/http/next.ts";
import { proveWithPassword, sendProofLink } from "#app/services/sign-in.server.ts";
import type { Route } from "./+types/prove.ts";

export const meta: Route.MetaFunction = () => [{ title: "Prove that it is you · Spotblue" }];

export function loader({ request, context }: Route.LoaderArgs) {
  requirePerson(context);
  return { returnTo: safeNext(new URL(request.url).searchParams.get("next")) };
}

export async function action({ request, context }: Route.ActionArgs) {
  const { session, personId } = requirePerson(context);
  const form = await request.formData();
  const returnTo = safeNext(String(form.get("returnTo") ?? ""));
  if (form.get("intent") === "link") {
    const sent = await sendProofLink({ personId, sessionId: session.id, next: returnTo });
    return data({ returnTo, sent, errors: (sent ? {} : { form: ["Too many tries. Wait a quarter of an hour."] }) as Record<string, string[]> }, { status: sent ? 200 : 429 });
  }
  const proved = await proveWithPassword({ personId, sessionId: session.id, password: String(form.get("password") ?? "") });
  if (proved.ok) return redirect(returnTo);
  const said: Record<string, string[]> = proved.reason === "wrong" ? { password: ["This is not your password."] } : { form: ["Too many tries. Wait a quarter of an hour."] };
  return data({ returnTo, sent: false, errors: said }, { status: 400 });
}

export default function ProvePage({ loaderData, actionData }: Route.ComponentProps) {
  if (actionData?.sent) return <PlainPage title="Look into your mail" lead="A link is on its way. Press its button on this device within 15 minutes, and you are back where you signed." />;
  return (
    <PlainPage title="Prove that it is you">
      <ProveForm returnTo={actionData?.returnTo ?? loaderData.returnTo} errors={actionData?.errors} />
    </PlainPage>
  );
}
