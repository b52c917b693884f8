import { Links, Meta, Outlet, Scripts, ScrollRestoration, useRouteLoaderData } from "react-router";
import { ErrorPage } from "#app/components/error-page.tsx";
import { UnitsProvider } from "#app/components/measure.tsx";
import { useNonce } from "#app/components/nonce.ts";
import { readPreferences } from "#app/http/cookies.server.ts";
import { originMiddleware, visitMiddleware } from "#app/http/visit.server.ts";
import type { Route } from "./+types/root.ts";
import "./app.css";

export const middleware: Route.MiddlewareFunction[] = [originMiddleware, visitMiddleware];

export const links: Route.LinksFunction = () => [{ rel: "icon", href: "/icon.svg", type: "image/svg+xml" }];

export async function loader({ request }: Route.LoaderArgs) {
  return { preferences: await readPreferences(request) };
}

export function Layout({ children }: { children: React.ReactNode }) {
  const nonce = useNonce();
  const preferences = useRouteLoaderData<typeof loader>("root")?.preferences;
  return (
    <html lang="en" data-theme={preferences?.theme ?? "system"}>
      <head>
        <meta charSet="utf-8" />
        <meta name="viewport" content="width=device-width, initial-scale=1" />
        <meta name="color-scheme" content="light dark" />
        <Meta />
        <Links />
      </head>
      <body>
        <UnitsProvider units={preferences?.units ?? "mm"}>{children}</UnitsProvider>
        <ScrollRestoration nonce={nonce} />
        <Scripts nonce={nonce} />
      </body>
    </html>
  );
}

export default function Root() {
  return <Outlet />;
}

export function ErrorBoundary({ error }: Route.ErrorBoundaryProps) {
  return <ErrorPage error={error} />;
}
