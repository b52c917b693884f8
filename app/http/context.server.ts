import { createContext, redirect, type RouterContextProvider } from "react-router";
import { can, type Action } from "#app/domain/permissions.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import type { FoundSession } from "#app/data/sessions.server.ts";

export interface Visit {
  url: URL;
  method: string;
  /** Address of the caller, for rate limits. */
  address: string;
  userAgent: string;
  session: FoundSession | null;
  viewer: Viewer | null;
}

export const visitContext = createContext<Visit>();

type Context = Readonly<RouterContextProvider>;

/** Where to sign in and come back to. */
function signInUrl(url: URL): string {
  const next = url.pathname.replace(/\.data$/, "") + url.search.replace(/[?&]_routes=[^&]*/, "");
  return `/sign-in?next=${encodeURIComponent(next)}`;
}

/** The viewer, or the way to sign in; API routes and changes are answered 401. */
export function requireViewer(context: Context): Viewer {
  const visit = context.get(visitContext);
  if (visit.viewer) return visit.viewer;
  if (visit.method !== "GET" || visit.url.pathname.startsWith("/api/")) {
    throw new Response("Sign in first", { status: 401, statusText: "Sign in first" });
  }
  if (visit.session?.personId) throw redirect("/shops");
  throw redirect(signInUrl(visit.url));
}

/**
 * The viewer, if the permission table lets them do this. The first line of every loader and
 * action: below it the code knows only the happy case.
 */
export function requireCan(context: Context, action: Action): Viewer {
  const viewer = requireViewer(context);
  if (!can(viewer.roles, action)) throw new Response("Not allowed", { status: 403, statusText: "Not allowed" });
  return viewer;
}

export function findViewer(context: Context): Viewer | null {
  return context.get(visitContext).viewer;
}

/** A signed-in person, whichever shop they look at, or none: the pages of the own account. */
export function requirePerson(context: Context): { session: FoundSession; personId: string; name: string; email: string } {
  const visit = context.get(visitContext);
  const { session } = visit;
  if (session?.personId && session.person) return { session, personId: session.personId, ...session.person };
  if (visit.method !== "GET") throw new Response("Sign in first", { status: 401, statusText: "Sign in first" });
  throw redirect(signInUrl(visit.url));
}
