import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { githubRefusal, githubStrategy, type GithubPerson, type GithubSettings } from "#app/services/github-sign-in.server.ts";
import { startGithubFake, type GithubFake } from "#scripts/fakes/github-fake.ts";

const runa = { name: "Runa Aune", email: "runa@aune.example" };
const redirectUri = "http://127.0.0.1:4600/sign-in/github/return";
let fake: GithubFake;
let settings: GithubSettings;
let clock = Date.now();

beforeAll(async () => {
  fake = await startGithubFake({ port: 0, clientId: "the-shop", clientSecret: "a secret: with/signs", people: [runa], now: () => clock });
  const { authorizeUrl, tokenUrl, userUrl, emailsUrl } = fake;
  settings = { clientId: "the-shop", clientSecret: "a secret: with/signs", authorizeUrl, tokenUrl, userUrl, emailsUrl, redirectUri };
});

afterAll(() => fake.stop());

const strategyWith = (changed: Partial<GithubSettings> = {}) => githubStrategy<GithubPerson>({ ...settings, ...changed }, async ({ person }) => person);

/** What a browser does up to the page that asks who one is. */
async function begin(strategy = strategyWith()) {
  const sent = await strategy.authenticate(new Request("http://127.0.0.1:4600/sign-in/github")).then(
    () => expect.fail("the person was not sent to GitHub"),
    (thrown: unknown) => thrown as Response,
  );
  const cookie = sent.headers.get("set-cookie")!;
  return { address: new URL(sent.headers.get("location")!), cookie: cookie.split(";")[0]!, attributes: cookie };
}

/** Presses the button of a person, or of `cancel`. */
async function choose(address: URL, fields: Record<string, string>): Promise<URL> {
  const form = new URLSearchParams({ ...Object.fromEntries(address.searchParams), ...fields });
  const answer = await fetch(address.origin + address.pathname, { method: "POST", body: form, redirect: "manual" });
  expect(answer.status).toBe(302);
  return new URL(answer.headers.get("location")!);
}

const comeBack = (address: URL, cookie: string, strategy = strategyWith()) => strategy.authenticate(new Request(address, { headers: { cookie } }));

const failure = (work: Promise<unknown>) => work.then(() => expect.fail("it went through"), (error: unknown) => error);

describe("signing in by GitHub", () => {
  test("goes there, names a person, and comes back as them", async () => {
    const { address, cookie, attributes } = await begin();
    expect(address.origin + address.pathname).toBe(fake.authorizeUrl);
    expect(attributes).toMatch(/HttpOnly/i);
    expect(attributes).toMatch(/Secure/i);
    expect(attributes).toMatch(/SameSite=Lax/i);

    const shown = await (await fetch(address)).text();
    expect(shown).toContain("Runa Aune, runa@aune.example");

    const back = await choose(address, { ...runa, verified: "yes" });
    expect(back.origin + back.pathname).toBe(redirectUri);
    expect(back.searchParams.get("state")).toBe(address.searchParams.get("state"));

    const person = await comeBack(back, cookie);
    expect(person).toEqual({ id: expect.stringMatching(/^\d+$/), login: "runa", name: "Runa Aune", emails: ["runa@aune.example"] });
    const again = await begin();
    expect((await comeBack(await choose(again.address, { ...runa, verified: "yes" }), again.cookie)).id).toBe(person.id);
  });

  test("an address that was never verified is not passed on", async () => {
    const { address, cookie } = await begin();
    expect((await comeBack(await choose(address, runa), cookie)).emails).toEqual([]);
  });

  test("a code works once", async () => {
    const { address, cookie } = await begin();
    const back = await choose(address, { ...runa, verified: "yes" });
    await comeBack(back, cookie);
    expect(githubRefusal(await failure(comeBack(back, cookie)))).toMatch(/Start it again/);
  });

  test("a code is refused after ten minutes", async () => {
    const { address, cookie } = await begin();
    const back = await choose(address, { ...runa, verified: "yes" });
    clock += 10 * 60 * 1000 + 1;
    expect(githubRefusal(await failure(comeBack(back, cookie)))).toMatch(/Start it again/);
  });

  test("a state of another start is refused before the code is used", async () => {
    const { address, cookie } = await begin();
    const other = await begin();
    const back = await choose(address, { ...runa, verified: "yes" });
    expect(githubRefusal(await failure(comeBack(back, other.cookie)))).toMatch(/another window/);
    expect(githubRefusal(await failure(comeBack(back, "")))).toMatch(/another window/);
    expect(await comeBack(back, cookie)).toMatchObject({ login: "runa" });
  });

  test("cancelling is told as that", async () => {
    const { address, cookie } = await begin();
    expect(githubRefusal(await failure(comeBack(await choose(address, { cancel: "yes" }), cookie)))).toMatch(/cancelled/);
  });

  test("a wrong secret, and another address to come back to, are refused", async () => {
    const { address, cookie } = await begin();
    const wrongSecret = strategyWith({ clientSecret: "guessed" });
    expect(await failure(comeBack(await choose(address, { ...runa, verified: "yes" }), cookie, wrongSecret))).toMatchObject({ code: "incorrect_client_credentials" });
    const elsewhere = strategyWith({ redirectUri: "http://127.0.0.1:4600/elsewhere" });
    expect(await failure(comeBack(await choose(address, { ...runa, verified: "yes" }), cookie, elsewhere))).toMatchObject({ code: "redirect_uri_mismatch" });
  });

  test("an unknown application and a foreign address to come back to are not even asked", async () => {
    const { address } = await begin();
    for (const [name, value] of [["client_id", "somebody-else"], ["redirect_uri", "https://evil.example/"]] as const) {
      const changed = new URL(address);
      changed.searchParams.set(name, value);
      expect((await fetch(changed)).status).toBe(404);
      const form = new URLSearchParams({ ...Object.fromEntries(changed.searchParams), ...runa });
      expect((await fetch(changed.origin + changed.pathname, { method: "POST", body: form, redirect: "manual" })).status).toBe(400);
    }
  });

  test("GitHub out of reach is told as that", async () => {
    const { address, cookie } = await begin();
    const back = await choose(address, { ...runa, verified: "yes" });
    const gone = "http://127.0.0.1:9/";
    expect(githubRefusal(await failure(comeBack(back, cookie, strategyWith({ tokenUrl: gone }))))).toMatch(/could not be reached/);
    expect(githubRefusal(await failure(comeBack(back, cookie, strategyWith({ emailsUrl: gone }))))).toMatch(/could not be reached/);
    expect(githubRefusal(new Error("something else"))).toBeUndefined();
  });

  test("a token says nothing without the scope, and an invented one nothing at all", async () => {
    expect((await fetch(fake.userUrl, { headers: { authorization: "Bearer gho_invented" } })).status).toBe(401);
    const { address } = await begin();
    const narrow = new URL(address);
    narrow.searchParams.set("scope", "read:org");
    const code = (await choose(narrow, { ...runa, verified: "yes" })).searchParams.get("code")!;
    const answer = await fetch(fake.tokenUrl, { method: "POST", headers: { accept: "application/json" }, body: new URLSearchParams({ client_id: settings.clientId, client_secret: settings.clientSecret, code }) });
    const { access_token: token } = (await answer.json()) as { access_token: string };
    expect((await fetch(fake.userUrl, { headers: { authorization: `Bearer ${token}` } })).status).toBe(200);
    expect((await fetch(fake.emailsUrl, { headers: { authorization: `Bearer ${token}` } })).status).toBe(404);
  });
});
