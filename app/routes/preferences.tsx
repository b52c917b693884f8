import { redirect } from "react-router";
import { preferencesCookie, readPreferences } from "#app/http/cookies.server.ts";
import { safeNext } from "#app/http/next.ts";
import type { Route } from "./+types/preferences.ts";

/** Keeps the theme and the unit of this browser; anybody may, signed in or not. */
export async function action({ request }: Route.ActionArgs) {
  const form = await request.formData();
  const preferences = await readPreferences(request);
  const theme = form.get("theme");
  const units = form.get("units");
  if (theme === "system" || theme === "paper" || theme === "blueprint") preferences.theme = theme;
  if (units === "mm" || units === "in") preferences.units = units;
  return redirect(safeNext(String(form.get("returnTo") ?? "/")), { headers: { "Set-Cookie": await preferencesCookie.serialize(preferences) } });
}

export function loader() {
  return redirect("/");
}
