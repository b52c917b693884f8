import { randomUUID } from "node:crypto";
import { mkdtemp, rm } from "node:fs/promises";
import os from "node:os";
import path from "node:path";
import { S3Client } from "@aws-sdk/client-s3";
import { createStore, type Store, type StoreSettings } from "#storage/client.server.ts";
import { startFakeStore, type FakeStore } from "#storage/fake/server.ts";

export interface Endpoint {
  settings: StoreSettings & { endpoint: string };
  store: Store;
  /** The SDK as it is when nothing is set, on the same bucket. */
  plain: S3Client;
  /** Begins every key of this run, so that a real bucket can be used again. */
  prefix: string;
  close: () => Promise<void>;
}

/** Origin of a page that may use the store. */
export const ORIGIN = "http://127.0.0.1:4600";

/**
 * The store that STORE_TEST_ENDPOINT, _REGION, _BUCKET, _ACCESS_KEY_ID and _SECRET_ACCESS_KEY
 * name; without an endpoint our own, started for the test. Its bucket is made when it is missing.
 */
export async function openEndpoint(): Promise<Endpoint> {
  const { STORE_TEST_ENDPOINT: given, STORE_TEST_REGION: region = "us-east-1", STORE_TEST_BUCKET: bucket = "spotblue-contract", STORE_TEST_ACCESS_KEY_ID: accessKeyId = "spotblue-test-key", STORE_TEST_SECRET_ACCESS_KEY: secretAccessKey = "spotblue-test-secret" } = process.env;
  const own = given ? undefined : await ownStore({ accessKeyId, secretAccessKey, region });
  const settings = { endpoint: given ?? own!.fake.endpoint, region, bucket, accessKeyId, secretAccessKey, forcePathStyle: true, origins: [ORIGIN] };
  const store = createStore(settings);
  const plain = new S3Client({ endpoint: settings.endpoint, region, forcePathStyle: true, credentials: { accessKeyId, secretAccessKey } });
  await store.ensureBucket();
  const prefix = `contract-${randomUUID()}/`;
  return {
    settings, store, plain, prefix,
    async close() {
      for await (const { key } of store.list(prefix)) await store.remove(key);
      store.close();
      plain.destroy();
      await own?.close();
    },
  };
}

/** Our own store in a folder that goes away with it. */
export async function ownStore(settings: { accessKeyId?: string; secretAccessKey?: string; region?: string; now?: () => number } = {}): Promise<{ fake: FakeStore; dir: string; close: () => Promise<void> }> {
  const dir = await mkdtemp(path.join(os.tmpdir(), "store-"));
  const fake = await startFakeStore({ port: 0, dir, accessKeyId: "spotblue-test-key", secretAccessKey: "spotblue-test-secret", ...settings });
  return {
    fake, dir,
    async close() {
      await fake.stop();
      await rm(dir, { recursive: true, force: true });
    },
  };
}

/** A client of ours for a store in this process. */
export function storeAt(endpoint: string, more: Partial<StoreSettings> = {}): Store {
  return createStore({ endpoint, region: "us-east-1", bucket: "spotblue-test", accessKeyId: "spotblue-test-key", secretAccessKey: "spotblue-test-secret", forcePathStyle: true, ...more });
}
