import { Outlet, useMatches } from "react-router";
import { Frame, type Crumb, type MenuEntry, type NavWord } from "#app/components/frame.tsx";
import { can } from "#app/domain/permissions.ts";
import { requireViewer, visitContext } from "#app/http/context.server.ts";
import { readPreferences } from "#app/http/cookies.server.ts";
import type { Route } from "./+types/signed-in.ts";

export const middleware: Route.MiddlewareFunction[] = [
  async ({ context }, next) => {
    requireViewer(context);
    return next();
  },
];

/** What the frame needs: who looks, and the words they may go to. */
export async function loader({ request, context }: Route.LoaderArgs) {
  const viewer = requireViewer(context);
  const { session } = context.get(visitContext);
  const nav: NavWord[] = [{ to: "/", label: "Today", end: true }, { to: "/jobs", label: "Jobs" }];
  if (can(viewer.roles, "customer:read")) nav.push({ to: "/customers", label: "Customers" });
  if (can(viewer.roles, "equipment:write")) nav.push({ to: "/shop", label: "Shop" });
  if (can(viewer.roles, "logbook:read")) nav.push({ to: "/logbook", label: "Logbook" });

  const menu: MenuEntry[] = [];
  if (viewer.personId) menu.push({ label: "Your account", to: "/account" });
  const shops = session?.memberships ?? [];
  if (shops.length > 1) {
    for (const shop of shops) menu.push({ label: shop.shopName, postTo: "/shops", fields: { shopId: shop.shopId }, current: shop.shopId === viewer.shopId });
  }
  menu.push({ label: "Sign out", postTo: "/sign-out" });
  return { nav, menu, person: `${viewer.name}, ${viewer.roles.join(" and ")}`, shopName: viewer.shopName, preferences: await readPreferences(request) };
}

/** A page names where it is by its handle: `handle = { crumbs: (data) => [...] }`. */
export interface PageHandle<Data> {
  crumbs: (data: Data) => Crumb[];
}

export default function SignedIn({ loaderData }: Route.ComponentProps) {
  const matches = useMatches();
  const crumbs = matches.flatMap(({ handle, loaderData: data }) => {
    const named = handle as PageHandle<unknown> | undefined;
    return named?.crumbs && data ? named.crumbs(data) : [];
  });
  return (
    <Frame nav={loaderData.nav} crumbs={crumbs} person={loaderData.person} menu={loaderData.menu} preferences={loaderData.preferences}>
      <Outlet />
    </Frame>
  );
}
