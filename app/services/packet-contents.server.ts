import { canonicalJson } from "#app/domain/canonical.ts";
import type { Decision } from "#app/data/decisions.server.ts";
import { sha256Sums, type ReleaseManifest } from "#app/domain/manifest.ts";
import { sha256Hex } from "#app/domain/canonical.ts";

export interface PacketText {
  path: string;
  text: string;
}

/**
 * The gate snapshot that travels with the packet: what was judged, by which rule, with which
 * answer. Money is the shop's own affair and is left out; the hash is of the whole records,
 * which the shop keeps.
 */
export function gateSnapshot({ decision, recordsHash, ruleVersion, lines, records, at, byName, letter }: Decision): string {
  const { deposit: _deposit, payments: _payments, ...shown } = records;
  return `${canonicalJson({
    format: "spotblue gate snapshot",
    formatVersion: 1,
    decision,
    letter,
    decidedBy: byName,
    decidedAt: at.toISOString(),
    ruleVersion,
    recordsHash,
    recordsHashCovers: "the records below with the deposit and its payments, which the shop keeps to itself",
    lines,
    records: shown,
  })}\n`;
}

/** The manifest as the machine shop gets it: without the records (they stand in the snapshot) and the store's keys. */
export function packetManifest(manifest: ReleaseManifest): string {
  const { records: _records, files, gate, ...rest } = manifest;
  return `${canonicalJson({ ...rest, gate: { ruleVersion: gate.ruleVersion, recordsHash: gate.recordsHash }, files: files.map(({ path, bytes, sha256 }) => ({ path, bytes, sha256 })) })}\n`;
}

/** SHA256SUMS of everything in the packet but itself. */
export function packetSums(stored: ReadonlyArray<{ path: string; sha256: string }>, texts: readonly PacketText[], binary: ReadonlyArray<{ path: string; sha256: string }>): string {
  return sha256Sums([...stored, ...binary, ...texts.map(({ path, text }) => ({ path, sha256: sha256Hex(text) }))]);
}
