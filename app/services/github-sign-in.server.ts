import { ArcticFetchError, GitHub, OAuth2Client, OAuth2RequestError, type OAuth2Tokens, UnexpectedErrorResponseBodyError, UnexpectedResponseError } from "arctic";
import { GitHubStrategy } from "remix-auth-github";
import { z } from "zod";

export interface GithubSettings {
  clientId: string;
  clientSecret: string;
  authorizeUrl: string;
  tokenUrl: string;
  userUrl: string;
  emailsUrl: string;
  /** Where GitHub sends the person back to, exactly as it is registered there. */
  redirectUri: string;
}

export interface GithubPerson {
  /** GitHub's number of the account: stays when name, login or address change. */
  id: string;
  login: string;
  name: string;
  /** Verified addresses only, the primary one first; may be none. */
  emails: string[];
}

/** Reading the addresses of an account is all that is asked for. */
const SCOPES = ["user:email"];
const STATE_COOKIE = "__Host-github-state";
const STATE_LIFE_S = 10 * 60;
const PATIENCE_MS = 10_000;

const userShape = z.object({ id: z.number().int().nonnegative(), login: z.string().min(1), name: z.string().nullish() });
const emailsShape = z.array(z.object({ email: z.string(), primary: z.boolean(), verified: z.boolean() }));

/** GitHub's answer about the account was not one that can be used. */
export class GithubAnswerFault extends Error {}

/** The library's client with addresses out of the settings; its own are constants. */
class AddressedGithub extends GitHub {
  readonly #settings: GithubSettings;
  readonly #client: OAuth2Client;

  constructor(settings: GithubSettings) {
    super(settings.clientId, settings.clientSecret, settings.redirectUri);
    this.#settings = settings;
    this.#client = new OAuth2Client(settings.clientId, settings.clientSecret, settings.redirectUri);
  }

  override createAuthorizationURL(state: string, scopes: string[]): URL {
    return this.#client.createAuthorizationURL(this.#settings.authorizeUrl, state, scopes);
  }

  override async validateAuthorizationCode(code: string): Promise<OAuth2Tokens> {
    const tokens = await this.#client.validateAuthorizationCode(this.#settings.tokenUrl, code, null);
    // GitHub refuses with status 200.
    const { error, error_description: description } = tokens.data as { error?: unknown; error_description?: unknown };
    if (typeof error === "string") throw new OAuth2RequestError(error, typeof description === "string" ? description : null, null, null);
    return tokens;
  }
}

class AddressedStrategy<User> extends GitHubStrategy<User> {
  protected override client: GitHub;

  constructor(settings: GithubSettings, verify: (found: { person: GithubPerson; request: Request }) => Promise<User>) {
    super(
      {
        clientId: settings.clientId, clientSecret: settings.clientSecret, redirectURI: settings.redirectUri, scopes: SCOPES as never,
        // Lax: the person comes back from another site. Secure is kept on loopback too.
        cookie: { name: STATE_COOKIE, httpOnly: true, secure: true, sameSite: "Lax", path: "/", maxAge: STATE_LIFE_S },
      },
      async ({ tokens, request }) => verify({ person: await readPerson(settings, tokens.accessToken()), request }),
    );
    this.client = new AddressedGithub(settings);
  }
}

/**
 * Sign-in by GitHub for `remix-auth`. Its `authenticate(request)` throws the redirect to GitHub
 * first, and gives what `verify` gave when the person comes back.
 *
 * @param verify finds our person; the state, the code and the account are proven by then
 */
export function githubStrategy<User>(settings: GithubSettings, verify: (found: { person: GithubPerson; request: Request }) => Promise<User>): GitHubStrategy<User> {
  return new AddressedStrategy(settings, verify);
}

/** Tells in words a person can act on why `authenticate` failed; undefined when it is no fault of the sign-in. */
export function githubRefusal(error: unknown): string | undefined {
  if (error instanceof OAuth2RequestError) {
    return error.code === "access_denied" ? "You cancelled the sign-in at GitHub." : "GitHub did not accept this sign-in. Start it again; a link from GitHub works once and for ten minutes.";
  }
  // What the strategy throws when cookie, state or code are missing or belong to another start.
  if ((error instanceof ReferenceError || error instanceof RangeError) && /\b(state|code) (on|in)\b/i.test(error.message)) return "This sign-in was started in another window or too long ago. Start it again.";
  if (error instanceof ArcticFetchError || error instanceof GithubAnswerFault || error instanceof UnexpectedResponseError || error instanceof UnexpectedErrorResponseBodyError) {
    return "GitHub could not be reached. Try again, or sign in by password or e-mailed link.";
  }
  return undefined;
}

async function readPerson({ userUrl, emailsUrl }: GithubSettings, token: string): Promise<GithubPerson> {
  const [user, emails] = await Promise.all([ask(userUrl, token, userShape), ask(emailsUrl, token, emailsShape)]);
  const verified = emails.filter((email) => email.verified).sort((a, b) => Number(b.primary) - Number(a.primary));
  return { id: String(user.id), login: user.login, name: user.name?.trim() || user.login, emails: verified.map(({ email }) => email) };
}

async function ask<T>(url: string, token: string, shape: z.ZodType<T>): Promise<T> {
  const headers = { Accept: "application/vnd.github+json", "X-GitHub-Api-Version": "2022-11-28", "User-Agent": "spotblue", Authorization: `Bearer ${token}` };
  let answer: Response;
  let body: unknown;
  try {
    answer = await fetch(url, { headers, signal: AbortSignal.timeout(PATIENCE_MS) });
    body = await answer.json();
  } catch (error) {
    throw new GithubAnswerFault(`no usable answer from ${url}`, { cause: error });
  }
  const parsed = shape.safeParse(body);
  if (!answer.ok || !parsed.success) throw new GithubAnswerFault(`${url} answered ${answer.status}`);
  return parsed.data;
}
