import { redirect } from "react-router";
import { endSession } from "#app/data/sessions.server.ts";
import { outsideShops } from "#app/data/scope.server.ts";
import { visitContext } from "#app/http/context.server.ts";
import { sessionCookie } from "#app/http/cookies.server.ts";
import type { Route } from "./+types/sign-out.ts";

export async function action({ context }: Route.ActionArgs) {
  const { session } = context.get(visitContext);
  if (session) await outsideShops((tx) => endSession(tx, session.id, null));
  return redirect("/sign-in", { headers: { "Set-Cookie": await sessionCookie.serialize("", { maxAge: 0 }) } });
}

export function loader() {
  return redirect("/");
}
