import { readFileSync } from "node:fs";
import { expect, test, type APIRequestContext, type APIResponse } from "@playwright/test";
import type { RouteConfigEntry } from "@react-router/dev/routes";
import pg from "pg";
import routes from "../../app/routes.ts";
import { can, roles, type Role } from "../../app/domain/permissions.ts";
import signIns from "../../db/seeds/demo-sign-ins.json" with { type: "json" };
import { routeTable } from "../support/route-table.ts";

/** Every path of routes.ts, so that a new route can't be forgotten. */
function pathsOf(entries: RouteConfigEntry[], before = ""): string[] {
  return entries.flatMap((entry) => {
    const path = [before, entry.path ?? ""].filter(Boolean).join("/");
    return entry.children ? pathsOf(entry.children, path) : [path];
  });
}

const paths = [...new Set(pathsOf(routes as RouteConfigEntry[]))];
const guarded = paths.filter((path) => typeof routeTable[path] === "string");
const garbage = ["nonsense", "00000000-0000-4000-8000-000000000000"];

let ids: Record<string, string>;
const origin = () => test.info().project.use.baseURL!;

test.beforeAll(async () => {
  const stack = JSON.parse(readFileSync(process.env.STACK_FILE!, "utf8")) as Record<string, string>;
  const db = new pg.Client({ connectionString: stack.DATABASE_OWNER_URL });
  await db.connect();
  try {
    const one = async (query: string) => String((await db.query(query)).rows[0]!.id);
    // The bracket: shown to the customer, shared with the machinist, released.
    const revisionId = await one("select d.revision_id as id from decisions d where d.decision = 'go' order by d.at limit 1");
    ids = {
      jobId: await one("select id from jobs order by number limit 1"),
      customerId: await one("select id from customers limit 1"),
      matingPartId: await one("select id from mating_parts limit 1"),
      partId: await one(`select part_id as id from revisions where id = '${revisionId}'`),
      characteristicId: await one("select id from characteristics limit 1"),
      revisionId,
      printId: await one(`select id from prints where revision_id = '${revisionId}'`),
      fitCheckId: await one(`select id from fit_checks where revision_id = '${revisionId}'`),
      calloutId: await one(`select id from callouts where revision_id = '${revisionId}'`),
      calculationId: await one(`select id from calculations where revision_id = '${revisionId}'`),
      decisionId: await one(`select id from decisions where revision_id = '${revisionId}'`),
      fileId: await one(`select file_id as id from fit_photos where revision_id = '${revisionId}'`),
      instrumentId: await one("select id from instruments limit 1"),
      printerId: await one("select id from printers limit 1"),
      presetId: await one("select id from print_presets limit 1"),
      materialId: await one("select id from materials limit 1"),
      questionId: await one("select id from makeability_questions limit 1"),
      kind: "screen",
    };
    // Another shop, with an owner of its own, who must see nothing of this one.
    await db.query(`with p as (insert into people (name, email, password_hash) select 'Other Owner', 'owner@elsewhere.example', password_hash from people where email = $1 on conflict do nothing returning id)
      select scope.found_shop('Elsewhere', 'EUR', id) from p`, [signIns[0]!.email]);
  } finally {
    await db.end();
  }
});

async function signIn(request: APIRequestContext, email: string, password: string): Promise<void> {
  const answer = await request.post("/sign-in", { form: { email, password, intent: "password" }, headers: { Origin: origin() }, maxRedirects: 0 });
  expect(answer.status(), `${email} signs in`).toBe(302);
}

const urlOf = (path: string, values: Record<string, string>) => `/${path.replace(/:(\w+)/g, (_, name: string) => values[name] ?? "x")}${path === "api/uploads/:fileId" ? "?parts=1" : ""}`;

