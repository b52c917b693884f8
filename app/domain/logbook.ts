import { sha256 } from "@noble/hashes/sha2";
import { bytesToHex, concatBytes, hexToBytes, utf8ToBytes } from "@noble/hashes/utils";
import { canonicalJson, type Json } from "#app/domain/canonical.ts";

/** One thing that happened in a shop. */
export interface LogbookEntry {
  shopId: string;
  /** 1, 2, 3 … without a gap, in each shop. */
  seq: number;
  /** UTC, ISO 8601 with milliseconds. */
  at: string;
  actorId: string | null;
  actor: string;
  action: string;
  subjectType: string;
  subjectId: string | null;
  jobId: string | null;
  detail: { readonly [key: string]: Json };
}

export interface ChainedEntry {
  entry: LogbookEntry;
  previousHash: string;
  hash: string;
}

export interface LogbookHead {
  seq: number;
  hash: string;
}

/** Stands before the first entry of every chain. */
export const FIRST_PREVIOUS_HASH = "0".repeat(64);

// RFC 6962, section 2.1: a leaf is hashed with a 0x00 before it, so that no leaf can pass for an inner node.
const LEAF_PREFIX = Uint8Array.of(0x00);

/**
 * The hash that chains an entry to the one before: SHA-256 over the byte 0x00, the 32 bytes of the
 * previous hash, and the UTF-8 bytes of the entry's canonical JSON.
 *
 * @param previousHash 64 lower-case hex digits; FIRST_PREVIOUS_HASH for the first entry
 * @returns 64 lower-case hex digits
 * @throws RangeError when the previous hash is none, TypeError when the detail is not plain JSON data
 */
export function entryHash(previousHash: string, entry: LogbookEntry): string {
  if (!/^[0-9a-f]{64}$/.test(previousHash)) throw new RangeError("the previous hash must be 64 lower-case hex digits");
  return bytesToHex(sha256(concatBytes(LEAF_PREFIX, hexToBytes(previousHash), utf8ToBytes(canonicalJson(entry)))));
}

export type ChainVerdict =
  | { ok: true; head: LogbookHead }
  /** `index` into the entries given; equal to their count when the end is missing. */
  | { ok: false; index: number; seq: number; why: string };

/**
 * Is every entry the one that was written, in its place, with none left out? Names the first bad one.
 *
 * A chain alone can't show that its end was cut off or that all of it was written anew; a head that
 * was kept elsewhere (in a release manifest) can.
 *
 * @param entries of one shop, by ascending seq
 * @param from what stands before the first entry given; the start of the chain when left out
 * @param kept a head known from elsewhere: the entry with that seq must be there with that hash
 */
export function verifyChain(entries: readonly ChainedEntry[], { from, kept }: { from?: LogbookHead; kept?: LogbookHead } = {}): ChainVerdict {
  let head: LogbookHead = from ?? { seq: 0, hash: FIRST_PREVIOUS_HASH };
  for (const [index, { entry, previousHash, hash }] of entries.entries()) {
    const bad = (why: string): ChainVerdict => ({ ok: false, index, seq: head.seq + 1, why });
    if (entry.seq !== head.seq + 1) return bad(`entry ${head.seq + 1} should stand here, but entry ${entry.seq} does`);
    if (entry.shopId !== entries[0]!.entry.shopId) return bad(`entry ${entry.seq} belongs to another shop`);
    if (previousHash !== head.hash) return bad(`entry ${entry.seq} does not follow the entry before it`);
    if (hash !== hashOrReason(previousHash, entry)) return bad(`entry ${entry.seq} is not what was written`);
    head = { seq: entry.seq, hash };
    if (kept !== undefined && kept.seq === head.seq && kept.hash !== head.hash) return bad(`entry ${entry.seq} is not the one that was known elsewhere`);
  }
  if (kept !== undefined && kept.seq > head.seq) {
    return { ok: false, index: entries.length, seq: head.seq + 1, why: `the logbook ends at entry ${head.seq}, but entry ${kept.seq} was known elsewhere` };
  }
  return { ok: true, head };
}

// A row that was damaged beyond plain data is a bad entry, not a crash of the check.
function hashOrReason(previousHash: string, entry: LogbookEntry): string {
  try {
    return entryHash(previousHash, entry);
  } catch (error) {
    if (error instanceof TypeError || error instanceof RangeError) return error.message;
    throw error;
  }
}
