import { createCookie } from "react-router";
import { env } from "#app/env.server.ts";

const overTls = env.APP_ORIGIN.startsWith("https:");

/** Carries the session's token, signed; the table holds only its hash. */
export const sessionCookie = createCookie(overTls ? "__Host-spotblue" : "spotblue", {
  httpOnly: true,
  secure: overTls,
  sameSite: "lax",
  path: "/",
  secrets: env.SESSION_SECRETS,
});

/** Where somebody wanted to go when they went to GitHub to sign in. */
export const githubNextCookie = createCookie("spotblue-github-next", { httpOnly: true, secure: overTls, sameSite: "lax", path: "/sign-in", maxAge: 600, secrets: env.SESSION_SECRETS });

export type Theme = "system" | "paper" | "blueprint";
export type Units = "mm" | "in";

export const preferencesCookie = createCookie("spotblue-preferences", { httpOnly: true, secure: overTls, sameSite: "lax", path: "/", maxAge: 60 * 60 * 24 * 365 });

/** How this person wants pages to look; anything else in the cookie is ignored. */
export async function readPreferences(request: Request): Promise<{ theme: Theme; units: Units }> {
  const stored: unknown = await preferencesCookie.parse(request.headers.get("Cookie"));
  const given = typeof stored === "object" && stored !== null ? (stored as Record<string, unknown>) : {};
  return {
    theme: given.theme === "paper" || given.theme === "blueprint" ? given.theme : "system",
    units: given.units === "in" ? "in" : "mm",
  };
}