/** The status of a GET. The stream of events never ends, so its head is enough. */
async function look(request: APIRequestContext, path: string, values: Record<string, string>): Promise<{ status: number; location: string }> {
  if (path === "api/events") {
    const cookies = (await request.storageState()).cookies.map(({ name, value }) => `${name}=${value}`).join("; ");
    const answer = await fetch(`${origin()}/api/events`, { headers: { Cookie: cookies }, signal: AbortSignal.timeout(20_000) });
    await answer.body?.cancel();
    return { status: answer.status, location: "" };
  }
  const answer: APIResponse = await request.get(urlOf(path, values), { maxRedirects: 0 });
  return { status: answer.status(), location: answer.headers().location ?? "" };
}

test("every route is in the table, and nothing else is", () => {
  expect(paths.filter((path) => routeTable[path] === undefined)).toEqual([]);
});

test("signed out: the way to sign in, or 401", async ({ playwright }) => {
  const request = await playwright.request.newContext({ baseURL: origin() });
  for (const path of guarded) {
    const { status, location } = await look(request, path, ids);
    if (status === 302) expect(location, path).toMatch(/^\/sign-in/);
    else expect(status, path).toBe(401);
  }
  await request.dispose();
});

for (const role of roles) {
  test(`the ${role} reaches what the permission table says, and nothing else`, async ({ playwright }) => {
    const request = await playwright.request.newContext({ baseURL: origin() });
    const who = signIns.find((one) => one.role === role)!;
    await signIn(request, who.email, who.password);
    for (const path of guarded) {
      const action = routeTable[path]!;
      const { status, location } = await look(request, path, ids);
      const said = `${role} GET /${path}`;
      if (action === "person" || can([role as Role], action as never)) {
        // An upload page of a file that is no upload is a 404 of its own; so is a page that only takes POST.
        const nothingToRead = path.startsWith("api/uploads") || path === "api/fit-checks";
        expect(status, said).toBeLessThan(nothingToRead ? 405 : 400);
        if (status === 302) expect(location, said).not.toMatch(/^\/sign-in/);
        expect(status, said).not.toBe(403);
      } else expect(status, said).toBe(403);
    }
    await request.dispose();
  });
}

test("the owner of another shop finds nothing under this shop's ids", async ({ playwright }) => {
  const request = await playwright.request.newContext({ baseURL: origin() });
  await signIn(request, "owner@elsewhere.example", signIns[0]!.password);
  for (const path of guarded.filter((one) => one.includes(":") && one !== "prove/link/:token")) {
    const action = routeTable[path]!;
    const { status } = await look(request, path, ids);
    expect(status, path).toBe(can(["owner", "designer"], action as never) ? 404 : 403);
  }
  await request.dispose();
});

test("garbage ids are a 404", async ({ playwright }) => {
  const request = await playwright.request.newContext({ baseURL: origin() });
  const designer = signIns.find(({ role }) => role === "designer")!;
  await signIn(request, designer.email, designer.password);
  for (const path of guarded.filter((one) => one.includes(":") && one !== "prove/link/:token" && can(["designer"], routeTable[one] as never))) {
    for (const id of garbage) {
      const { status } = await look(request, path, Object.fromEntries([...Object.keys(ids).map((name) => [name, id]), ["kind", "screen"]]));
      expect(status, `${path} with ${id}`).toBe(404);
    }
  }
  await request.dispose();
});

test("a change from a foreign page, or from none, is refused on every route", async ({ playwright }) => {
  const request = await playwright.request.newContext({ baseURL: origin() });
  const owner = signIns.find(({ role }) => role === "owner")!;
  await signIn(request, owner.email, owner.password);
  for (const path of paths) {
    for (const headers of [{ Origin: "https://elsewhere.example" }, { Origin: "null" }, {}] as Array<Record<string, string>>) {
      const answer = await request.post(urlOf(path, ids), { headers, form: { intent: "x" }, maxRedirects: 0 });
      // The framework's own check answers 400 before ours is asked.
      expect([400, 403], `${path} ${JSON.stringify(headers)}: ${answer.status()}`).toContain(answer.status());
      expect(await answer.text(), path).not.toContain("Nothing was saved");
    }
  }
  await request.dispose();
});
