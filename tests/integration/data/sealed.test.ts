import { execFileSync } from "node:child_process";
import { mkdtempSync, readdirSync, readFileSync, statSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { buffer } from "node:stream/consumers";
import knex, { type Knex } from "knex";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Viewer } from "#app/domain/viewer.ts";
import { openClearedRevision, seenOf } from "#tests/support/released.ts";
import { openTestShop, type TestShop } from "#tests/support/test-shop.ts";

let shop: TestShop;
let owner: Viewer;
let app: Knex;
let sealed: string[];
let at: Awaited<ReturnType<typeof openClearedRevision>>;
let decisionId: string;

beforeAll(async () => {
  shop = await openTestShop();
  owner = shop.signing(shop.people.owner);
  at = await openClearedRevision(shop);
  const { proposeRevision, releaseRevision } = await import("#app/services/release.server.ts");
  await proposeRevision(shop.signing(shop.people.designer), at.revisionId);
  const released = await releaseRevision(owner, at.revisionId, await seenOf(owner, at.revisionId));
  if (!released.ok) throw new Error(JSON.stringify(released));
  decisionId = released.decisionId;
  app = knex({ client: "pg", connection: shop.database.appUrl });
  const { rows } = await app.raw("select distinct c.relname from pg_trigger t join pg_class c on c.oid = t.tgrelid where t.tgname like '%\\_sealed' order by 1");
  sealed = rows.map((row: { relname: string }) => row.relname);
});
afterAll(async () => {
  await app?.destroy();
  await shop?.close();
});

function scoped<T>(work: (tx: Knex.Transaction) => Promise<T>): Promise<T> {
  return app.transaction(async (tx) => {
    await tx.raw("select set_config('app.shop_id', ?, true), set_config('app.job_ids', '*', true)", [owner.shopId]);
    return work(tx);
  });
}

/** How a row of this table is found that belongs to the released revision. */
function rowsOf(tx: Knex.Transaction, table: string): Knex.QueryBuilder {
  if (table === "revisions") return tx(table).where({ id: at.revisionId });
  if (table === "files") return tx(table).where({ id: at.stepId });
  if (table === "measures") return tx(table).where({ file_id: at.stepId });
  return tx(table).where({ revision_id: at.revisionId });
}

const refusal = /sealed|permission denied/;

describe("what a release rests on", () => {
  test("every table that the gate reads of a revision is on the list", () => {
    expect(sealed).toEqual(expect.arrayContaining(["revisions", "revision_files", "files", "measures", "prints", "print_proves", "fit_checks", "fit_results", "fit_photos", "carry_overs", "calculations", "instructions", "instruction_holes", "machinist_replies", "machinist_answers", "customer_answers", "caution_reads", "proposals", "concessions", "decisions"]));
  });

  test("refuses UPDATE and DELETE of its rows as the app's role", async () => {
    for (const table of sealed) {
      const count = await scoped(async (tx) => Number((await rowsOf(tx, table).count("* as n"))[0].n));
      if (count === 0) continue;
      await expect(scoped((tx) => rowsOf(tx, table).update({ shop_id: owner.shopId })), `UPDATE ${table}`).rejects.toThrow(refusal);
      await expect(scoped((tx) => rowsOf(tx, table).delete()), `DELETE ${table}`).rejects.toThrow(refusal);
    }
  });

  test("refuses INSERT of more", async () => {
    const place = { shop_id: owner.shopId, job_id: at.jobId, revision_id: at.revisionId };
    const more: Record<string, Record<string, unknown>> = {
      prints: { ...place, ordinal: 99, preset_name: "x", whole: true, model_sha256: "0".repeat(64), by_name: "x" },
      fit_checks: { ...place, print_id: at.printId, mating_part_id: at.printId, draft_key: "x", by_name: "x" },
      calculations: { ...place, kind: "fit", title: "x", inputs: "{}", result: "{}", verdict: "pass", by_name: "x" },
      customer_answers: { ...place, answer: "approved", model_sha256: "0".repeat(64), by_name: "x" },
      caution_reads: { ...place, caution: "x", basis: "x", by_name: "x" },
      concessions: { ...place, lines: ["fit"], reason: "x", limit_pieces: 1, by_person_id: owner.personId, by_name: "x" },
      revision_files: { ...place, file_id: at.photoId, role: "photo" },
    };
    for (const [table, row] of Object.entries(more)) await expect(scoped((tx) => tx(table).insert(row)), `INSERT ${table}`).rejects.toThrow(/sealed/);
  });

  test("refuses TRUNCATE, as does the logbook", async () => {
    for (const table of [...sealed, "logbook", "file_seals"]) await expect(scoped((tx) => tx.raw(`truncate ${table} cascade`)), table).rejects.toThrow(refusal);
  });

  test("the services say it in words instead", async () => {
    expect(await at.tryAgain(true)).toMatchObject({ ok: false, status: 409 });
    const { attachCalculation } = await import("#app/services/calculations.server.ts");
    expect(await attachCalculation(shop.people.designer, at.revisionId, { kind: "fit", title: "late", inputs: { nominal_mm: 25, holeClass: "H7", shaftClass: "g6" }, replaces: null })).toEqual({ ok: false, reason: "sealed" });
  });

  test("what comes after has tables of its own, to which is only added", async () => {
    const { correctPacket } = await import("#app/services/packets.server.ts");
    await correctPacket(owner, decisionId, "The edge break is 0.3 mm, not 0.2 mm");
    await expect(scoped((tx) => tx("corrections").update({ text: "other" }))).rejects.toThrow(/permission denied/);
    await expect(scoped((tx) => tx("corrections").delete())).rejects.toThrow(/permission denied/);
    await expect(scoped((tx) => tx("logbook").update({ actor: "nobody" }))).rejects.toThrow(/permission denied/);
    await expect(scoped((tx) => tx("logbook").delete())).rejects.toThrow(/permission denied/);
  });

  test("the logbook's chain holds, and an entry changed behind the app's back is named", async () => {
    const { checkLogbook } = await import("#app/data/logbook.server.ts");
    const check = () => scoped((tx) => checkLogbook(tx as never, owner.shopId));
    expect(await check()).toMatchObject({ ok: true });
    const ownerDb = knex({ client: "pg", connection: shop.database.ownerUrl });
    try {
      await ownerDb("logbook").where({ seq: 3 }).update({ actor: "somebody else" });
      expect(await check()).toMatchObject({ ok: false, seq: 3 });
    } finally {
      await ownerDb.destroy();
    }
  });
});

