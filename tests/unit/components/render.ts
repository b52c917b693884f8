import { createElement, type ReactNode } from "react";
import { renderToString } from "react-dom/server";
import { createStaticHandler, createStaticRouter, StaticRouterProvider } from "react-router";
import { UnitsProvider, type LengthUnit } from "#app/components/measure.tsx";

/** The markup a server would send for these components, at an address, without scripts. */
export async function serverMarkup(children: ReactNode, { path = "/", units = "mm" as LengthUnit } = {}): Promise<string> {
  const element = createElement(UnitsProvider, { units, children });
  const handler = createStaticHandler([{ path: "*", element }]);
  const context = await handler.query(new Request(`http://localhost${path}`));
  if (context instanceof Response) throw new TypeError("the page answered with a response");
  return renderToString(createElement(StaticRouterProvider, { router: createStaticRouter(handler.dataRoutes, context), context, hydrate: false }));
}

/** Words of the markup, without tags. */
export function wordsOf(markup: string): string {
  return markup
    .replace(/<!-- -->/g, "")
    .replace(/<[^>]+>/g, " ")
    .replace(/&amp;/g, "&")
    .replace(/&#x27;/g, "'")
    .replace(/\s+/g, " ")
    .trim();
}
