import { createHash, randomBytes } from "node:crypto";
import http, { type IncomingMessage, type ServerResponse } from "node:http";
import type { AddressInfo } from "node:net";
import { escapeHtml, isForLoopback, page, readFields, sendJson, sendPage } from "./loopback-page.ts";

export interface InventedPerson {
  name: string;
  email: string;
  /** Whether the address was proven to be theirs; a sign-in must not trust one that was not. */
  verified?: boolean;
}

export interface GithubFakeSettings {
  /** 0 takes any. */
  port: number;
  clientId: string;
  clientSecret: string;
  /** Shown to choose from. */
  people: readonly InventedPerson[];
  /** Where people may be sent back to besides this machine. */
  appOrigin?: string | undefined;
  /** Milliseconds since 1970. */
  now?: () => number;
}

export interface GithubFake {
  port: number;
  authorizeUrl: string;
  tokenUrl: string;
  userUrl: string;
  emailsUrl: string;
  stop: () => Promise<void>;
}

interface Grant {
  person: InventedPerson;
  redirectUri: string;
  scopes: string[];
  at: number;
}

/** As at GitHub. */
const CODE_LIFE_MS = 10 * 60 * 1000;
const PATHS = { authorize: "/login/oauth/authorize", token: "/login/oauth/access_token", user: "/user", emails: "/user/emails" };

/**
 * The part of GitHub that a sign-in needs, on loopback, with people who do not exist: a page to
 * say who one is, the exchange of a code for a token, and who the token belongs to.
 */
