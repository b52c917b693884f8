import { z } from "zod";

/** What the environment says wrongly or not at all, every fault in one message. */
export class EnvironmentFault extends Error {
  readonly faults: readonly string[];

  constructor(faults: readonly string[]) {
    super(`The environment is not usable:\n${faults.map((fault) => `  - ${fault}`).join("\n")}\n.env.example says what each variable means.`);
    this.faults = faults;
  }
}

/** `npm start` gives its local stand-ins keys that begin so; a deployment refuses them. */
const FAKE_MARK = "spotblue-fake";
/** What .env.example shows in place of a secret. */
const PLACEHOLDER_MARK = "change-me";
const SHORTEST_SECRET = 32;

const url = (...schemes: string[]) =>
  z.string().refine((text) => URL.canParse(text) && schemes.includes(new URL(text).protocol), {
    error: `must be an address that begins with ${schemes.map((scheme) => `${scheme}//`).join(" or ")}`,
  });
const web = url("http:", "https:");
const webOrigin = web.refine((text) => !URL.canParse(text) || new URL(text).origin === text, {
  error: "must be scheme, host and port only, without a slash at the end",
});
const wholeNumber = (from: number, to: number) =>
  z.string().regex(/^\d+$/, "must be a whole number").transform(Number).refine((n) => n >= from && n <= to, { error: `must lie between ${from} and ${to}` });

const schema = z.object({
  APP_MODE: z.enum(["demo", "deployment"], { error: "must be demo or deployment" }).default("deployment"),
  APP_ORIGIN: webOrigin,
  HOST: z.string().default("127.0.0.1"),
  PORT: wholeNumber(1, 65_535).default(4600),
  TRUSTED_PROXIES: wholeNumber(0, 8).default(0),
  SESSION_SECRETS: z
    .string()
    .transform((text) => text.split(",").map((secret) => secret.trim()).filter((secret) => secret !== ""))
    .refine((secrets) => secrets.length > 0 && secrets.every((secret) => secret.length >= SHORTEST_SECRET), {
      error: `must be one or more secrets of at least ${SHORTEST_SECRET} characters, separated by commas, the newest first`,
    }),

  DATABASE_URL: url("postgres:", "postgresql:"),

  // Without an endpoint the S3 client finds the address by the region itself.
  S3_ENDPOINT: web.optional(),
  S3_PUBLIC_ENDPOINT: web.optional(),
  S3_REGION: z.string().default("us-east-1"),
  S3_BUCKET: z.string(),
  S3_ACCESS_KEY_ID: z.string(),
  S3_SECRET_ACCESS_KEY: z.string(),

  SMTP_URL: url("smtp:", "smtps:"),
  MAIL_FROM: z.string().regex(/@/, "must hold an e-mail address").default("Spotblue <spotblue@localhost>"),
  MAIL_CATCHER_URL: web.optional(),

  // Sign-in by GitHub is offered when both are given.
  GITHUB_CLIENT_ID: z.string().optional(),
  GITHUB_CLIENT_SECRET: z.string().optional(),
  GITHUB_AUTHORIZE_URL: web.default("https://github.com/login/oauth/authorize"),
  GITHUB_TOKEN_URL: web.default("https://github.com/login/oauth/access_token"),
  GITHUB_USER_URL: web.default("https://api.github.com/user"),
  GITHUB_EMAILS_URL: web.default("https://api.github.com/user/emails"),

  MAX_MODEL_MB: wholeNumber(1, 5_000).default(500),
  MAX_PHOTO_MB: wholeNumber(1, 500).default(30),
});

export type Env = Readonly<Omit<z.output<typeof schema>, "S3_PUBLIC_ENDPOINT">> & {
  /** The store's address as a browser reaches it; undefined as S3_ENDPOINT may be. */
  readonly S3_PUBLIC_ENDPOINT: string | undefined;
};

/** A variable set to nothing counts as not set, as a line `NAME=` in a file means. */
function withoutBlanks(source: Record<string, string | undefined>) {
  return Object.fromEntries(Object.entries(source).filter(([, value]) => value !== undefined && value.trim() !== ""));
}

function deploymentFaults(given: z.output<typeof schema>): string[] {
  const faults: string[] = [];
  if (!given.APP_ORIGIN.startsWith("https:")) faults.push("APP_ORIGIN: must begin with https:// in a deployment, because sign-in cookies are sent over TLS only");
  if (given.MAIL_CATCHER_URL) faults.push("MAIL_CATCHER_URL: the local mail catcher has no place in a deployment; leave it out");
  if (given.MAIL_FROM.includes("@localhost")) faults.push("MAIL_FROM: name the address that the shop's mail comes from");
  if (given.S3_ACCESS_KEY_ID.startsWith(FAKE_MARK)) faults.push("S3_ACCESS_KEY_ID: these are the keys of the local stand-in; name a real object store");
  if (given.GITHUB_CLIENT_ID?.startsWith(FAKE_MARK)) faults.push("GITHUB_CLIENT_ID: this is the local stand-in; name a real application, or leave it out");
  for (const name of ["GITHUB_AUTHORIZE_URL", "GITHUB_TOKEN_URL", "GITHUB_USER_URL", "GITHUB_EMAILS_URL"] as const) {
    if (given.GITHUB_CLIENT_ID && !given[name].startsWith("https:")) faults.push(`${name}: must begin with https:// in a deployment`);
  }
  const secrets = { SESSION_SECRETS: given.SESSION_SECRETS.join(), S3_SECRET_ACCESS_KEY: given.S3_SECRET_ACCESS_KEY, GITHUB_CLIENT_SECRET: given.GITHUB_CLIENT_SECRET, DATABASE_URL: given.DATABASE_URL };
  for (const [name, secret] of Object.entries(secrets)) {
    if (secret?.includes(PLACEHOLDER_MARK) || secret?.includes(FAKE_MARK)) faults.push(`${name}: still holds the placeholder of an example or of the local stand-in`);
  }
  return faults;
}

/**
 * Reads the settings out of an environment.
 *
 * @throws EnvironmentFault naming every variable that is missing or wrong, and in a
 *   deployment every local stand-in and placeholder
 */
export function parseEnv(source: Record<string, string | undefined>): Env {
  const set: Record<string, string | undefined> = withoutBlanks(source);
  const parsed = schema.safeParse(set);
  const faults: string[] = [];
  if (!parsed.success) {
    for (const { path, message } of parsed.error.issues) {
      const name = path.join(".");
      faults.push(`${name}: ${set[name] === undefined ? "is missing" : message}`);
    }
    throw new EnvironmentFault(faults);
  }
  const given = parsed.data;
  if (Boolean(given.GITHUB_CLIENT_ID) !== Boolean(given.GITHUB_CLIENT_SECRET)) faults.push("GITHUB_CLIENT_ID and GITHUB_CLIENT_SECRET: give both or neither");
  if (given.APP_MODE === "deployment") faults.push(...deploymentFaults(given));
  if (faults.length > 0) throw new EnvironmentFault(faults);
  return Object.freeze({ ...given, S3_PUBLIC_ENDPOINT: given.S3_PUBLIC_ENDPOINT ?? given.S3_ENDPOINT });
}
