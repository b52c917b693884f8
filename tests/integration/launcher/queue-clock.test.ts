import PgBoss from "pg-boss";
import { afterAll, beforeAll, expect, test } from "vitest";
import { freshDatabase, type FreshDatabase } from "#tests/support/database.ts";

let database: FreshDatabase;
beforeAll(async () => { database = await freshDatabase(); });
afterAll(() => database.drop());

test("the app's role can run schedules: a minute's tick becomes a job", async () => {
  const boss = new PgBoss({ connectionString: database.appUrl, migrate: false, cronMonitorIntervalSeconds: 1, cronWorkerIntervalSeconds: 1 });
  const faults: unknown[] = [];
  boss.on("error", (fault) => faults.push(fault));
  await boss.start();
  try {
    await boss.schedule("sweep", "* * * * *", { shopId: null, id: "tick" });
    await expect.poll(() => boss.getQueueSize("sweep"), { timeout: 30_000, interval: 500 }).toBeGreaterThan(0);
    expect(faults).toEqual([]);
  } finally {
    await boss.stop({ graceful: false });
  }
});
