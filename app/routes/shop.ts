import { href, redirect } from "react-router";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/shop.ts";

/** The word Shop leads to the first of its pages. */
export async function loader({ context }: Route.LoaderArgs) {
  requireCan(context, "equipment:read");
  return redirect(href("/shop/instruments"));
}
