import { data, Link, redirect } from "react-router";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { PlainPage } from "#app/components/sheet.tsx";
import { visitContext } from "#app/http/context.server.ts";
import { sessionCookie } from "#app/http/cookies.server.ts";
import { safeNext } from "#app/http/next.ts";
import { allow } from "#app/services/rate-limit.server.ts";
import { signInWithLink } from "#app/services/sign-in.server.ts";
import type { Route } from "./+types/sign-in-link.ts";

export const meta: Route.MetaFunction = () => [{ title: "Sign in · Spotblue" }];

/** Opening the link does nothing yet: mail scanners follow links, they don't press buttons. */
export async function action({ request, params, context }: Route.ActionArgs) {
  const visit = context.get(visitContext);
  if (!(await allow("link", `take:${visit.address}`))) return data({ refused: "Too many tries. Wait a quarter of an hour." }, { status: 429 });
  const result = await signInWithLink(params.token, visit.userAgent);
  if (!result.ok) return data({ refused: "This link was used already, or is older than 15 minutes." }, { status: 410 });
  const next = safeNext(new URL(request.url).searchParams.get("next"));
  return redirect(next, { headers: { "Set-Cookie": await sessionCookie.serialize(result.token, { expires: result.expiresAt }) } });
}

export default function SignInLinkPage({ actionData }: Route.ComponentProps) {
  if (actionData?.refused) return <PlainPage title="This link does not open any more" lead={actionData.refused} foot={<Link to="/sign-in" className="word">Ask for a new one</Link>} />;
  return (
    <PlainPage title="Sign in" lead="One press, and you are in on this device.">
      <EntryForm>
        <SubmitButton pendingText="Signing in">Sign in now</SubmitButton>
      </EntryForm>
    </PlainPage>
  );
}
