import { canonicalJson } from "#app/domain/canonical.ts";
import type { GateRecords } from "#app/domain/gate-records.ts";
import type { GateLine } from "#app/domain/gate/gate-line.ts";
import type { LogbookHead } from "#app/domain/logbook.ts";

/** A file that belongs to a release. */
export interface ManifestFile {
  /** Where it stands in the packet, "models/flange-4.step". */
  path: string;
  /** Its key in the object store. */
  key: string;
  bytes: number;
  sha256: string;
}

/** A signature as the record keeps it; it belongs to the manifest it stands in and to no other. */
export interface ManifestSignature {
  part: "proposes" | "decides" | "proposes and decides";
  name: string;
  /** UTC, ISO 8601. */
  at: string;
  meaning: string;
  /** How the person signed in again just before. */
  by: "password" | "e-mailed code" | "GitHub";
}

/** Everything a release consists of: written once, inside the transaction that decides. */
export interface ReleaseManifest {
  format: "spotblue release manifest";
  formatVersion: 1;
  shop: { id: string; name: string };
  job: { id: string; number: string; title: string };
  part: { id: string; name: string; number: string | null; material: string | null; quantity: number };
  revision: { id: string; ordinal: number; letter: string; reason: string };
  decision: { id: string; decision: "go" | "go with concession"; at: string; samePerson: boolean };
  signatures: ManifestSignature[];
  gate: { ruleVersion: string; recordsHash: string; lines: GateLine[] };
  records: GateRecords;
  files: ManifestFile[];
  /** Where the shop's logbook stood: with it a cut-off end can be told later. */
  logbook: LogbookHead | null;
}

/** The one text of a manifest, to be stored, hashed and packed: canonical JSON, files by path, a line end. */
export function manifestText(manifest: ReleaseManifest): string {
  checkFiles(manifest.files);
  return `${canonicalJson({ ...manifest, files: [...manifest.files].sort(byPath) })}\n`;
}

/**
 * The text of SHA256SUMS for these files, as `sha256sum -c` reads it: a line a file, by path.
 *
 * @throws RangeError when a path would leave the packet, needs escaping, or stands twice, or a hash is none
 */
export function sha256Sums(files: readonly Pick<ManifestFile, "path" | "sha256">[]): string {
  checkFiles(files);
  return [...files].sort(byPath).map(({ path, sha256 }) => `${sha256}  ${path}\n`).join("");
}

function checkFiles(files: readonly Pick<ManifestFile, "path" | "sha256">[]): void {
  const seen = new Set<string>();
  for (const { path, sha256 } of files) {
    const steps = path.split("/");
    // A backslash or a control character would need the escaped form, which not every reader knows.
    if (/[\\\u0000-\u001f\u007f]/.test(path) || steps.some((step) => step === "" || step === "." || step === "..")) {
      throw new RangeError(`${JSON.stringify(path)} is not a usable path in a packet`);
    }
    if (!/^[0-9a-f]{64}$/.test(sha256)) throw new RangeError(`the hash of ${path} is not 64 lower-case hex digits`);
    // Windows and macOS unpack "A" over "a".
    const folded = path.toLowerCase();
    if (seen.has(folded)) throw new RangeError(`two files of the packet are called ${path}`);
    seen.add(folded);
  }
}

function byPath(a: { path: string }, b: { path: string }): number {
  return a.path < b.path ? -1 : 1;
}
