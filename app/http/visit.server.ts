import type { MiddlewareFunction } from "react-router";
import { findGuestLink, findSession, listJobsOf, touchSession, type FoundSession } from "#app/data/sessions.server.ts";
import { outsideShops } from "#app/data/scope.server.ts";
import { isKeptToJobs } from "#app/domain/permissions.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { env } from "#app/env.server.ts";
import { hashToken } from "#app/services/secrets.server.ts";
import { visitContext } from "./context.server.ts";
import { sessionCookie } from "./cookies.server.ts";

const idleLimit = 8 * 60 * 60 * 1000;

/** Finds who is looking, once a request, for every route below the root. */
export const visitMiddleware: MiddlewareFunction<Response> = async ({ request, context }, next) => {
  const token: unknown = await sessionCookie.parse(request.headers.get("Cookie"));
  const found = typeof token === "string" ? await findVisitor(token) : { session: null, viewer: null };
  context.set(visitContext, {
    url: new URL(request.url),
    method: request.method,
    address: request.headers.get("X-Spotblue-Address") ?? "unknown",
    userAgent: request.headers.get("User-Agent") ?? "",
    ...found,
  });
  return next();
};

async function findVisitor(token: string): Promise<{ session: FoundSession | null; viewer: Viewer | null }> {
  return outsideShops(async (tx) => {
    const session = await findSession(tx, hashToken(token));
    if (!session || Date.now() - session.lastSeenAt.getTime() > idleLimit) return { session: null, viewer: null };
    if (session.person?.disabled) return { session: null, viewer: null };
    await touchSession(tx, session.id);
    const shared = { sessionId: session.id, provedAt: session.provedAt.toISOString(), provedBy: session.provedBy };

    if (session.guestLinkId) {
      const link = await findGuestLink(tx, session.guestLinkId);
      if (!link) return { session: null, viewer: null };
      const viewer: Viewer = {
        ...shared,
        personId: null,
        guestLinkId: link.id,
        name: link.name,
        email: link.email,
        shopId: link.shopId,
        shopName: link.shopName,
        roles: [link.role],
        jobs: [link.jobId],
      };
      return { session, viewer };
    }

    const membership = session.memberships.find((m) => m.shopId === session.shopId) ?? session.memberships[0];
    if (!membership || !session.personId || !session.person) return { session, viewer: null };
    const viewer: Viewer = {
      ...shared,
      personId: session.personId,
      guestLinkId: null,
      name: session.person.name,
      email: session.person.email,
      shopId: membership.shopId,
      shopName: membership.shopName,
      roles: membership.roles,
      jobs: isKeptToJobs(membership.roles) ? await listJobsOf(tx, membership.shopId, session.personId, membership.roles) : "*",
    };
    return { session, viewer };
  });
}

/**
 * Refuses a change that another site's page sent: Origin must be the public one. A request
 * without Origin passes only when the browser itself says that it comes from this site.
 */
export const originMiddleware: MiddlewareFunction<Response> = async ({ request }, next) => {
  if (request.method !== "GET" && request.method !== "HEAD") {
    const origin = request.headers.get("Origin");
    const fromHere = origin === null ? request.headers.get("Sec-Fetch-Site") === "same-origin" : origin === env.APP_ORIGIN;
    if (!fromHere) throw new Response("This change did not come from this site's own pages", { status: 403, statusText: "Foreign origin" });
  }
  return next();
};