describe("the packet", () => {
  /** The file of the fake's folder that holds exactly these bytes. */
  function storedFile(bytes: Buffer): string {
    const walk = (folder: string): string[] => readdirSync(folder).flatMap((name) => (statSync(path.join(folder, name)).isDirectory() ? walk(path.join(folder, name)) : [path.join(folder, name)]));
    const found = walk(shop.storeFolder).find((file) => statSync(file).size === bytes.length && readFileSync(file).equals(bytes));
    if (!found) throw new Error("the stored file is not in the store's folder");
    return found;
  }

  test("one flipped byte in the store is found, and nothing is packed until it is put right", async () => {
    const { makePacket } = await import("#app/jobs/make-packet.server.ts");
    const { store } = await import("#app/services/store.server.ts");
    const { key } = await scoped((tx) => tx("files").where({ id: at.stepId }).first("key"));
    const bytes = await buffer(await store().get(key));
    const file = storedFile(bytes);
    const flipped = Buffer.from(bytes);
    flipped[1000]! ^= 1;
    writeFileSync(file, flipped);
    const job = { shopId: owner.shopId, id: decisionId };
    await expect(makePacket(job)).rejects.toThrow(/not the sealed file|differs|corrupt/i);
    expect(await scoped((tx) => tx("packets").first("state", "attempts"))).toEqual({ state: "being made", attempts: 1 });
    writeFileSync(file, bytes);
    await makePacket(job);
    expect(await scoped((tx) => tx("packets").first("state"))).toEqual({ state: "ready" });
  });

  test("is the same to the byte when it is built again, and sha256sum accepts every file of it", async () => {
    const { makePacket } = await import("#app/jobs/make-packet.server.ts");
    const { store } = await import("#app/services/store.server.ts");
    const first = await scoped((tx) => tx("packets").first("sha256", "bytes"));
    await scoped((tx) => tx("packets").update({ state: "being made", sha256: null, bytes: null }));
    await makePacket({ shopId: owner.shopId, id: decisionId });
    const second = await scoped((tx) => tx("packets").first("sha256", "bytes", "key"));
    expect({ sha256: second.sha256, bytes: second.bytes }).toEqual(first);

    const folder = mkdtempSync(path.join(tmpdir(), "spotblue-packet-"));
    writeFileSync(path.join(folder, "packet.zip"), await buffer(await store().get(second.key)));
    execFileSync("unzip", ["-q", "packet.zip"], { cwd: folder });
    const said = execFileSync("sha256sum", ["-c", "SHA256SUMS"], { cwd: folder, encoding: "utf8" }).trim().split("\n");
    expect(said.length).toBeGreaterThanOrEqual(5);
    expect(said.every((line) => line.endsWith(": OK"))).toBe(true);
    const pdf = execFileSync("pdftotext", ["-layout", "sheet/release-sheet.pdf", "-"], { cwd: folder, encoding: "utf8" });
    for (const words of ["Test plate A", "Odile Keld", "Ines Barrow", "A: foot", "Cautions"]) expect(pdf).toContain(words);
    // Money stays in the shop.
    for (const text of [pdf, readFileSync(path.join(folder, "gate.json"), "utf8"), readFileSync(path.join(folder, "manifest.json"), "utf8")]) expect(text).not.toMatch(/123456|1,?234\.56/);
  });
});
