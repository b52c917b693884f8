import { createHash } from "node:crypto";
import { crc32 } from "node:zlib";
import { createCRC32, createCRC64 } from "hash-wasm";
import { S3Fault } from "./s3-fault.ts";

/** Names as they stand after `x-amz-checksum-`. */
export const ALGORITHMS = ["crc32", "crc32c", "crc64nvme", "sha1", "sha256"] as const;
export type Algorithm = (typeof ALGORITHMS)[number];

/** Of Castagnoli's polynomial and of the NVMe one, bits reversed. */
const CRC32C = 0x82f63b78;
const CRC64NVME = "9a6c9329ac4bc9b5";

export interface Running {
  update(chunk: Uint8Array): void;
  digest(): Buffer;
}

export async function startChecksum(algorithm: Algorithm): Promise<Running> {
  switch (algorithm) {
    case "sha1":
    case "sha256":
      return createHash(algorithm);
    case "crc32": {
      let value = 0;
      return {
        update: (chunk) => { value = crc32(chunk, value); },
        digest: () => {
          const bytes = Buffer.alloc(4);
          bytes.writeUInt32BE(value);
          return bytes;
        },
      };
    }
    case "crc32c":
    case "crc64nvme": {
      const hasher = (algorithm === "crc32c" ? await createCRC32(CRC32C) : await createCRC64(CRC64NVME)).init();
      return { update: (chunk) => void hasher.update(chunk), digest: () => Buffer.from(hasher.digest("hex"), "hex") };
    }
  }
}

export function algorithmNamed(name: string): Algorithm {
  const found = ALGORITHMS.find((algorithm) => algorithm === name.toLowerCase());
  if (!found) throw new S3Fault("InvalidRequest", `The checksum algorithm ${name} is not supported.`);
  return found;
}

/** How the XML documents of S3 call a checksum: ChecksumCRC64NVME, ChecksumSHA256. */
export const elementOf = (algorithm: Algorithm) => `Checksum${algorithm.toUpperCase()}`;
