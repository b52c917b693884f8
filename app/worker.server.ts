import pg from "pg";
import PgBoss from "pg-boss";
import { closeDb } from "#db/connection.server.ts";
import { env } from "./env.server.ts";
import { handlers } from "./jobs/handlers.server.ts";
import type { JobPayload } from "./jobs/queues.ts";
import { store } from "./services/store.server.ts";

// The worker: takes jobs from the queues in PostgreSQL, one at a time in each queue, so that a
// slow model holds up neither mail nor photos. Run as many of these processes as the work needs.
await store().ensureBucket();
const boss = new PgBoss({ connectionString: env.DATABASE_URL, migrate: false, application_name: "spotblue worker" });
boss.on("error", (error) => console.error("queue:", error.message));
await boss.start();

const stopping = new AbortController();
const workers = new Map<string, string>();
for (const [queue, handle] of Object.entries(handlers)) {
  const id = await boss.work<JobPayload>(queue, { batchSize: 1, pollingIntervalSeconds: 2 }, async (jobs) => {
    for (const job of jobs) {
      try {
        await handle(job.data, stopping.signal);
      } catch (fault) {
        console.error(`${queue} ${job.data.id}:`, fault);
        throw fault;
      }
    }
  });
  workers.set(queue, id);
}
await boss.schedule("sweep", "7 * * * *", { shopId: null, id: "hourly" });

// Polling finds every job; the notice only makes it quick.
const listener = new pg.Client({ connectionString: env.DATABASE_URL, application_name: "spotblue worker" });
listener.on("error", (error) => console.error("notices:", error.message));
listener.on("notification", ({ payload }) => {
  const id = payload && workers.get(payload);
  if (id) boss.notifyWorker(id);
});
await listener.connect();
await listener.query("listen spotblue_jobs");
console.log(JSON.stringify({ ready: true, queues: workers.size }));

let stopped = false;
for (const signal of ["SIGTERM", "SIGINT"] as const) {
  process.on(signal, () => {
    if (stopped) return;
    stopped = true;
    void stop();
  });
}

async function stop(): Promise<void> {
  stopping.abort();
  await listener.end();
  await boss.stop({ graceful: true, timeout: 5_000 });
  await closeDb();
  process.exit(0);
}
