import { data, href, redirect } from "react-router";
import { Day } from "#app/components/day.tsx";
import { Facts } from "#app/components/facts.tsx";
import { TextField } from "#app/components/fields.tsx";
import { EntryForm, FieldGroup, SubmitButton } from "#app/components/form.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { PlainPage, Section } from "#app/components/sheet.tsx";
import { findPerson } from "#app/data/people.server.ts";
import { listSessions } from "#app/data/sessions.server.ts";
import { idParam, orNotFound, outsideShops } from "#app/data/scope.server.ts";
import { requirePerson } from "#app/http/context.server.ts";
import { readPreferences } from "#app/http/cookies.server.ts";
import { changePassword, endSessions } from "#app/services/account.server.ts";
import type { Route } from "./+types/account.ts";

export const meta: Route.MetaFunction = () => [{ title: "Your account · Spotblue" }];

export async function loader({ request, context }: Route.LoaderArgs) {
  const { personId, session, name, email } = requirePerson(context);
  return outsideShops(async (tx) => {
    const person = orNotFound(await findPerson(tx, personId));
    const sessions = (await listSessions(tx, personId)).map((one) => ({ ...one, here: one.id === session.id }));
    return { name, email, hasPassword: person.passwordHash !== null, github: person.githubId !== null, sessions, preferences: await readPreferences(request) };
  });
}

export async function action({ request, context }: Route.ActionArgs) {
  const { personId, session, email } = requirePerson(context);
  const form = await request.formData();
  const person = { personId, email, sessionId: session.id };
  const text = (name: string) => String(form.get(name) ?? "");
  switch (form.get("intent")) {
    case "end":
      await endSessions(person, idParam(text("sessionId")));
      return redirect(href("/account"));
    case "end-others":
      await endSessions(person, "others");
      return redirect(href("/account"));
    default: {
      const changed = await changePassword(person, text("current"), text("next"));
      if (!changed.ok) return data({ errors: { [changed.field]: [changed.reason] } as Record<string, string[]>, changed: false }, { status: 400 });
      return data({ errors: {} as Record<string, string[]>, changed: true });
    }
  }
}

export default function AccountPage({ loaderData, actionData }: Route.ComponentProps) {
  const { sessions } = loaderData;
  return (
    <PlainPage title={loaderData.name} lead={loaderData.email} preferences={loaderData.preferences} foot={<LinkButton to="/" weight="quiet">Back to the jobs</LinkButton>}>
      <Section title="Password">
        {actionData?.changed && <Notice kind="success">The password is changed. Other devices were signed out.</Notice>}
        <EntryForm errors={actionData?.errors} labels={{ current: "Password now", next: "New password" }}>
          <FieldGroup>
            {loaderData.hasPassword && <TextField name="current" label="Password now" type="password" autoComplete="current-password" />}
            <TextField name="next" label="New password" type="password" autoComplete="new-password" hint="At least 12 characters; a few words are easy to keep." />
          </FieldGroup>
          <SubmitButton weight="secondary">{loaderData.hasPassword ? "Change the password" : "Set a password"}</SubmitButton>
        </EntryForm>
      </Section>
      <Section title="Where you are signed in" ruled>
        <ul className="divide-y divide-hairline">
          {sessions.map((one) => (
            <li key={one.id} className="flex flex-wrap items-center justify-between gap-x-4 py-2">
              <span>
                {one.here ? <b>This device</b> : <>Seen <Day at={one.lastSeenAt} time /></>}
                <span className="block text-sm text-soft [overflow-wrap:anywhere]">{one.userAgent || "unknown device"}</span>
              </span>
              {!one.here && (
                <EntryForm intent="end">
                  <input type="hidden" name="sessionId" value={one.id} />
                  <SubmitButton weight="quiet">Sign it out</SubmitButton>
                </EntryForm>
              )}
            </li>
          ))}
        </ul>
        {sessions.length > 1 && (
          <EntryForm intent="end-others" className="mt-3">
            <SubmitButton weight="secondary">Sign out everywhere else</SubmitButton>
          </EntryForm>
        )}
      </Section>
      <Section title="Other ways in" ruled>
        <Facts facts={[{ label: "Link by e-mail", value: "always" }, { label: "GitHub", value: loaderData.github ? "connected" : "not connected" }]} />
      </Section>
    </PlainPage>
  );
}
