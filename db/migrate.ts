import { fileURLToPath } from "node:url";
import knex from "knex";
import PgBoss from "pg-boss";
import { queues } from "#app/jobs/queues.ts";

/**
 * Brings a database to the present shape, as the role that owns the tables.
 *
 * The job queue keeps its own tables; they are made here too, so that the role the app
 * connects with needs no right to create anything.
 */
export async function migrate(ownerUrl: string): Promise<void> {
  const db = knex({
    client: "pg",
    connection: ownerUrl,
    migrations: { directory: fileURLToPath(new URL("./migrations", import.meta.url)), loadExtensions: [".ts"] },
  });
  try {
    await db.migrate.latest();
    const boss = new PgBoss({ connectionString: ownerUrl, supervise: false, schedule: false });
    boss.on("error", (error) => { throw error; });
    await boss.start();
    for (const [name, options] of Object.entries(queues)) {
      await boss.createQueue(name, { name, ...options });
      await boss.updateQueue(name, { name, ...options });
    }
    // The clock's own queue, which the worker's role has no right to make: without it pg-boss
    // says nothing and no schedule ever runs.
    await boss.createQueue("__pgboss__send-it");
    await boss.stop({ graceful: false });
    await db.raw(`
      grant usage on schema pgboss to spotblue_app;
      grant select, insert, update, delete on all tables in schema pgboss to spotblue_app;
      grant execute on all functions in schema pgboss to spotblue_app;
      create table if not exists rate_limits (key varchar(255) primary key, points integer not null default 0, expire bigint);
      grant select, insert, update, delete on rate_limits to spotblue_app;
    `);
  } finally {
    await db.destroy();
  }
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const ownerUrl = process.env.DATABASE_OWNER_URL;
  if (!ownerUrl) {
    console.error("DATABASE_OWNER_URL is missing: it names the database, as the role that owns the tables");
    process.exit(2);
  }
  await migrate(ownerUrl);
}
