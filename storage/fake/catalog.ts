import { createHash, randomUUID } from "node:crypto";
import { readFileSync, readdirSync, rmSync } from "node:fs";
import fs from "node:fs/promises";
import path from "node:path";
import { blobsIn, type Segment } from "./blobs.ts";
import type { Algorithm } from "./checksums.ts";
import { UNFINISHED, makeFolder, removeFile, replaceFile, syncFolder } from "./durable.ts";
import { S3Fault } from "./s3-fault.ts";

export interface CorsRule {
  origins: string[];
  methods: string[];
  headers: string[];
  expose: string[];
  maxAgeSeconds: number | undefined;
}

/** What a client said about an object: kept and given back as it came. */
export type KeptHeaders = Record<string, string>;

export interface StoredObject {
  key: string;
  bytes: number;
  /** Without quotes. */
  etag: string;
  modified: number;
  headers: KeptHeaders;
  checksums: Partial<Record<Algorithm, string>>;
  checksumType: "COMPOSITE" | "FULL_OBJECT";
  segments: Segment[];
}

export interface UploadPart {
  number: number;
  etag: string;
  modified: number;
  segment: Segment;
  checksums: Partial<Record<Algorithm, string>>;
}

export interface Upload {
  id: string;
  bucket: string;
  key: string;
  begun: number;
  headers: KeptHeaders;
  checksum: Algorithm | undefined;
  checksumType: "COMPOSITE" | "FULL_OBJECT";
}

export interface Bucket {
  name: string;
  made: number;
  cors: CorsRule[] | undefined;
  objects: Map<string, StoredObject>;
}

export type Catalog = Awaited<ReturnType<typeof openCatalog>>;

/** S3 orders keys by their bytes in UTF-8; JavaScript by UTF-16, where the surrogates lie differently. */
export function byUtf8(a: string, b: string): number {
  if (a === b) return 0;
  const length = Math.min(a.length, b.length);
  for (let i = 0; i < length; i++) {
    const [x, y] = [a.charCodeAt(i), b.charCodeAt(i)];
    if (x === y) continue;
    const high = (c: number) => (c >= 0xd800 && c <= 0xdfff ? c + 0x10000 : c);
    return high(x) - high(y);
  }
  return a.length - b.length;
}

/** No key becomes part of a path: files are named by its hash. */
const nameOf = (key: string) => `${createHash("sha256").update(key).digest("hex")}.json`;
const readJson = <T>(file: string) => JSON.parse(readFileSync(file, "utf8")) as T;

/** Records in a folder; what a crash left half written is taken away. */
function recordsIn(folder: string): string[] {
  const names = readdirSync(folder);
  for (const name of names) if (name.endsWith(UNFINISHED)) rmSync(path.join(folder, name), { force: true });
  return names.filter((name) => name.endsWith(".json")).map((name) => path.join(folder, name));
}

/**
 * What is stored, in memory for answers and on disk for the next start: a change is on disk
 * before the promise that makes it resolves.
 */
