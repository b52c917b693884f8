import { createStore, type Store } from "#storage/client.server.ts";
import { env } from "#app/env.server.ts";

let opened: Store | undefined;

/** The object store that the environment names. */
export function store(): Store {
  opened ??= createStore({
    endpoint: env.S3_ENDPOINT,
    publicEndpoint: env.S3_PUBLIC_ENDPOINT,
    region: env.S3_REGION,
    bucket: env.S3_BUCKET,
    accessKeyId: env.S3_ACCESS_KEY_ID,
    secretAccessKey: env.S3_SECRET_ACCESS_KEY,
    // A bucket in the path works with every S3-compatible store at an address of its own.
    forcePathStyle: env.S3_ENDPOINT !== undefined,
    origins: [env.APP_ORIGIN],
  });
  return opened;
}
