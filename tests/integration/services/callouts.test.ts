import { randomUUID } from "node:crypto";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Viewer } from "#app/domain/viewer.ts";
import { openTestShop, type TestShop } from "#tests/support/test-shop.ts";
import { openTriedPrint, sealRevision, storePhoto, type TriedPrint } from "#tests/support/tried-print.ts";

let shop: TestShop;
let designer: Viewer;
let at: TriedPrint;
let photoId: string;
let ringPhotoId: string;

/** Somebody kept to one job, as an account or a guest link makes it. */
const keptTo = (jobId: string, role: "customer" | "machinist", more: Partial<Viewer> = {}): Viewer => ({ ...shop.people[role], personId: null, guestLinkId: randomUUID(), name: `Guest ${role}`, roles: [role], jobs: [jobId], ...more });

beforeAll(async () => {
  shop = await openTestShop();
  designer = shop.people.designer;
  at = await openTriedPrint(shop);
  const { recordFitCheck } = await import("#app/services/fit-checks.server.ts");
  const check = await recordFitCheck(designer, { draftKey: randomUUID(), printId: at.printId, matingPartId: at.ringId, cause: null, remarks: "", triedAt: new Date().toISOString(), results: [{ characteristicId: at.dropsId, readings: [], answers: [true], instrumentId: null, bandPosition: null, bandWidth: null }] });
  if (!check.ok) throw new Error(check.reason);
  photoId = await storePhoto(designer, at.jobId, { to: "fit-check", id: check.fitCheckId, characteristicId: at.dropsId });
  ringPhotoId = await storePhoto(designer, at.jobId, { to: "mating-part", id: at.ringId });
});
afterAll(() => shop?.close());

const services = () => import("#app/services/callouts.server.ts");
const spot = { x: 0.25, y: 0.5 };
const notFound = { status: 404 };

async function share(shared: boolean) {
  const { inShop } = await import("#app/data/scope.server.ts");
  await inShop(designer, (tx) => tx("revisions").where({ id: at.revisionId }).update({ shared_at: shared ? new Date() : null }));
}
async function seenBy(viewer: Viewer) {
  const { inShop } = await import("#app/data/scope.server.ts");
  const { listCallouts } = await import("#app/data/callouts.server.ts");
  return inShop(viewer, (tx) => listCallouts(tx, viewer, { revisionId: at.revisionId }));
}
async function address(viewer: Viewer, fileId: string, kind: "screen" | "thumbnail" | "view-mesh" = "screen") {
  return (await import("#app/services/files.server.ts")).derivedAddress(viewer, fileId, kind);
}

describe("what customers reach", () => {
  test("photos only of revisions that were shown to them, and of their own hardware", async () => {
    const customer = keptTo(at.jobId, "customer");
    const stranger = keptTo(randomUUID(), "customer");
    await share(false);
    expect(await address(customer, photoId)).toBeNull();
    expect(await address(customer, ringPhotoId)).not.toBeNull();
    await share(true);
    expect(await address(customer, photoId)).not.toBeNull();
    expect(await address(customer, photoId, "thumbnail")).not.toBeNull();
    for (const id of [photoId, ringPhotoId]) expect(await address(stranger, id)).toBeNull();
    // The machinist of the job sees the evidence, shown or not.
    await share(false);
    expect(await address(keptTo(at.jobId, "machinist"), photoId)).not.toBeNull();
  });

  test("a picture of another revision's answer is not theirs to see", async () => {
    const answerPhoto = await storePhoto(designer, at.jobId, { to: "answer", id: at.revisionId });
    await share(true);
    expect(await address(keptTo(at.jobId, "customer"), answerPhoto)).toBeNull();
    expect(await address(designer, answerPhoto)).not.toBeNull();
  });

  test("callouts meant for them, on what was shown; internal ones are not in the answer at all", async () => {
    const { putPhotoCallout, replyToCallout } = await services();
    await share(true);
    const inside = await putPhotoCallout(designer, photoId, spot, { body: "the seat is rough", visibility: "internal", assigneeId: null });
    const outside = await putPhotoCallout(designer, photoId, spot, { body: "is the hinge right?", visibility: "customer", assigneeId: designer.personId });
    if (!inside.ok || !outside.ok) throw new Error("refused");
    const customer = keptTo(at.jobId, "customer");
    expect((await seenBy(customer)).map(({ id }) => id)).toEqual([outside.calloutId]);
    expect((await seenBy(designer)).map(({ id }) => id)).toEqual([inside.calloutId, outside.calloutId]);
    const { calloutView } = await import("#app/services/callout-views.server.ts");
    const view = JSON.stringify((await seenBy(customer)).map((callout) => calloutView(customer, callout)));
    expect(view).not.toContain(designer.personId);
    expect(view).toContain('"assignee":null');
    await expect(replyToCallout(customer, inside.calloutId, "?")).rejects.toMatchObject(notFound);
    await replyToCallout(customer, outside.calloutId, "yes");
    await share(false);
    expect(await seenBy(customer)).toEqual([]);
    await expect(replyToCallout(customer, outside.calloutId, "still?")).rejects.toMatchObject(notFound);
    await expect(putPhotoCallout(customer, photoId, spot, { body: "x", visibility: "customer", assigneeId: null })).rejects.toMatchObject(notFound);
    await expect(replyToCallout(keptTo(randomUUID(), "machinist"), outside.calloutId, "?")).rejects.toMatchObject(notFound);
  });

  test("what they put is theirs and for them, whatever their form says; they close only their own", async () => {
    const { closeCallout, putPhotoCallout } = await services();
    await share(true);
    const customer = keptTo(at.jobId, "customer");
    const put = await putPhotoCallout(customer, photoId, spot, { body: "too close to the rim", visibility: "internal", assigneeId: designer.personId });
    if (!put.ok) throw new Error("refused");
    const seen = (await seenBy(customer)).find(({ id }) => id === put.calloutId);
    expect(seen).toMatchObject({ fromCustomer: true, visibility: "customer", assigneeId: null, closedAt: null, x: 0.25, y: 0.5 });
    const ofShop = await putPhotoCallout(designer, photoId, spot, { body: "look here", visibility: "customer", assigneeId: null });
    if (!ofShop.ok) throw new Error("refused");
    expect(await closeCallout(customer, ofShop.calloutId, true)).toEqual({ ok: false, reason: "not-yours" });
    expect(await closeCallout(keptTo(at.jobId, "customer"), put.calloutId, true)).toEqual({ ok: false, reason: "not-yours" });
    expect(await closeCallout(customer, put.calloutId, true)).toEqual({ ok: true });
    expect(await closeCallout(customer, put.calloutId, true)).toEqual({ ok: false, reason: "was-so" });
    expect(await closeCallout(designer, put.calloutId, false)).toEqual({ ok: true });
  });
});