export async function openCatalog(dir: string) {
  const folders = { buckets: path.join(dir, "buckets"), uploads: path.join(dir, "uploads"), blobs: path.join(dir, "blobs") };
  await makeFolder(dir);
  for (const folder of Object.values(folders)) await makeFolder(folder);
  const blobs = blobsIn(folders.blobs);
  const buckets = new Map<string, Bucket>();
  const uploads = new Map<string, { upload: Upload; parts: Map<number, UploadPart> }>();
  const sorted = new WeakMap<Bucket, string[]>();
  const waiting = new Map<string, Promise<unknown>>();

  const folderOf = (bucket: string) => path.join(folders.buckets, bucket);
  const objectFile = (bucket: string, key: string) => path.join(folderOf(bucket), "objects", nameOf(key));
  const uploadFolder = (id: string) => path.join(folders.uploads, id);

  async function load(): Promise<void> {
    for (const name of readdirSync(folders.buckets)) {
      const settings = path.join(folderOf(name), "bucket.json");
      const said = await fs.readFile(settings, "utf8").catch(() => undefined);
      // A crash between folder and settings left a bucket that nobody was told of.
      if (said === undefined) continue;
      const bucket: Bucket = { ...(JSON.parse(said) as Omit<Bucket, "objects">), objects: new Map() };
      for (const file of recordsIn(path.join(folderOf(name), "objects"))) {
        const object = readJson<StoredObject>(file);
        bucket.objects.set(object.key, object);
        blobs.hold(object.segments);
      }
      buckets.set(name, bucket);
    }
    for (const id of readdirSync(folders.uploads)) {
      const begun = await fs.readFile(path.join(uploadFolder(id), "upload.json"), "utf8").catch(() => undefined);
      if (begun === undefined) {
        await fs.rm(uploadFolder(id), { recursive: true, force: true });
        continue;
      }
      const parts = new Map<number, UploadPart>();
      for (const file of recordsIn(uploadFolder(id)).filter((file) => path.basename(file).startsWith("part-"))) {
        const part = readJson<UploadPart>(file);
        parts.set(part.number, part);
        blobs.hold([part.segment]);
      }
      uploads.set(id, { upload: JSON.parse(begun) as Upload, parts });
    }
    await blobs.sweep();
  }
  await load();

  /** One change after the other of what has this name. */
  async function exclusively<T>(name: string, work: () => Promise<T>): Promise<T> {
    const before = waiting.get(name) ?? Promise.resolve();
    const mine = before.then(work, work);
    const settled = mine.catch(() => undefined);
    waiting.set(name, settled);
    try {
      return await mine;
    } finally {
      if (waiting.get(name) === settled) waiting.delete(name);
    }
  }

  function bucketNamed(name: string): Bucket {
    const bucket = buckets.get(name);
    if (!bucket) throw new S3Fault("NoSuchBucket", `There is no bucket ${name}.`);
    return bucket;
  }

  function uploadOf(bucket: string, key: string, id: string) {
    const found = uploads.get(id);
    if (!found || found.upload.bucket !== bucket || found.upload.key !== key) throw new S3Fault("NoSuchUpload", "There is no such upload; it may have been joined or ended.");
    return found;
  }

  async function writeBucket({ objects: _, ...settings }: Bucket): Promise<void> {
    await replaceFile(path.join(folderOf(settings.name), "bucket.json"), JSON.stringify(settings));
  }

  async function dropUpload(id: string): Promise<void> {
    const found = uploads.get(id);
    if (!found) return;
    uploads.delete(id);
    await removeFile(path.join(uploadFolder(id), "upload.json"));
    await fs.rm(uploadFolder(id), { recursive: true, force: true });
    await blobs.release([...found.parts.values()].map(({ segment }) => segment));
  }

  return {
    blobs,
    exclusively,
    bucketNamed,
    uploadOf,
    dropUpload,
    findBucket: (name: string) => buckets.get(name),
    listBuckets: () => [...buckets.values()].sort((a, b) => byUtf8(a.name, b.name)),
    listUploads: (bucket: string) => [...uploads.values()].map(({ upload }) => upload).filter((upload) => upload.bucket === bucket),

    async addBucket(name: string, now: number): Promise<void> {
      const bucket: Bucket = { name, made: now, cors: undefined, objects: new Map() };
      await makeFolder(folderOf(name));
      await makeFolder(path.join(folderOf(name), "objects"));
      await writeBucket(bucket);
      buckets.set(name, bucket);
    },

    async removeBucket(name: string): Promise<void> {
      if (bucketNamed(name).objects.size > 0) throw new S3Fault("BucketNotEmpty", `The bucket ${name} still holds objects.`);
      buckets.delete(name);
      await removeFile(path.join(folderOf(name), "bucket.json"));
      await fs.rm(folderOf(name), { recursive: true, force: true });
    },

    async setCors(name: string, cors: CorsRule[] | undefined): Promise<void> {
      const bucket = bucketNamed(name);
      await writeBucket({ ...bucket, cors });
      bucket.cors = cors;
    },

    keysOf(bucket: Bucket): string[] {
      let keys = sorted.get(bucket);
      if (!keys) {
        keys = [...bucket.objects.keys()].sort(byUtf8);
        sorted.set(bucket, keys);
      }
      return keys;
    },

    /**
     * Puts an object in place of whatever lies at its key; its segments must be held by the caller
     * for the object.
     *
     * @param allow looks at what is there and throws when it must stay
     */
    async putObject(bucketName: string, object: StoredObject, allow: (present: StoredObject | undefined) => void): Promise<void> {
      await exclusively(`${bucketName}/${object.key}`, async () => {
        const bucket = bucketNamed(bucketName);
        const present = bucket.objects.get(object.key);
        allow(present);
        await replaceFile(objectFile(bucketName, object.key), JSON.stringify(object));
        bucket.objects.set(object.key, object);
        if (present) await blobs.release(present.segments);
        else sorted.delete(bucket);
      });
    },

    async removeObject(bucketName: string, key: string): Promise<void> {
      await exclusively(`${bucketName}/${key}`, async () => {
        const bucket = bucketNamed(bucketName);
        const present = bucket.objects.get(key);
        if (!present) return;
        await removeFile(objectFile(bucketName, key));
        bucket.objects.delete(key);
        sorted.delete(bucket);
        await blobs.release(present.segments);
      });
    },

    async addUpload(upload: Omit<Upload, "id">): Promise<string> {
      const id = randomUUID();
      await makeFolder(uploadFolder(id));
      await replaceFile(path.join(uploadFolder(id), "upload.json"), JSON.stringify({ ...upload, id }));
      uploads.set(id, { upload: { ...upload, id }, parts: new Map() });
      return id;
    },

    /** Stores a part in place of one of its number; its segment must be held by the caller for it. */
    async putPart(bucket: string, key: string, id: string, part: UploadPart): Promise<void> {
      await exclusively(`upload ${id}`, async () => {
        const { parts } = uploadOf(bucket, key, id);
        const before = parts.get(part.number);
        await replaceFile(path.join(uploadFolder(id), `part-${part.number}.json`), JSON.stringify(part));
        parts.set(part.number, part);
        if (before) await blobs.release([before.segment]);
      });
    },

    /** Waits until the last change is on disk. */
    settle: async () => {
      await Promise.all(waiting.values());
      await syncFolder(dir);
    },
  };
}
