import { randomUUID } from "node:crypto";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Viewer } from "#app/domain/viewer.ts";
import { openTestShop, type TestShop } from "#tests/support/test-shop.ts";
import { openTriedPrint, sealRevision, storeStep, type TriedPrint } from "#tests/support/tried-print.ts";

let shop: TestShop;
let designer: Viewer;
let at: TriedPrint;
/** A branch off the first, set aside; and one that comes from it. */
let branchId: string;
let nextId: string;

const keptTo = (jobId: string, role: "customer" | "machinist"): Viewer => ({ ...shop.people[role], personId: null, guestLinkId: randomUUID(), name: `Guest ${role}`, roles: [role], jobs: [jobId] });
const notFound = { status: 404 };

beforeAll(async () => {
  shop = await openTestShop();
  designer = shop.people.designer;
  at = await openTriedPrint(shop);
  const { createRevision } = await parts();
  const { inShop } = await scope();
  const add = async (parentId: string, reason: string, branchName: string | null) => {
    const made = await inShop(designer, (tx) => createRevision(tx, designer, at.partId, { parentId, branchName, reason }));
    if (!made.ok) throw new Error(made.reason);
    return made.id;
  };
  branchId = await add(at.revisionId, "Hinge turned", "hinge");
  nextId = await add(branchId, "Hinge turned back", null);
  await storeStep(designer, at.jobId, nextId, "cube-mm.step");
  await (await import("#db/seeds/demo-files.ts")).measureDemoFile(designer, at.stepId, true);
});
afterAll(() => shop?.close());

const scope = () => import("#app/data/scope.server.ts");
const parts = () => import("#app/services/parts.server.ts");

async function sheetFor(viewer: Viewer, revisionId: string) {
  const { loadSheet } = await import("#app/services/sheet.server.ts");
  return (await scope()).inShop(viewer, (tx) => loadSheet(tx, viewer, revisionId));
}

async function share(ids: string[]) {
  await (await scope()).inShop(designer, async (tx) => {
    await tx("revisions").where({ part_id: at.partId }).update({ shared_at: null });
    await tx("revisions").whereIn("id", ids).update({ shared_at: new Date() });
  });
}

describe("for whom it is", () => {
  test("the designer sees the whole tree, the gate and the files", async () => {
    const sheet = await sheetFor(designer, at.revisionId);
    expect(sheet.tree.nodes.map(({ label, status }) => [label, status])).toEqual([["1", "printed"], ["2", "no model"], ["3", "modelled"]]);
    expect(sheet.tree.edges).toEqual([{ from: { id: at.revisionId }, to: { id: branchId } }, { from: { id: branchId }, to: { id: nextId } }]);
    expect(sheet.gate?.verdict).toBe("no-go");
    // One action a line.
    for (const line of sheet.gate!.lines) expect(line.missing.length).toBeLessThanOrEqual(1);
    expect(sheet.files.map(({ role }) => role)).toEqual(["step"]);
    expect(sheet.nextOrdinal).toBe(4);
  });

  test("the machinist sees model and files, and no gate", async () => {
    const sheet = await sheetFor(keptTo(at.jobId, "machinist"), at.revisionId);
    expect(sheet.gate).toBeNull();
    expect(sheet.files).toHaveLength(1);
    expect(sheet.may).toMatchObject({ write: false, upload: false, print: false, instruct: true, makeability: true });
  });

  test("a customer is shown nothing before it is shared, and then neither gate nor files nor who made it", async () => {
    const customer = keptTo(at.jobId, "customer");
    await share([]);
    await expect(sheetFor(customer, at.revisionId)).rejects.toMatchObject(notFound);
    await share([at.revisionId]);
    const sheet = await sheetFor(customer, at.revisionId);
    expect(sheet).toMatchObject({ gate: null, files: [], calculations: [], warnings: [], instructions: null });
    expect(sheet.revision).toMatchObject({ authorName: null, prints: null });
    expect(sheet.tree.nodes).toHaveLength(1);
    // Nothing of a file but the id its mesh is asked by.
    expect(JSON.stringify(sheet)).not.toMatch(/cube_hole|\.step|sha256/);
  });

  test("a customer's tree leaves out what was not shown, and hangs the rest on what was", async () => {
    await share([at.revisionId, nextId]);
    const sheet = await sheetFor(keptTo(at.jobId, "customer"), nextId);
    expect(sheet.tree.nodes.map(({ label }) => label)).toEqual(["1", "3"]);
    expect(sheet.tree.edges).toEqual([{ from: { id: at.revisionId }, to: { id: nextId } }]);
    expect(JSON.stringify(sheet)).not.toContain("Hinge turned\"");
    await share([at.revisionId]);
    await expect(sheetFor(keptTo(at.jobId, "customer"), nextId)).rejects.toMatchObject(notFound);
  });

  test("whoever is kept to another job finds nothing", async () => {
    await share([at.revisionId]);
    for (const role of ["customer", "machinist"] as const) await expect(sheetFor(keptTo(randomUUID(), role), at.revisionId)).rejects.toMatchObject(notFound);
  });
});

