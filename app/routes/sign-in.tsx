import { data, Link, redirect } from "react-router";
import { z } from "zod";
import { TextField } from "#app/components/fields.tsx";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { PlainPage } from "#app/components/sheet.tsx";
import { env } from "#app/env.server.ts";
import { visitContext } from "#app/http/context.server.ts";
import { readPreferences, sessionCookie } from "#app/http/cookies.server.ts";
import { email } from "#app/http/fields.server.ts";
import { parseForm, type FieldErrors } from "#app/http/form.server.ts";
import { safeNext } from "#app/http/next.ts";
import { requestSignInLink, signInWithPassword } from "#app/services/sign-in.server.ts";
import type { Route } from "./+types/sign-in.ts";

export const meta: Route.MetaFunction = () => [{ title: "Sign in · Spotblue" }];

const passwordForm = z.object({ email, password: z.string().min(1, "Type your password"), next: z.string().optional() });
const linkForm = z.object({ email, next: z.string().optional() });

export async function loader({ request, context }: Route.LoaderArgs) {
  const { viewer, url } = context.get(visitContext);
  const next = safeNext(url.searchParams.get("next"));
  if (viewer) throw redirect(next);
  return { next, github: Boolean(env.GITHUB_CLIENT_ID), preferences: await readPreferences(request) };
}

export async function action({ request, context }: Route.ActionArgs) {
  const visit = context.get(visitContext);
  const formData = await request.formData();
  const byLink = formData.get("intent") === "link";
  const form = byLink ? parseForm(linkForm, formData) : parseForm(passwordForm, formData);
  if (!form.ok) return data({ errors: form.errors, values: form.values, sentTo: null }, { status: 400 });
  const next = safeNext(form.value.next);

  if (byLink) {
    const { ok } = await requestSignInLink({ email: form.value.email, address: visit.address, next });
    if (!ok) return refused({ form: ["Too many tries. Wait a quarter of an hour, then ask again."] }, form.value.email);
    return { errors: {} as FieldErrors, values: { email: form.value.email }, sentTo: form.value.email };
  }
  const { email: address, password } = form.value as z.output<typeof passwordForm>;
  const result = await signInWithPassword({ email: address, password, address: visit.address, userAgent: visit.userAgent });
  if (!result.ok) {
    return refused({ form: [result.reason === "wrong" ? "E-mail address and password do not belong together." : "Too many tries. Wait a quarter of an hour, or ask for a link by e-mail."] }, address);
  }
  return redirect(next, { headers: { "Set-Cookie": await sessionCookie.serialize(result.token, { expires: result.expiresAt }) } });
}

function refused(errors: FieldErrors, address: string) {
  return data({ errors, values: { email: address }, sentTo: null }, { status: 400 });
}

export default function SignInPage({ loaderData, actionData }: Route.ComponentProps) {
  if (actionData?.sentTo) {
    return (
      <PlainPage title="Look into your mail" lead={`If ${actionData.sentTo} has an account here, a link is on its way. It works once, for 15 minutes.`} foot={<Link to="." className="word">Another way to sign in</Link>} preferences={loaderData.preferences} />
    );
  }
  return (
    <PlainPage title="Sign in" lead="To the jobs of your shop." preferences={loaderData.preferences} foot={loaderData.github ? <GithubWay next={loaderData.next} /> : undefined}>
      <EntryForm errors={actionData?.errors} values={actionData?.values} labels={{ email: "E-mail", password: "Password" }}>
        <input type="hidden" name="next" value={loaderData.next} />
        <div className="mb-5 grid pb-px pr-px">
          <TextField name="email" label="E-mail" type="email" autoComplete="username" />
          <TextField name="password" label="Password" type="password" autoComplete="current-password" />
        </div>
        <div className="flex flex-wrap gap-3">
          <SubmitButton name="intent" value="password" pendingText="Signing in">Sign in</SubmitButton>
          <SubmitButton weight="secondary" name="intent" value="link" pendingText="Sending">Send me a link instead</SubmitButton>
        </div>
      </EntryForm>
    </PlainPage>
  );
}

function GithubWay({ next }: { next: string }) {
  return (
    <LinkButton to={`/sign-in/github?next=${encodeURIComponent(next)}`} weight="quiet" reloadDocument>
      Sign in with GitHub
    </LinkButton>
  );
}
