import {
  AbortMultipartUploadCommand, CompleteMultipartUploadCommand, CreateMultipartUploadCommand, UploadPartCommand,
  ListMultipartUploadsCommand, type ListMultipartUploadsCommandOutput, ListPartsCommand, type ListPartsCommandOutput, type S3Client,
} from "@aws-sdk/client-s3";
import { getSignedUrl } from "@aws-sdk/s3-request-presigner";
import { StoreError } from "./store-error.ts";

export interface StoredPart {
  partNumber: number;
  etag: string;
  bytes: number;
}

export interface UnfinishedUpload {
  key: string;
  uploadId: string;
  begunAt: Date;
}

interface Around {
  client: S3Client;
  publicClient: S3Client;
  Bucket: string;
  call: <T>(doing: string, work: () => Promise<T>) => Promise<T>;
  head: (key: string) => Promise<{ bytes: number; modified: Date } | undefined>;
}

/** Uploads that arrive in parts, sent by the browser or by us. */
export function multipartOf({ client, publicClient, Bucket, call, head }: Around) {
  /** The parts that are stored, by number; undefined when there is no such upload (any more). */
  async function listParts(key: string, uploadId: string): Promise<StoredPart[] | undefined> {
    try {
      return await call(`Listing the parts of ${key}`, async () => {
        const parts: StoredPart[] = [];
        // The SDK's paginator asks on and on: stores name a next part after the last one too.
        let marker: string | undefined;
        do {
          const page: ListPartsCommandOutput = await client.send(new ListPartsCommand({ Bucket, Key: key, UploadId: uploadId, PartNumberMarker: marker }));
          for (const { PartNumber, ETag, Size } of page.Parts ?? []) parts.push({ partNumber: PartNumber!, etag: ETag!, bytes: Size ?? 0 });
          marker = page.IsTruncated ? page.NextPartNumberMarker : undefined;
        } while (marker !== undefined);
        return parts;
      });
    } catch (error) {
      if (isMissing(error)) return undefined;
      throw error;
    }
  }

  return {
    listParts,

    /** @returns the upload's id, by which its parts are sent, joined or thrown away */
    async beginMultipart(key: string, contentType: string): Promise<string> {
      const { UploadId } = await call(`Beginning ${key}`, () => client.send(new CreateMultipartUploadCommand({ Bucket, Key: key, ContentType: contentType })));
      return UploadId!;
    },

    /**
     * An address to which anybody can send this part for so many seconds.
     *
     * @param bytes exact size of the part; when given, the store refuses any other
     */
    async presignPart(key: string, uploadId: string, partNumber: number, { seconds, bytes }: { seconds: number; bytes?: number }): Promise<string> {
      const command = new UploadPartCommand({ Bucket, Key: key, UploadId: uploadId, PartNumber: partNumber, ContentLength: bytes });
      const signableHeaders = bytes === undefined ? undefined : new Set(["content-length"]);
      return call(`Presigning part ${partNumber} of ${key}`, () => getSignedUrl(publicClient, command, { expiresIn: seconds, signableHeaders }));
    },

    /**
     * Joins the parts into the object. May be called again after an answer was lost: an upload
     * that is gone counts as joined when an object of its size lies at the key.
     */
    async completeMultipart(key: string, uploadId: string, parts: readonly StoredPart[], { ifAbsent = false }: { ifAbsent?: boolean | undefined } = {}): Promise<void> {
      const Parts = parts.toSorted((a, b) => a.partNumber - b.partNumber).map(({ partNumber, etag }) => ({ PartNumber: partNumber, ETag: etag }));
      try {
        await call(`Joining ${key}`, () => client.send(new CompleteMultipartUploadCommand({ Bucket, Key: key, UploadId: uploadId, MultipartUpload: { Parts }, IfNoneMatch: ifAbsent ? "*" : undefined })));
      } catch (error) {
        if (!isMissing(error)) throw error;
        const stored = await head(key);
        if (stored?.bytes !== parts.reduce((sum, { bytes }) => sum + bytes, 0)) throw error;
      }
    },

    /** Throws the parts away; there may be no such upload. */
    async abortMultipart(key: string, uploadId: string): Promise<void> {
      try {
        await call(`Ending ${key}`, () => client.send(new AbortMultipartUploadCommand({ Bucket, Key: key, UploadId: uploadId })));
      } catch (error) {
        if (!isMissing(error)) throw error;
      }
    },

    /** Uploads that were begun before then and neither joined nor ended. */
    async listUnfinished(olderThan: Date): Promise<UnfinishedUpload[]> {
      return call("Listing unfinished uploads", async () => {
        const found: UnfinishedUpload[] = [];
        let next: { KeyMarker?: string | undefined; UploadIdMarker?: string | undefined } | undefined = {};
        while (next) {
          const page: ListMultipartUploadsCommandOutput = await client.send(new ListMultipartUploadsCommand({ Bucket, ...next }));
          for (const { Key, UploadId, Initiated } of page.Uploads ?? []) {
            if (Initiated && Initiated < olderThan) found.push({ key: Key!, uploadId: UploadId!, begunAt: Initiated });
          }
          next = page.IsTruncated ? { KeyMarker: page.NextKeyMarker, UploadIdMarker: page.NextUploadIdMarker } : undefined;
        }
        return found;
      });
    },
  };
}

const isMissing = (error: unknown) => error instanceof StoreError && error.reason === "missing";