export async function startGithubFake(settings: GithubFakeSettings): Promise<GithubFake> {
  const now = settings.now ?? Date.now;
  const codes = new Map<string, Grant>();
  const tokens = new Map<string, Grant>();

  const server = http.createServer((request, response) => {
    answer(request, response).catch(() => response.destroy());
  });

  async function answer(request: IncomingMessage, response: ServerResponse): Promise<void> {
    if (!isForLoopback(request)) return sendJson(response, 403, { message: "Only by an address of this machine." });
    const url = new URL(request.url ?? "/", "http://localhost");
    const route = `${request.method} ${url.pathname}`;
    if (route === `GET ${PATHS.authorize}`) return askWho(url.searchParams, response);
    if (route === `POST ${PATHS.authorize}`) return sendBack(await readFields(request), response);
    if (route === `POST ${PATHS.token}`) return exchange(request, await readFields(request), response);
    if (route === `GET ${PATHS.user}` || route === `GET ${PATHS.emails}`) return tellWho(url.pathname, request, response);
    sendJson(response, 404, { message: "Not Found" });
  }

  /** Why a person can't be asked on behalf of this client; undefined when they can. */
  function faultOf(params: URLSearchParams): string | undefined {
    if (params.get("client_id") !== settings.clientId) return "The application that sent you here is not known: its client_id is another one.";
    if (!mayReturnTo(params.get("redirect_uri") ?? "", settings.appOrigin)) return "The address to send you back to (redirect_uri) is not one of the application.";
    return undefined;
  }

  function askWho(params: URLSearchParams, response: ServerResponse): void {
    const fault = faultOf(params);
    if (fault) return sendPage(response, 404, page("No such application", `<h1>This sign-in can't go on</h1><p>${fault}</p>`));
    const hidden = ["client_id", "redirect_uri", "state", "scope"].map((name) => `<input type="hidden" name="${name}" value="${escapeHtml(params.get(name) ?? "")}">`).join("");
    const form = (inside: string) => `<form method="post" action="${PATHS.authorize}">${hidden}${inside}</form>`;
    const known = settings.people.map(({ name, email }) => `<li>${form(`<input type="hidden" name="name" value="${escapeHtml(name)}"><input type="hidden" name="email" value="${escapeHtml(email)}"><input type="hidden" name="verified" value="yes"><button>${escapeHtml(name)}, ${escapeHtml(email)}</button>`)}</li>`).join("");
    const other = form('<label>Name<input name="name" required></label><label>E-mail<input name="email" type="email" required></label><label><input type="checkbox" name="verified" value="yes" checked> The address is verified</label><button>Sign in as this person</button>');
    const cancel = form('<button name="cancel" value="yes">Cancel</button>');
    sendPage(response, 200, page("Local stand-in for GitHub", `<h1>Who signs in?</h1><p class="soft">This is a local stand-in for GitHub. Nothing leaves this machine.</p><ul>${known}</ul><h2>Somebody else</h2>${other}<h2>Nobody</h2>${cancel}`));
  }

  function sendBack(fields: URLSearchParams | undefined, response: ServerResponse): void {
    const fault = fields ? faultOf(fields) : "The form is too long.";
    const [name, email] = [fields?.get("name")?.trim(), fields?.get("email")?.trim()];
    if (!fields || fault) return sendPage(response, 400, page("Not possible", `<h1>This sign-in can't go on</h1><p>${fault}</p>`));
    const target = new URL(fields.get("redirect_uri")!);
    if (fields.has("cancel")) {
      target.searchParams.set("error", "access_denied");
      target.searchParams.set("error_description", "The user has denied your application access.");
    } else {
      if (!name || !email?.includes("@")) return sendPage(response, 400, page("Not possible", "<h1>Name and e-mail are needed</h1><p>Go back and fill in both.</p>"));
      const code = randomBytes(10).toString("hex");
      codes.set(code, { person: { name, email, verified: fields.get("verified") === "yes" }, redirectUri: target.href, scopes: (fields.get("scope") ?? "").split(/[\s,]+/).filter(Boolean), at: now() });
      target.searchParams.set("code", code);
    }
    target.searchParams.set("state", fields.get("state") ?? "");
    response.writeHead(302, { Location: target.href, "Cache-Control": "no-store", "Referrer-Policy": "no-referrer" }).end();
  }

  /** GitHub answers 200 to a refused exchange too, with `error` in the body. */
  function exchange(request: IncomingMessage, fields: URLSearchParams | undefined, response: ServerResponse): void {
    const [, basic] = /^Basic (.+)$/i.exec(request.headers.authorization ?? "") ?? [];
    const [, basicId, basicSecret] = /^([^:]*):(.*)$/s.exec(Buffer.from(basic ?? "", "base64").toString("utf8")) ?? [];
    const [id, secret] = basic ? [basicId, basicSecret] : [fields?.get("client_id"), fields?.get("client_secret")];
    const reply = (body: Record<string, string>) => {
      if (/json/.test(request.headers.accept ?? "")) return sendJson(response, 200, body);
      response.writeHead(200, { "Content-Type": "application/x-www-form-urlencoded; charset=utf-8", "Cache-Control": "no-store" }).end(new URLSearchParams(body).toString());
    };
    if (id !== settings.clientId || secret !== settings.clientSecret) return reply({ error: "incorrect_client_credentials", error_description: "The client_id and/or client_secret passed are incorrect." });
    const code = fields?.get("code") ?? "";
    const grant = codes.get(code);
    codes.delete(code);
    if (!grant || now() - grant.at > CODE_LIFE_MS) return reply({ error: "bad_verification_code", error_description: "The code passed is incorrect or expired." });
    const redirectUri = fields?.get("redirect_uri");
    if (redirectUri != null && (!URL.canParse(redirectUri) || new URL(redirectUri).href !== grant.redirectUri)) return reply({ error: "redirect_uri_mismatch", error_description: "The redirect_uri MUST match the registered callback URL for this application." });
    const token = `gho_${randomBytes(18).toString("hex")}`;
    tokens.set(token, grant);
    reply({ access_token: token, token_type: "bearer", scope: grant.scopes.join(",") });
  }

  function tellWho(path: string, request: IncomingMessage, response: ServerResponse): void {
    const [, token = ""] = /^(?:Bearer|token) (\S+)$/i.exec(request.headers.authorization ?? "") ?? [];
    const grant = tokens.get(token);
    if (!grant) return sendJson(response, 401, { message: "Bad credentials" });
    if (!request.headers["user-agent"]) return sendJson(response, 403, { message: "Request forbidden by administrative rules. Please make sure your request has a User-Agent header." });
    const { name, email, verified = true } = grant.person;
    if (path === PATHS.user) return sendJson(response, 200, { id: idOf(email), login: loginOf(email), name, email: null, type: "User" });
    if (!grant.scopes.some((scope) => scope === "user" || scope === "user:email")) return sendJson(response, 404, { message: "Not Found" });
    sendJson(response, 200, [{ email, primary: true, verified, visibility: "private" }]);
  }

  await new Promise<void>((resolve, reject) => {
    server.once("error", reject);
    server.listen(settings.port, "127.0.0.1", resolve);
  });
  const { port } = server.address() as AddressInfo;
  const at = (path: string) => `http://127.0.0.1:${port}${path}`;
  return {
    port,
    authorizeUrl: at(PATHS.authorize),
    tokenUrl: at(PATHS.token),
    userUrl: at(PATHS.user),
    emailsUrl: at(PATHS.emails),
    stop: () => {
      const closed = new Promise<void>((resolve) => void server.close(() => resolve()));
      server.closeAllConnections();
      return closed;
    },
  };
}

function mayReturnTo(address: string, appOrigin: string | undefined): boolean {
  if (!URL.canParse(address)) return false;
  const { protocol, hostname, origin } = new URL(address);
  return origin === appOrigin || ((protocol === "http:" || protocol === "https:") && ["127.0.0.1", "localhost", "[::1]"].includes(hostname));
}

/** The same person has the same number after a new start too. */
const idOf = (email: string) => createHash("sha256").update(email.toLowerCase()).digest().readUIntBE(0, 5);
const loginOf = (email: string) => email.split("@")[0]!.toLowerCase().replace(/[^a-z0-9]+/g, "-").slice(0, 39) || "somebody";
