import pg from "pg";
import { newDatabaseName } from "#scripts/launcher/throw-away.mjs";

export interface FreshDatabase {
  /** As the role the app connects with: row-level security holds. */
  appUrl: string;
  /** As the role that owns the tables. */
  ownerUrl: string;
  /** Takes the database away, ending whoever is still connected. */
  drop(): Promise<void>;
}

interface Template {
  adminUrl: string;
  template: string;
  ownerUrl: string;
  appUrl: string;
}

/** A migrated, empty database for one test file, cloned from the template of this run. */
export async function freshDatabase(): Promise<FreshDatabase> {
  const { adminUrl, template, ownerUrl, appUrl } = await askForTemplate();
  const name = newDatabaseName("test");
  const clone = (url: string) => Object.assign(new URL(url), { pathname: `/${name}` }).href;
  await asAdmin(adminUrl, `create database ${name} template ${template} owner spotblue_owner`);
  return {
    appUrl: clone(appUrl),
    ownerUrl: clone(ownerUrl),
    drop: () => asAdmin(adminUrl, `drop database if exists ${name} with (force)`),
  };
}

async function askForTemplate(): Promise<Template> {
  const door = process.env.TEST_DATABASE_DOOR;
  if (!door) throw new Error("no test database here: run this file in vitest's project `integration`");
  const answer = await fetch(door);
  if (!answer.ok) throw new Error(`no test database: ${await answer.text()}`);
  return (await answer.json()) as Template;
}

async function asAdmin(adminUrl: string, statement: string): Promise<void> {
  const client = new pg.Client({ connectionString: adminUrl });
  await client.connect();
  await client.query(statement).finally(() => client.end());
}
