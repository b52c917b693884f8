import { randomUUID } from "node:crypto";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Viewer } from "#app/domain/viewer.ts";
import { openTestShop, type TestShop } from "#tests/support/test-shop.ts";
import { openTriedPrint, sealRevision, storePhoto, storeStep, type TriedPrint } from "#tests/support/tried-print.ts";

let shop: TestShop;
let designer: Viewer;

beforeAll(async () => {
  shop = await openTestShop();
  designer = shop.people.designer;
});
afterAll(() => shop?.close());

const services = () => import("#app/services/carry-overs.server.ts");

/** A first revision whose bore and question were tried with success, and a second on it with the model named. */
async function openSuccessor(model: string) {
  const first = await openTriedPrint(shop);
  const { recordFitCheck } = await import("#app/services/fit-checks.server.ts");
  const reading = { text: "62.17", unit: "mm" as const };
  const check = await recordFitCheck(designer, {
    draftKey: randomUUID(), printId: first.printId, matingPartId: first.ringId, cause: null, remarks: "", triedAt: new Date().toISOString(),
    results: [
      { characteristicId: first.boreId, readings: [reading, reading, reading], answers: [], instrumentId: first.instrumentId, bandPosition: null, bandWidth: null },
      { characteristicId: first.dropsId, readings: [], answers: [true], instrumentId: null, bandPosition: null, bandWidth: null },
    ],
  });
  if (!check.ok) throw new Error(check.reason);
  await storePhoto(designer, first.jobId, { to: "fit-check", id: check.fitCheckId, characteristicId: null });
  const revisionId = await addSuccessor(first, first.revisionId, model);
  return { first, revisionId, fitCheckId: check.fitCheckId };
}

async function addSuccessor(first: TriedPrint, parentId: string, model: string): Promise<string> {
  const { inShop } = await import("#app/data/scope.server.ts");
  const { createRevision } = await import("#app/services/parts.server.ts");
  const made = await inShop(designer, (tx) => createRevision(tx, designer, first.partId, { parentId, branchName: null, reason: "edges broken" }));
  if (!made.ok) throw new Error(made.reason);
  await storeStep(designer, first.jobId, made.id, model);
  return made.id;
}

async function fitLine(revisionId: string) {
  const { inShop } = await import("#app/data/scope.server.ts");
  const { evaluateRevision } = await import("#app/services/gate.server.ts");
  const { result } = (await inShop(designer, (tx) => evaluateRevision(tx, revisionId)))!;
  return result.lines.find(({ line }) => line === "fit")!;
}

describe("evidence carried over", () => {
  test("stands where the model file is the same, for all characteristics by one press, and the gate counts it", async () => {
    const { revisionId } = await openSuccessor("cube_hole.step");
    expect((await fitLine(revisionId)).state).toBe("open");
    expect(await (await services()).carrySameModel(designer, revisionId)).toEqual({ ok: true, carried: 2 });
    expect((await fitLine(revisionId)).state).toBe("met");
    expect(await (await services()).carrySameModel(designer, revisionId)).toEqual({ ok: false, reason: "no-evidence" });
  });

  test("does not stand by itself for another model, but by a declaration with its reason; withdrawn, it is gone", async () => {
    const { first, revisionId } = await openSuccessor("cube-mm.step");
    const { carrySameModel, declareUnchanged, withdrawCarryOver } = await services();
    expect(await carrySameModel(designer, revisionId)).toEqual({ ok: false, reason: "no-evidence" });
    expect(await declareUnchanged(designer, revisionId, first.boreId, "only the outer edge was broken")).toEqual({ ok: true, carried: 1 });
    expect(await declareUnchanged(designer, revisionId, first.boreId, "again")).toEqual({ ok: false, reason: "there-already" });
    expect((await fitLine(revisionId)).missing.map(({ about }) => about)).toEqual([[first.dropsId]]);
    expect(await declareUnchanged(designer, revisionId, first.dropsId, "the stud holes were not touched")).toEqual({ ok: true, carried: 1 });
    expect((await fitLine(revisionId)).state).toBe("met");
    const { inShop } = await import("#app/data/scope.server.ts");
    const { listCarryOvers } = await import("#app/data/carry-overs.server.ts");
    const [carried] = (await inShop(designer, (tx) => listCarryOvers(tx, revisionId))).filter(({ characteristicId }) => characteristicId === first.boreId);
    expect(carried).toMatchObject({ basis: "declared-unchanged", reason: "only the outer edge was broken", fromOrdinal: 1, byName: designer.name });
    expect(await withdrawCarryOver(designer, revisionId, carried!.id)).toMatchObject({ ok: true });
    expect((await fitLine(revisionId)).missing.map(({ about }) => about)).toEqual([[first.boreId]]);
  });

  test("reaches back over generations, and not to prints that spoiled", async () => {
    const { first, revisionId } = await openSuccessor("cube_hole.step");
    const third = await addSuccessor(first, revisionId, "cube_hole.step");
    const { carrySameModel, declareUnchanged } = await services();
    expect(await carrySameModel(designer, third)).toEqual({ ok: true, carried: 2 });
    const { spoilPrint } = await import("#app/services/prints.server.ts");
    await spoilPrint(designer, first.printId, "warped");
    expect(await declareUnchanged(designer, revisionId, first.boreId, "unchanged")).toEqual({ ok: false, reason: "no-evidence" });
    // What was carried before rests on a print that no longer counts.
    expect((await fitLine(third)).state).not.toBe("met");
  });

  test("never changes what was sealed", async () => {
    const { first, revisionId } = await openSuccessor("cube_hole.step");
    await sealRevision(shop, revisionId);
    const { carrySameModel, declareUnchanged, withdrawCarryOver } = await services();
    for (const refused of [carrySameModel(designer, revisionId), declareUnchanged(designer, revisionId, first.boreId, "x"), withdrawCarryOver(designer, revisionId, randomUUID())]) {
      expect(await refused).toEqual({ ok: false, reason: "sealed" });
    }
  });
});