describe("callouts", () => {
  test("an open one of the customer keeps the gate's line open until it is closed", async () => {
    const { closeCallout, putPhotoCallout } = await services();
    const { inShop } = await import("#app/data/scope.server.ts");
    const { evaluateRevision } = await import("#app/services/gate.server.ts");
    const open = async (id: string) => (await inShop(designer, (tx) => evaluateRevision(tx, at.revisionId)))!.result.lines.find(({ line }) => line === "customer")!.missing.some(({ about }) => about.includes(id));
    await share(true);
    const put = await putPhotoCallout(keptTo(at.jobId, "customer"), photoId, spot, { body: "does the key fit?", visibility: "customer", assigneeId: null });
    if (!put.ok) throw new Error("refused");
    expect(await open(put.calloutId)).toBe(true);
    await closeCallout(designer, put.calloutId, true);
    expect(await open(put.calloutId)).toBe(false);
  });

  test("put at the same moment get numbers of their own", async () => {
    const { putModelCallout } = await services();
    const put = await Promise.all([1, 2, 3, 4].map((n) => putModelCallout(designer, at.revisionId, [n, 0, 1.5], { body: `edge ${n}`, visibility: "internal", assigneeId: null })));
    const numbers = put.map((one) => (one.ok ? one.number : 0)).sort((a, b) => a - b);
    expect(new Set(numbers).size).toBe(4);
    expect((await seenBy(designer)).find(({ number }) => number === numbers[0])!.pointMm?.slice(1)).toEqual([0, 1.5]);
  });

  test("are given only to people of the shop, and not put on hardware that shows no revision", async () => {
    const { assignCallout, putPhotoCallout } = await services();
    const put = await putPhotoCallout(designer, photoId, spot, { body: "who looks?", visibility: "internal", assigneeId: null });
    if (!put.ok) throw new Error("refused");
    expect(await assignCallout(designer, put.calloutId, shop.people.machinist.personId)).toEqual({ ok: true });
    expect(await assignCallout(designer, put.calloutId, shop.people.customer.personId)).toEqual({ ok: false, reason: "no-such-person" });
    expect(await assignCallout(designer, put.calloutId, randomUUID())).toEqual({ ok: false, reason: "no-such-person" });
    expect(await putPhotoCallout(designer, ringPhotoId, spot, { body: "rust", visibility: "internal", assigneeId: null })).toEqual({ ok: false, reason: "no-revision" });
  });

  test("go on after a release", async () => {
    const { closeCallout, putPhotoCallout, replyToCallout } = await services();
    await sealRevision(shop, at.revisionId);
    const put = await putPhotoCallout(designer, photoId, spot, { body: "mind this edge", visibility: "customer", assigneeId: null });
    if (!put.ok) throw new Error("refused");
    await replyToCallout(designer, put.calloutId, "done");
    expect(await closeCallout(designer, put.calloutId, true)).toEqual({ ok: true });
  });
});
