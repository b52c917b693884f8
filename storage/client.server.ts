import { createHash } from "node:crypto";
import type { Readable } from "node:stream";
import { buffer } from "node:stream/consumers";
import {
  CreateBucketCommand, DeleteObjectCommand, GetObjectCommand, HeadBucketCommand, HeadObjectCommand, PutBucketCorsCommand,
  PutObjectCommand, S3Client, paginateListObjectsV2,
} from "@aws-sdk/client-s3";
import { getSignedUrl } from "@aws-sdk/s3-request-presigner";
import { contentDisposition } from "./content-disposition.ts";
import { multipartOf } from "./multipart.server.ts";
import { putStream, refuseOther, type PutOptions } from "./put-stream.server.ts";
import { StoreError, storeErrorOf } from "./store-error.ts";

export { StoreError, type StoreFault } from "./store-error.ts";
export type { StoredPart, UnfinishedUpload } from "./multipart.server.ts";
export type { PutOptions } from "./put-stream.server.ts";

export interface StoreSettings {
  /** Address as the servers reach it; without one the SDK finds it by the region. */
  endpoint?: string | undefined;
  /** The same store as browsers reach it; without one as `endpoint`. */
  publicEndpoint?: string | undefined;
  region: string;
  bucket: string;
  accessKeyId: string;
  secretAccessKey: string;
  forcePathStyle: boolean;
  /** Origins whose pages may send files to the store and read them. */
  origins?: string[];
}

export interface StoredObject {
  key: string;
  bytes: number;
  modified: Date;
}

export type Store = ReturnType<typeof createStore>;

const CONNECT_MS = 5_000;
/** No byte for so long means that the other side is gone. */
const SILENCE_MS = 60_000;
const BROWSERS_KEEP_CORS_S = 600;

/**
 * The files of one bucket in an S3-compatible store.
 *
 * Every method throws `StoreError` for what the store or the way to it did wrong.
 */
