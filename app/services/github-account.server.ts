import { findPersonByEmail, findPersonByGithub, setGithub, type Person } from "#app/data/people.server.ts";
import { outsideShops } from "#app/data/scope.server.ts";
import { env } from "#app/env.server.ts";
import { githubStrategy, type GithubPerson } from "./github-sign-in.server.ts";

/**
 * The account of somebody whom GitHub vouches for: by the number of their GitHub account, or the
 * first time by an e-mail address that GitHub has verified. Nobody gets an account this way.
 */
async function findAccount({ id, emails }: GithubPerson): Promise<Person | null> {
  return outsideShops(async (tx) => {
    const known = await findPersonByGithub(tx, id);
    if (known) return known.disabled ? null : known;
    for (const email of emails) {
      const person = await findPersonByEmail(tx, email);
      if (!person || person.disabled || person.githubId !== null) continue;
      await setGithub(tx, person.id, id);
      return person;
    }
    return null;
  });
}

/** Sign-in by GitHub, or null where it is not configured. */
export function githubSignIn() {
  if (!env.GITHUB_CLIENT_ID || !env.GITHUB_CLIENT_SECRET) return null;
  return githubStrategy(
    {
      clientId: env.GITHUB_CLIENT_ID,
      clientSecret: env.GITHUB_CLIENT_SECRET,
      authorizeUrl: env.GITHUB_AUTHORIZE_URL,
      tokenUrl: env.GITHUB_TOKEN_URL,
      userUrl: env.GITHUB_USER_URL,
      emailsUrl: env.GITHUB_EMAILS_URL,
      redirectUri: `${env.APP_ORIGIN}/sign-in/github/callback`,
    },
    ({ person }) => findAccount(person),
  );
}
