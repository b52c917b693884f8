import { createHash } from "node:crypto";
import { readdirSync, readFileSync } from "node:fs";
import { buffer } from "node:stream/consumers";
import sharp from "sharp";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { openTestRevision, openTestShop, type TestShop } from "#tests/support/test-shop.ts";

const bad = new URL("../../support/models/bad/", import.meta.url);
const good = new URL("../../support/models/", import.meta.url);
let shop: TestShop;
let at: { jobId: string; partId: string; revisionId: string };

beforeAll(async () => {
  shop = await openTestShop();
  at = await openTestRevision(shop);
});
afterAll(() => shop?.close());

interface Sent {
  name: string;
  bytes: Uint8Array;
  sha256?: string;
}

/** Announces and sends a file as a browser does, then has the worker's jobs look at it. */
async function upload({ name, bytes, sha256 }: Sent) {
  const { beginUpload, finishUpload, presignParts } = await import("#app/services/uploads.server.ts");
  const { checkFile } = await import("#app/jobs/check-file.server.ts");
  const { measureModel } = await import("#app/jobs/measure-model.server.ts");
  const { derivePhoto } = await import("#app/jobs/derive-photo.server.ts");
  const { designer } = shop.people;
  const begun = await beginUpload(designer, { name, bytes: bytes.length, sha256: sha256 ?? createHash("sha256").update(bytes).digest("hex"), kind: "stl", mediaType: "model/stl", unit: "mm", target: { to: "revision", id: at.revisionId } });
  if (!begun.ok) return { state: "refused", refusal: begun.reason, measure: null, fileId: null };
  const parts = (await presignParts(designer, begun.ticket.fileId, [1]))!;
  const put = await fetch(parts[0]!.url, { method: "PUT", body: new Blob([new Uint8Array(bytes)]) });
  expect(put.status).toBe(200);
  expect(await finishUpload(designer, begun.ticket.fileId)).toEqual({ ok: true });
  const job = { shopId: designer.shopId, id: begun.ticket.fileId };
  await checkFile(job);
  const file = await read(begun.ticket.fileId);
  if (file.state === "stored" && (file.kind === "stl" || file.kind === "step")) await measureModel(job, new AbortController().signal);
  if (file.state === "stored" && file.kind === "photo") await derivePhoto(job);
  return { ...(await read(begun.ticket.fileId)), fileId: begun.ticket.fileId };
}

async function read(id: string) {
  const { inShop } = await import("#app/data/scope.server.ts");
  return inShop(shop.people.designer, async (tx) => {
    const file = (await tx("files").where({ id }).first()) as { state: string; refusal: string | null; kind: string; key: string };
    const measure = (await tx("measures").where({ file_id: id }).first()) as { state: string; reason: string | null; document: { warnings: string[] } | null } | undefined;
    return { state: file.state, refusal: file.refusal, kind: file.kind, key: file.key, measure: measure ?? null };
  });
}

const fileOf = (folder: URL, name: string): Sent => ({ name, bytes: readFileSync(new URL(encodeURIComponent(name), folder)) });

describe("bad files", () => {
  // What must become of each is in the table of tests/support/models/README.md; here: an answer
  // with a reason for every one, and nothing thrown into the queue.
  test.each(readdirSync(bad).sort())("%s gets an answer, and the queue goes on", async (name) => {
    const found = await upload(fileOf(bad, name));
    if (found.state === "refused") expect(found.refusal).toMatch(/\w.{10,}/);
    else {
      expect(found.state).toBe("stored");
      expect(["done", "failed"]).toContain(found.measure?.state);
      if (found.measure?.state === "failed") expect(found.measure.reason).toMatch(/\w.{10,}/);
    }
  });

  test("after all of them a good file is measured, and what was there before is there still", async () => {
    const found = await upload(fileOf(new URL("step/", good), "cube_hole.step"));
    expect(found).toMatchObject({ state: "stored", kind: "step", measure: { state: "done" } });
    const again = await upload(fileOf(new URL("stl/", good), "plate_holes.STL"));
    expect(again).toMatchObject({ state: "stored", kind: "stl", measure: { state: "done" } });
  });
});

