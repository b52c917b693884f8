import { execFileSync } from "node:child_process";
import { createHash } from "node:crypto";
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import { expect, test } from "vitest";
import { exampleGateRecords } from "#app/domain/gate-example.ts";
import { evaluateGate } from "#app/domain/gate.ts";
import { manifestText, sha256Sums, type ReleaseManifest } from "#app/domain/manifest.ts";

const file = (path: string, text = path) => ({ path, key: `files/${path}`, bytes: Buffer.byteLength(text), sha256: createHash("sha256").update(text).digest("hex") });

function manifest(files: ReleaseManifest["files"]): ReleaseManifest {
  const { ruleVersion, recordsHash, lines } = evaluateGate(exampleGateRecords, new Date("2026-05-04T12:00:00Z"));
  return {
    format: "spotblue release manifest",
    formatVersion: 1,
    shop: { id: "shop-1", name: "Keld Motor Works" },
    job: { id: "job-1", number: "26-014", title: "Fuel filler" },
    part: { id: "part-1", name: "Fuel filler flange", number: null, material: "6061-T6", quantity: 1 },
    revision: { id: "revision-4", ordinal: 4, letter: "A", reason: "bore grown" },
    decision: { id: "decision-1", decision: "go", at: "2026-05-04T12:00:00Z", samePerson: true },
    signatures: [{ part: "proposes and decides", name: "Rin Aldous", at: "2026-05-04T12:00:00Z", meaning: "released to billet", by: "password" }],
    gate: { ruleVersion, recordsHash, lines },
    records: exampleGateRecords,
    files,
    logbook: null,
  };
}

test("sha256sum -c accepts the sums of real files, and refuses them when one byte differs", () => {
  const folder = mkdtempSync(join(tmpdir(), "spotblue-sums-"));
  try {
    const files = ["models/flange 4.step", "photos/ø-1.webp", "release sheet.pdf"].map((path) => file(path));
    for (const { path } of files) {
      mkdirSync(dirname(join(folder, path)), { recursive: true });
      writeFileSync(join(folder, path), path);
    }
    writeFileSync(join(folder, "SHA256SUMS"), sha256Sums(files));
    const check = () => execFileSync("sha256sum", ["-c", "--strict", "SHA256SUMS"], { cwd: folder, encoding: "utf8", stdio: ["ignore", "pipe", "ignore"], env: { ...process.env, LC_ALL: "C.UTF-8" } });
    expect(check().match(/: OK$/gm)).toHaveLength(3);
    writeFileSync(join(folder, "release sheet.pdf"), "release sheet.pdg");
    expect(check).toThrow();
  } finally {
    rmSync(folder, { recursive: true });
  }
});

test("the text is the same in any order of files and keys, ends with a line end, and reads back", () => {
  const files = [file("b.stl"), file("a.step")];
  const text = manifestText(manifest(files));
  const backwards = Object.fromEntries(Object.entries(manifest([...files].reverse())).reverse()) as unknown as ReleaseManifest;
  expect(manifestText(backwards)).toBe(text);
  expect(text.endsWith("}\n")).toBe(true);
  expect((JSON.parse(text) as ReleaseManifest).files.map(({ path }) => path)).toEqual(["a.step", "b.stl"]);
});

test.each(["", "/etc/passwd", "../a", "a/../b", "a//b", "./a", "a\nb", "a\\b", "a/"])("the path %j is refused", (path) => {
  expect(() => sha256Sums([file("a"), { path, sha256: "0".repeat(64) }])).toThrow(RangeError);
  expect(() => manifestText(manifest([{ ...file("x"), path }]))).toThrow(RangeError);
});

test("two files of one name, or a hash that is none, are refused", () => {
  expect(() => sha256Sums([file("Sheet.pdf"), file("sheet.pdf")])).toThrow("two files of the packet are called sheet.pdf");
  expect(() => sha256Sums([{ path: "a", sha256: "AB".repeat(32) }])).toThrow(RangeError);
});
