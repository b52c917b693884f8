import knex, { type Knex } from "knex";
import { env } from "#app/env.server.ts";

let pool: Knex | undefined;

/** The pool of the app's role. Opened at first use, so that a test can name its database first. */
export function db(): Knex {
  pool ??= knex({ client: "pg", connection: { connectionString: env.DATABASE_URL, application_name: "spotblue" }, pool: { min: 0, max: 10 } });
  return pool;
}

export async function closeDb(): Promise<void> {
  const open = pool;
  pool = undefined;
  await open?.destroy();
}