describe("what arrives is what was announced", () => {
  test("another hash than the stored bytes have is refused, and the bytes are taken away", async () => {
    const found = await upload({ name: "cube.stl", bytes: fileOf(new URL("stl/", good), "unit_cube.STL").bytes, sha256: "0".repeat(64) });
    expect(found.state).toBe("refused");
    const { store } = await import("#app/services/store.server.ts");
    expect("key" in found && (await store().head(found.key))).toBeUndefined();
  });

  test("a page that calls itself an STL is refused by its content", async () => {
    expect(await upload({ name: "part.stl", bytes: Buffer.from("<!doctype html><title>no</title>".repeat(20)) })).toMatchObject({ state: "refused" });
  });

  test("the same file chosen again goes on where it stopped", async () => {
    const { beginUpload, presignParts } = await import("#app/services/uploads.server.ts");
    const { designer } = shop.people;
    const bytes = 40 * 1024 * 1024;
    const announcement = { name: "big.stl", bytes, sha256: "a".repeat(64), kind: "stl", mediaType: "model/stl", unit: "mm", target: { to: "revision", id: at.revisionId } } as const;
    const first = await beginUpload(designer, announcement);
    if (!first.ok) throw new Error(first.reason);
    expect(first.ticket.parts).toBe(3);
    const [part] = (await presignParts(designer, first.ticket.fileId, [2]))!;
    expect((await fetch(part!.url, { method: "PUT", body: new Uint8Array(first.ticket.partBytes) })).status).toBe(200);
    const second = await beginUpload(designer, announcement);
    expect(second).toMatchObject({ ok: true, ticket: { fileId: first.ticket.fileId, done: [2] } });
  });

  test("a part of another size than announced is refused by the store", async () => {
    const { beginUpload, presignParts } = await import("#app/services/uploads.server.ts");
    const begun = await beginUpload(shop.people.designer, { name: "x.stl", bytes: 1000, sha256: "b".repeat(64), kind: "stl", mediaType: "model/stl", unit: "mm", target: { to: "revision", id: at.revisionId } });
    if (!begun.ok) throw new Error(begun.reason);
    const [part] = (await presignParts(shop.people.designer, begun.ticket.fileId, [1]))!;
    expect((await fetch(part!.url, { method: "PUT", body: new Uint8Array(2000) })).status).toBe(403);
  });

  test("uploads nobody finished are swept after a day", async () => {
    const { inShop } = await import("#app/data/scope.server.ts");
    const { sweep } = await import("#app/jobs/sweep.server.ts");
    await inShop(shop.people.designer, (tx) => tx("files").where({ state: "uploading" }).update({ created_at: tx.raw("now() - interval '25 hours'") }));
    await sweep();
    expect(await inShop(shop.people.designer, (tx) => tx("files").where({ state: "uploading" }).count("* as n"))).toEqual([{ n: "0" }]);
  });
});

describe("photos", () => {
  test("are turned by their EXIF and lose it, place and all; HEIC is refused in words", async () => {
    const original = await sharp({ create: { width: 60, height: 40, channels: 3, background: "#446688" } })
      .withExif({ IFD0: { Make: "Invented", Orientation: "6" }, IFD3: { GPSLatitudeRef: "N", GPSLatitude: "51/1 30/1 0/1" } })
      .withMetadata({ orientation: 6 })
      .jpeg()
      .toBuffer();
    const found = await upload({ name: "bench.jpg", bytes: original });
    expect(found).toMatchObject({ state: "stored", kind: "photo" });
    const { inShop } = await import("#app/data/scope.server.ts");
    const { findDerivedFile } = await import("#app/data/files.server.ts");
    const { store } = await import("#app/services/store.server.ts");
    for (const kind of ["screen", "thumbnail"] as const) {
      const derived = (await inShop(shop.people.designer, (tx) => findDerivedFile(tx, found.fileId!, kind)))!;
      const bytes = await buffer(await store().get(derived.key));
      const metadata = await sharp(bytes).metadata();
      expect([metadata.format, metadata.width, metadata.height]).toEqual(["webp", 40, 60]);
      expect(metadata.exif).toBeUndefined();
      expect(bytes.includes("Invented") || bytes.includes("GPS")).toBe(false);
    }
    const heic = Buffer.concat([Buffer.from([0, 0, 0, 24]), Buffer.from("ftypheic"), Buffer.alloc(200)]);
    expect(await upload({ name: "IMG_1.HEIC", bytes: heic })).toMatchObject({ state: "refused", refusal: expect.stringContaining("HEIC") });
  });
});
