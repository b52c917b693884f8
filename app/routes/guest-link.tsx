import { data, href, redirect } from "react-router";
import { EntryForm, SubmitButton } from "#app/components/form.tsx";
import { PlainPage } from "#app/components/sheet.tsx";
import { visitContext } from "#app/http/context.server.ts";
import { sessionCookie } from "#app/http/cookies.server.ts";
import { exchangeGuestLink, readGuestLink } from "#app/services/access.server.ts";
import { allow } from "#app/services/rate-limit.server.ts";
import type { Route } from "./+types/guest-link.ts";

export const meta: Route.MetaFunction = () => [{ title: "Spotblue" }];

/** Opening the link shows a button and does nothing: mail scanners follow links, they don't press. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const { address } = context.get(visitContext);
  if (!(await allow("guest", address))) throw new Response("Too many tries. Wait a quarter of an hour.", { status: 429 });
  const link = await readGuestLink(params.token);
  return data({ link }, { status: link ? 200 : 410, headers: { "Referrer-Policy": "no-referrer" } });
}

export async function action({ params, context }: Route.ActionArgs) {
  const { address, userAgent } = context.get(visitContext);
  if (!(await allow("guest", address))) throw new Response("Too many tries. Wait a quarter of an hour.", { status: 429 });
  const opened = await exchangeGuestLink(params.token, userAgent);
  if (!opened) return data({ refused: true }, { status: 410 });
  const to = opened.role === "customer" ? href("/your-job/:jobId", { jobId: opened.jobId }) : href("/jobs/:jobId", { jobId: opened.jobId });
  return redirect(to, { headers: { "Set-Cookie": await sessionCookie.serialize(opened.token, { expires: opened.expiresAt }) } });
}

export default function GuestLinkPage({ loaderData, actionData }: Route.ComponentProps) {
  const { link } = loaderData;
  if (!link || actionData?.refused) return <PlainPage title="This link does not open any more" lead="It was ended, is too old, or was opened on another device. Ask the shop for a new one." />;
  if (link.exchanged) return <PlainPage title="This link was opened already" lead={`It works on the device where its button was pressed. On another one, ask ${link.shopName} for a new link.`} />;
  return (
    <PlainPage title={link.jobTitle} lead={`${link.shopName} opened this job for ${link.name}. It stays open on this device.`}>
      <EntryForm>
        <SubmitButton bench wide pendingText="Opening">
          Open the job
        </SubmitButton>
      </EntryForm>
    </PlainPage>
  );
}
