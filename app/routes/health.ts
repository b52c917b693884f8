import { outsideShops } from "#app/data/scope.server.ts";

/** For a load balancer: the database answers. */
export async function loader() {
  await outsideShops((tx) => tx.raw("select 1"));
  return new Response("ok\n", { headers: { "Content-Type": "text/plain" } });
}
