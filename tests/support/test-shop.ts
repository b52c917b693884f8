import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import path from "node:path";
import { startFakeStore } from "#storage/fake/server.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { freshDatabase } from "./database.ts";

/**
 * A shop with its four people on a database and an object store of its own. Call it before the
 * app's modules are imported: they read the environment once.
 */
export async function openTestShop() {
  const database = await freshDatabase();
  const folder = await mkdtemp(path.join(tmpdir(), "spotblue-test-"));
  const keys = { accessKeyId: "spotblue-fake-test", secretAccessKey: "spotblue-fake-test-secret" };
  const fake = await startFakeStore({ port: 0, dir: folder, ...keys });
  Object.assign(process.env, { DATABASE_URL: database.appUrl, S3_ENDPOINT: fake.endpoint, S3_PUBLIC_ENDPOINT: fake.endpoint, S3_ACCESS_KEY_ID: keys.accessKeyId, S3_SECRET_ACCESS_KEY: keys.secretAccessKey });
  const { seedPeople } = await import("#db/seeds/people.ts");
  const { store } = await import("#app/services/store.server.ts");
  const { closeDb } = await import("#db/connection.server.ts");
  await store().ensureBucket();
  const people = await seedPeople();

  return {
    people,
    database,
    storeFolder: folder,
    /** A signature asks for a proof of the last five minutes. */
    signing: (viewer: Viewer): Viewer => ({ ...viewer, provedAt: new Date().toISOString(), provedBy: "password" }),
    async close(): Promise<void> {
      await closeDb();
      await fake.stop();
      await database.drop();
      await rm(folder, { recursive: true, force: true });
    },
  };
}

export type TestShop = Awaited<ReturnType<typeof openTestShop>>;

/** A job with one part and its first revision, to upload to. */
export async function openTestRevision({ people: { designer } }: TestShop): Promise<{ jobId: string; partId: string; revisionId: string }> {
  const { inShop } = await import("#app/data/scope.server.ts");
  const { createCustomer } = await import("#app/services/customers.server.ts");
  const { createJob } = await import("#app/services/jobs.server.ts");
  const { createPart, createRevision } = await import("#app/services/parts.server.ts");
  const count = Math.random().toString(36).slice(2, 8);
  return inShop(designer, async (tx) => {
    const customerId = await createCustomer(tx, designer, { name: "Invented customer", email: null, phone: null, note: "" });
    const job = await createJob(tx, designer, { number: `T-${count}`, customerId, title: "Test job", dueOn: null, promise: "" });
    if (!job.ok) throw new Error(job.reason);
    const part = await createPart(tx, designer, job.id, { number: `T-${count}-1`, name: "Test plate", kit: "plate", materialId: null, quantity: 1, speedRpm: null, pressureMPa: null, temperatureC: null, fluid: null, lifting: false });
    if (!part.ok) throw new Error(part.reason);
    const revision = await createRevision(tx, designer, part.id, { parentId: null, branchName: null, reason: "first" });
    if (!revision.ok) throw new Error(revision.reason);
    return { jobId: job.id, partId: part.id, revisionId: revision.id };
  });
}