export function createStore(settings: StoreSettings) {
  const { bucket: Bucket } = settings;
  const client = clientAt(settings, settings.endpoint);
  // Presigning signs the host too: browsers need the address they will use.
  const publicClient = clientAt(settings, settings.publicEndpoint ?? settings.endpoint);

  async function call<T>(doing: string, work: () => Promise<T>): Promise<T> {
    try {
      return await work();
    } catch (error) {
      throw storeErrorOf(error, doing);
    }
  }

  /** Node makes the stream fail when it ends before the announced length. */
  async function open(key: string, range?: string): Promise<Readable> {
    return (await client.send(new GetObjectCommand({ Bucket, Key: key, Range: range }))).Body as Readable;
  }

  async function putBytes(key: string, body: Uint8Array, { contentType, ifAbsent }: PutOptions, digest: Buffer): Promise<void> {
    const command = new PutObjectCommand({
      Bucket, Key: key, Body: body, ContentLength: body.byteLength, ContentType: contentType,
      ChecksumSHA256: digest.toString("base64"), IfNoneMatch: ifAbsent ? "*" : undefined,
    });
    try {
      await client.send(command);
    } catch (error) {
      // Sent again after a lost answer, our own object is the one in the way.
      const { name, $metadata } = error as { name?: string; $metadata?: { attempts?: number } };
      const ours = name === "PreconditionFailed" && ($metadata?.attempts ?? 1) > 1 && (await hashStored(key)).sha256 === digest.toString("hex");
      if (!ours) throw error;
    }
  }

  const multipart = multipartOf({ client, publicClient, Bucket, call, head });

  /** What is stored at the key without its bytes; undefined when nothing is. */
  async function head(key: string): Promise<(StoredObject & { etag: string; contentType: string }) | undefined> {
    try {
      const found = await call(`Looking at ${key}`, () => client.send(new HeadObjectCommand({ Bucket, Key: key })));
      return { key, bytes: found.ContentLength ?? 0, modified: found.LastModified ?? new Date(0), etag: found.ETag ?? "", contentType: found.ContentType ?? "" };
    } catch (error) {
      if (error instanceof StoreError && error.reason === "missing") return undefined;
      throw error;
    }
  }

  /** SHA-256 (hex) and number of the bytes as they lie in the store, read through once. */
  async function hashStored(key: string): Promise<{ sha256: string; bytes: number }> {
    return call(`Hashing ${key}`, async () => {
      const hash = createHash("sha256");
      let bytes = 0;
      for await (const chunk of (await open(key)) as AsyncIterable<Buffer>) {
        hash.update(chunk);
        bytes += chunk.byteLength;
      }
      return { sha256: hash.digest("hex"), bytes };
    });
  }

  return {
    ...multipart,
    head,
    hashStored,

    /**
     * Makes the bucket unless it is there, and lets pages of `origins` send to it and read from it.
     *
     * @returns whether the store took the rules for browsers; many hosted stores want them set by hand
     */
    async ensureBucket(): Promise<{ browsersMay: boolean }> {
      await call(`Making the bucket ${Bucket}`, async () => {
        const there = await client.send(new HeadBucketCommand({ Bucket })).then(() => true, (error: { name?: string }) => {
          if (error.name === "NotFound" || error.name === "NoSuchBucket") return false;
          throw error;
        });
        if (there) return;
        // us-east-1 is the one region that must not be named.
        const place = settings.region === "us-east-1" ? undefined : { LocationConstraint: settings.region as never };
        await client.send(new CreateBucketCommand({ Bucket, CreateBucketConfiguration: place })).catch((error: { name?: string }) => {
          if (error.name !== "BucketAlreadyOwnedByYou") throw error;
        });
      });
      if (!settings.origins?.length) return { browsersMay: false };
      const CORSRules = [
        { AllowedOrigins: settings.origins, AllowedMethods: ["GET", "HEAD", "PUT"], AllowedHeaders: ["*"], ExposeHeaders: ["ETag", "Content-Length", "Content-Range"], MaxAgeSeconds: BROWSERS_KEEP_CORS_S },
      ];
      try {
        await call("Allowing browsers", () => client.send(new PutBucketCorsCommand({ Bucket, CORSConfiguration: { CORSRules } })));
        return { browsersMay: true };
      } catch (error) {
        if (error instanceof StoreError && (error.reason === "refused" || error.reason === "invalid" || /NotImplemented/.test(error.message))) return { browsersMay: false };
        throw error;
      }
    },

    /**
     * Stores the bytes at the key. A stream is sent in parts and never held whole.
     *
     * @returns SHA-256 (hex) and number of the bytes that were sent
     */
    async put(key: string, body: Uint8Array | Readable, options: PutOptions): Promise<{ sha256: string; bytes: number }> {
      return call(`Storing ${key}`, async () => {
        if (!(body instanceof Uint8Array)) return putStream({ client, Bucket, key, body, options, putBytes, multipart });
        const digest = createHash("sha256").update(body).digest();
        const sent = { sha256: digest.toString("hex"), bytes: body.byteLength };
        refuseOther(key, sent, options);
        await putBytes(key, body, options, digest);
        return sent;
      });
    },

    /** The bytes as a stream, which fails when the store ends it early. */
    async get(key: string): Promise<Readable> {
      return call(`Reading ${key}`, () => open(key));
    },

    /** Bytes `from` to `to`, both counted from 0 and included; fewer at the end of the object, none when `to` lies before `from`. */
    async getRange(key: string, from: number, to: number): Promise<Buffer> {
      if (!(from >= 0)) throw new RangeError("a range begins at 0 or later");
      if (to < from) return Buffer.alloc(0);
      return call(`Reading ${key}`, async () => buffer(await open(key, `bytes=${from}-${to}`)));
    },

    /** Takes the object away; there may be none. */
    async remove(key: string): Promise<void> {
      await call(`Removing ${key}`, () => client.send(new DeleteObjectCommand({ Bucket, Key: key })));
    },

    /** Every object whose key begins so, in the order of the keys. */
    async *list(prefix: string): AsyncGenerator<StoredObject> {
      try {
        for await (const page of paginateListObjectsV2({ client }, { Bucket, Prefix: prefix })) {
          for (const { Key, Size, LastModified } of page.Contents ?? []) yield { key: Key!, bytes: Size ?? 0, modified: LastModified ?? new Date(0) };
        }
      } catch (error) {
        throw storeErrorOf(error, `Listing ${prefix}`);
      }
    },

    /** An address from which anybody can fetch the object for so many seconds, under a name and kind that we choose. */
    async presignGet(key: string, { seconds, filename, contentType, inline }: { seconds: number; filename: string; contentType: string; inline: boolean }): Promise<string> {
      const command = new GetObjectCommand({
        Bucket, Key: key, ResponseContentType: contentType, ResponseContentDisposition: contentDisposition({ filename, contentType, inline }),
      });
      return call(`Presigning ${key}`, () => getSignedUrl(publicClient, command, { expiresIn: seconds }));
    },

    /** Lets go of the connections. */
    close(): void {
      client.destroy();
      publicClient.destroy();
    },
  };
}

function clientAt(settings: StoreSettings, endpoint: string | undefined): S3Client {
  return new S3Client({
    endpoint, region: settings.region, forcePathStyle: settings.forcePathStyle,
    credentials: { accessKeyId: settings.accessKeyId, secretAccessKey: settings.secretAccessKey },
    // By default the SDK puts the CRC32 of an empty body into presigned addresses, and sends
    // streams in a framing that not every store undoes. We give SHA-256 or MD5 ourselves.
    requestChecksumCalculation: "WHEN_REQUIRED",
    responseChecksumValidation: "WHEN_REQUIRED",
    requestHandler: { connectionTimeout: CONNECT_MS, socketTimeout: SILENCE_MS },
  });
}
