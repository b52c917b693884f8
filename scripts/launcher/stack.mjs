import { randomBytes } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import { readJson, writePrivately } from "./locks.mjs";
import { holdPort } from "./ports.mjs";
import { runOrRefuse, untilReady } from "./processes.mjs";
import { createServices } from "./services.mjs";
import { Refusal } from "./steps.mjs";
import { ROOT } from "./house.mjs";

/** The environment check of the app refuses whatever begins so in a deployment. */
const FAKE_MARK = "spotblue-fake";
export const PREFERRED_PORTS = { web: 4600, store: 4610, smtp: 4620, mailPage: 4621, github: 4630 };

const isSet = (value) => value !== undefined && value.trim() !== "";

/** Which stand-ins are needed: the fake of a service that is configured never starts. */
export function neededFakes(given) {
  if (given.APP_MODE === "deployment") return { database: false, store: false, mail: false, github: false };
  return {
    database: !isSet(given.DATABASE_URL),
    store: !isSet(given.S3_ENDPOINT) && !isSet(given.S3_BUCKET),
    mail: !isSet(given.SMTP_URL),
    github: !isSet(given.GITHUB_CLIENT_ID),
  };
}

/** Secrets that a stack makes for itself once and keeps. */
function ownSecrets(file) {
  const kept = readJson(file);
  if (kept?.session) return kept;
  const secrets = Object.fromEntries(["session", "store", "github"].map((name) => [name, randomBytes(32).toString("base64url")]));
  writePrivately(file, JSON.stringify(secrets));
  return secrets;
}

/**
 * The processes around one database: stand-ins, web process, worker.
 *
 * @param {object} options
 * @param {string} options.folder keeps what the stand-ins store, the logs and the stack's secrets
 * @param {Record<string, string | undefined>} options.given settings a person gave
 * @param {{ ownerUrl?: string, appUrl: string }} options.database
 * @param {typeof PREFERRED_PORTS} [options.ports] wanted ports; 0 takes any
 */
