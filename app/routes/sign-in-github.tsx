import { data, Link, redirect } from "react-router";
import { PlainPage } from "#app/components/sheet.tsx";
import { orNotFound } from "#app/data/scope.server.ts";
import { visitContext } from "#app/http/context.server.ts";
import { githubNextCookie, sessionCookie } from "#app/http/cookies.server.ts";
import { safeNext } from "#app/http/next.ts";
import { githubSignIn } from "#app/services/github-account.server.ts";
import { githubRefusal } from "#app/services/github-sign-in.server.ts";
import { startSession } from "#app/services/sign-in.server.ts";
import type { Route } from "./+types/sign-in-github.ts";

export const meta: Route.MetaFunction = () => [{ title: "Sign in with GitHub · Spotblue" }];

/** /sign-in/github sends the person to GitHub; /sign-in/github/callback is where they come back. */
export async function loader({ request, context }: Route.LoaderArgs) {
  const strategy = orNotFound(githubSignIn());
  const { url, userAgent } = context.get(visitContext);
  const returning = url.pathname.endsWith("/callback");
  try {
    const person = await strategy.authenticate(request);
    if (!person) return data({ refused: "There is no account here with an e-mail address that GitHub has verified for you. Ask an owner of your shop to invite you, or sign in by password." }, { status: 403 });
    const session = await startSession(person, userAgent, "GitHub");
    const next = safeNext(await githubNextCookie.parse(request.headers.get("Cookie")));
    const headers = new Headers();
    headers.append("Set-Cookie", await sessionCookie.serialize(session.token, { expires: session.expiresAt }));
    headers.append("Set-Cookie", await githubNextCookie.serialize("", { maxAge: 0 }));
    return redirect(next, { headers });
  } catch (thrown) {
    // The library sends people to GitHub by throwing the redirect.
    if (thrown instanceof Response) {
      if (!returning) thrown.headers.append("Set-Cookie", await githubNextCookie.serialize(safeNext(url.searchParams.get("next"))));
      throw thrown;
    }
    const refused = githubRefusal(thrown);
    if (!refused) throw thrown;
    return data({ refused }, { status: 400 });
  }
}

export default function SignInGithubPage({ loaderData }: Route.ComponentProps) {
  return <PlainPage title="GitHub did not let you in" lead={loaderData.refused} foot={<Link to="/sign-in" className="word">Another way to sign in</Link>} />;
}
