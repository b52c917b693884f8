// For knex's own command line (`node --import tsx node_modules/.bin/knex migrate:make verb_noun`);
// `npm run db:migrate` does not need it.
import type { Knex } from "knex";

const config: Knex.Config = {
  client: "pg",
  connection: process.env.DATABASE_OWNER_URL,
  migrations: { directory: "db/migrations", extension: "ts", loadExtensions: [".ts"] },
};

export default config;