export async function createStack({ folder, given, database, ports = PREFERRED_PORTS, report, onChange }) {
  const logs = path.join(folder, "logs");
  fs.mkdirSync(logs, { recursive: true, mode: 0o700 });
  const fakes = neededFakes(given);
  const secrets = ownSecrets(path.join(folder, "secrets.json"));
  const services = createServices({ logs, report, onChange });
  // The seed and the stand-ins are told the address that the web process gets only later.
  const webPort = await holdPort(isSet(given.PORT) ? Number(given.PORT) : ports.web);
  const originAt = (port) => (isSet(given.APP_ORIGIN) ? given.APP_ORIGIN : `http://127.0.0.1:${port}`);
  const settings = {
    APP_MODE: "demo", HOST: "127.0.0.1", S3_REGION: "us-east-1", MAIL_FROM: "Spotblue <spotblue@localhost>", MAX_MODEL_MB: "500", MAX_PHOTO_MB: "30",
    SESSION_SECRETS: secrets.session,
    ...Object.fromEntries(Object.entries(given).filter(([, value]) => isSet(value))),
    // React and Express look at it; a person's "development" would slow the served app down.
    NODE_ENV: "production",
    DATABASE_URL: database.appUrl,
    PORT: String(webPort.port), APP_ORIGIN: originAt(webPort.port),
  };
  delete settings.DATABASE_OWNER_URL; // for migrations and the seed only

  const data = (name) => {
    const place = path.join(folder, name);
    fs.mkdirSync(place, { recursive: true, mode: 0o700 });
    return place;
  };

  async function startStore() {
    const keys = { S3_REGION: settings.S3_REGION, S3_BUCKET: "spotblue", S3_ACCESS_KEY_ID: `${FAKE_MARK}-key`, S3_SECRET_ACCESS_KEY: `${FAKE_MARK}-${secrets.store}` };
    const [port] = await services.serve({
      name: "object store", wanted: [ports.store],
      with: (at) => ({ args: ["storage/fake/serve.ts", "--port", String(at), "--dir", data("store")], env: { ...settings, ...keys } }),
    });
    Object.assign(settings, keys, { S3_ENDPOINT: `http://127.0.0.1:${port}`, S3_PUBLIC_ENDPOINT: `http://127.0.0.1:${port}` });
  }

  async function startMail() {
    const [smtp, page] = await services.serve({
      name: "mail catcher", wanted: [ports.smtp, ports.mailPage],
      with: (smtpPort, webPort) => ({ args: ["scripts/fakes/mail.ts", "--smtp-port", String(smtpPort), "--web-port", String(webPort), "--dir", data("mail")], env: settings }),
    });
    Object.assign(settings, { SMTP_URL: `smtp://127.0.0.1:${smtp}`, MAIL_CATCHER_URL: `http://127.0.0.1:${page}` });
  }

  async function startGithub() {
    const keys = { GITHUB_CLIENT_ID: `${FAKE_MARK}-github`, GITHUB_CLIENT_SECRET: `${FAKE_MARK}-${secrets.github}` };
    const [port] = await services.serve({
      name: "GitHub stand-in", wanted: [ports.github],
      with: (at) => ({ args: ["scripts/fakes/github.ts", "--port", String(at)], env: { ...settings, ...keys } }),
    });
    const at = (place) => `http://127.0.0.1:${port}${place}`;
    Object.assign(settings, keys, { GITHUB_AUTHORIZE_URL: at("/login/oauth/authorize"), GITHUB_TOKEN_URL: at("/login/oauth/access_token"), GITHUB_USER_URL: at("/user"), GITHUB_EMAILS_URL: at("/user/emails") });
  }

  const runAsOwner = (script, doing) => {
    if (!isSet(database.ownerUrl)) throw new Refusal("DATABASE_URL is given without DATABASE_OWNER_URL. Give both: the second names the same database as the role that owns the tables, to migrate it.");
    return runOrRefuse({ command: process.execPath, args: ["--import", "tsx", script], cwd: ROOT, env: { ...settings, DATABASE_OWNER_URL: database.ownerUrl } }, doing);
  };

  return {
    fakes,
    settings,
    vitalEnd: services.vitalEnd,
    running: services.running,
    startFakes: () => Promise.all([fakes.store && startStore(), fakes.mail && startMail(), fakes.github && startGithub()]),
    migrate: () => runAsOwner("db/migrate.ts", "Migrating the database"),
    seed: () => runAsOwner("db/seed.ts", "Seeding the demo shop"),
    /** @returns {Promise<string>} the address people open */
    startWeb: async () => {
      await webPort.release();
      const [port] = await services.serve({
        name: "web process", vital: true, wanted: [webPort.port], isReady: answersOk,
        with: (at) => ({ args: ["app/server.ts"], env: { ...settings, PORT: String(at), APP_ORIGIN: originAt(at) } }),
      });
      Object.assign(settings, { PORT: String(port), APP_ORIGIN: originAt(port) });
      return settings.APP_ORIGIN;
    },
    /** @returns {Promise<string | undefined>} what to say when it is not at work yet */
    startWorker: async () => {
      const log = path.join(logs, "worker.log");
      const before = fs.existsSync(log) ? fs.statSync(log).size : 0;
      const handle = await services.keep({ name: "worker", args: ["app/worker.server.ts"], env: settings });
      const saysReady = () => fs.readFileSync(log).subarray(before).includes('"ready":true');
      // The pages are of use without it, and it is started again: a late worker stops nothing.
      return untilReady(handle, saysReady, { patienceMs: 20_000 }).then(() => undefined, () => "not at work yet");
    },
    stop: async () => {
      await services.stop([["web process", "worker"]]);
      await webPort.release();
    },
  };
}

/** Whether the web process and the database behind it answer. */
async function answersOk(port) {
  try {
    const answer = await fetch(`http://127.0.0.1:${port}/health`, { signal: AbortSignal.timeout(5_000) });
    return answer.ok;
  } catch {
    return false;
  }
}