describe("what it measures", () => {
  test("the mass follows from the volume and the stock, and the holes stand alike together", async () => {
    const { inShop } = await scope();
    expect((await sheetFor(designer, at.revisionId)).facts?.massKg).toBeNull();
    await inShop(designer, async (tx) => {
      const [stock] = await tx("materials").insert({ shop_id: designer.shopId, code: `T-${randomUUID()}`, name: "Stock of 2700", density_kg_m3: 2700 }).returning("id");
      await tx("parts").where({ id: at.partId }).update({ material_id: stock.id });
    });
    const { facts, holes, model } = await sheetFor(designer, at.revisionId);
    // tests/support/models/README.md: a block with one bore of Ø 12.7 through it.
    expect(model).toMatchObject({ kind: "step", closed: true, state: "done" });
    expect(facts!.massKg).toBeCloseTo(facts!.volumeMm3! * 2.7e-6, 12);
    expect(holes).toHaveLength(1);
    expect(holes[0]).toMatchObject({ places: "1", count: 1, depthMm: null, entry: "plain", instruction: null });
    expect(holes[0]!.diameterMm).toBeCloseTo(12.7, 6);
  });
});

describe("what can be done with a revision", () => {
  test("set aside it says so with its reason, and taken up again it counts", async () => {
    const { putRevisionAside } = await parts();
    const { inShop } = await scope();
    await inShop(designer, (tx) => putRevisionAside(tx, designer, branchId, "The rider can't reach it"));
    const aside = await sheetFor(designer, branchId);
    expect(aside.revision).toMatchObject({ status: "set aside", setAsideReason: "The rider can't reach it" });
    expect(aside.tree.nodes[1]).toMatchObject({ status: "set aside", setAside: true });
    await share([branchId]);
    expect((await sheetFor(keptTo(at.jobId, "customer"), branchId)).revision).toMatchObject({ setAside: true, setAsideReason: null });
    await inShop(designer, (tx) => putRevisionAside(tx, designer, branchId, null));
    expect((await sheetFor(designer, branchId)).revision).toMatchObject({ status: null, setAside: false });
  });

  test("a branch takes a name and loses it", async () => {
    const { nameRevisionBranch } = await parts();
    const { inShop } = await scope();
    for (const name of ["towards the rider", null]) {
      expect(await inShop(designer, (tx) => nameRevisionBranch(tx, designer, branchId, name))).toEqual({ ok: true });
      expect((await sheetFor(designer, branchId)).revision.branchName).toBe(name);
    }
  });

  test("files are taken off, units stated, and unreadable models measured again, until it is released", async () => {
    const { removeRevisionFile, remeasure, stateMeshUnit } = await import("#app/services/revision-files.server.ts");
    const fileId = await storeStep(designer, at.jobId, branchId, "cube-mm.step");
    const { inShop } = await scope();
    const measure = () => inShop(designer, (tx) => tx("measures").where({ file_id: fileId }).first("state"));
    expect(await stateMeshUnit(designer, branchId, fileId, "in")).toEqual({ ok: false, reason: "not-a-mesh" });
    expect(await remeasure(designer, branchId, fileId)).toEqual({ ok: true });
    expect(await measure()).toEqual({ state: "waiting" });
    expect(await removeRevisionFile(designer, nextId, fileId)).toEqual({ ok: false, reason: "not-here" });
    expect(await removeRevisionFile(designer, branchId, fileId)).toEqual({ ok: true });
    expect((await sheetFor(designer, branchId)).model).toBeNull();
    // The bytes and their row are kept.
    expect(await inShop(designer, (tx) => tx("files").where({ id: fileId }).first("state"))).toEqual({ state: "stored" });

    const sealedFile = await storeStep(designer, at.jobId, nextId, "cube-mm.step");
    await sealRevision(shop, nextId);
    expect(await removeRevisionFile(designer, nextId, sealedFile)).toEqual({ ok: false, reason: "sealed" });
    const { nameRevisionBranch, putRevisionAside } = await parts();
    expect(await inShop(designer, (tx) => nameRevisionBranch(tx, designer, nextId, "late"))).toEqual({ ok: false, reason: "sealed" });
    expect(await inShop(designer, (tx) => putRevisionAside(tx, designer, nextId, "late"))).toEqual({ ok: false, reason: "sealed" });
  });
});
