import { randomUUID } from "node:crypto";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { FitSubmission } from "#app/domain/fit-draft.ts";
import type { Viewer } from "#app/domain/viewer.ts";
import { openTestShop, type TestShop } from "#tests/support/test-shop.ts";
import { openTriedPrint, sealRevision, type TriedPrint } from "#tests/support/tried-print.ts";

let shop: TestShop;
let designer: Viewer;
let at: TriedPrint;

beforeAll(async () => {
  shop = await openTestShop();
  designer = shop.people.designer;
  at = await openTriedPrint(shop);
});
afterAll(() => shop?.close());

const record = async (submission: FitSubmission, viewer = designer) => (await import("#app/services/fit-checks.server.ts")).recordFitCheck(viewer, submission);
const inches = (text: string) => ({ text, unit: "in" as const });
const mm = (text: string) => ({ text, unit: "mm" as const });
type Result = FitSubmission["results"][number];
const bore = (readings: Result["readings"], more: Partial<Result> = {}): Result => ({ characteristicId: at.boreId, readings, answers: [], instrumentId: at.instrumentId, bandPosition: null, bandWidth: null, ...more });
const submission = (results: Result[], more: Partial<FitSubmission> = {}): FitSubmission => ({ draftKey: randomUUID(), printId: at.printId, matingPartId: at.ringId, results, cause: null, remarks: "", triedAt: new Date().toISOString(), ...more });

async function stored(fitCheckId: string) {
  const { inShop } = await import("#app/data/scope.server.ts");
  const { findFitCheck, listFitResults } = await import("#app/data/fit-checks.server.ts");
  return inShop(designer, async (tx) => ({ check: (await findFitCheck(tx, fitCheckId))!, results: await listFitResults(tx, [fitCheckId]) }));
}
async function count(): Promise<number> {
  const { inShop } = await import("#app/data/scope.server.ts");
  return inShop(designer, async (tx) => Number((await tx("fit_checks").count("* as n"))[0]!.n));
}
function must<T extends { ok: boolean }>(result: T): Extract<T, { ok: true }> {
  expect(result).toMatchObject({ ok: true });
  return result as Extract<T, { ok: true }>;
}

describe("a fit check from the bench", () => {
  test("readings are kept as read, in mm, with the instrument's U; the verdict is not stored", async () => {
    // 1 inch is 25.4 mm exactly (international yard and pound agreement, 1959): 2.45 in = 62.23 mm.
    const { fitCheckId } = must(await record(submission([bore([mm("62.17"), mm("62,16"), inches("2.45")], { bandPosition: mm("1.5"), bandWidth: inches("1/8") })])));
    const { results } = await stored(fitCheckId);
    expect(results).toHaveLength(1);
    expect(results[0]).toMatchObject({ readingsMm: [62.17, 62.16, expect.closeTo(62.23, 9)], uncertaintyMm: 0.01, bandPositionMm: 1.5, bandWidthMm: 3.175, instrument: "Bore gauge", trust: "unverified" });
    const { viewFitChecks } = await import("#app/services/fit-views.server.ts");
    const { inShop } = await import("#app/data/scope.server.ts");
    const { check } = await stored(fitCheckId);
    const [view] = await inShop(designer, (tx) => viewFitChecks(tx, at.partId, [check]));
    expect(view).toMatchObject({ mark: "failed", sentence: "It does not fit" });
    // Wider print limits turn the same readings: nothing was stored that could contradict them.
    await inShop(designer, (tx) => tx("characteristics").where({ id: at.boreId }).update({ print_upper_mm: 62.3 }));
    const [again] = await inShop(designer, (tx) => viewFitChecks(tx, at.partId, [check]));
    expect(again).toMatchObject({ mark: "met", sentence: "It fits" });
    await inShop(designer, (tx) => tx("characteristics").where({ id: at.boreId }).update({ print_upper_mm: 62.2 }));
  });

  test("the same draft sent twice, one after the other or both at once, is stored once and answered the same", async () => {
    const before = await count();
    const draft = submission([bore([mm("62.17")])]);
    const first = must(await record(draft));
    expect(await record(draft)).toEqual({ ok: true, fitCheckId: first.fitCheckId, already: true });
    const other = submission([bore([mm("62.18")])]);
    const both = await Promise.all([record(other), record(other), record(other)]);
    expect(new Set(both.map((one) => must(one).fitCheckId)).size).toBe(1);
    expect(both.map((one) => must(one).already).sort()).toEqual([false, true, true]);
    expect(await count()).toBe(before + 2);
  });

  test("the day it was tried is the phone's, unless its clock is plainly wrong", async () => {
    const yesterday = new Date(Date.now() - 24 * 3600 * 1000);
    const { check } = await stored(must(await record(submission([bore([mm("62.17")])], { triedAt: yesterday.toISOString() }))).fitCheckId);
    expect(check.at.getTime()).toBe(yesterday.getTime());
    for (const wrong of ["2031-01-01T00:00:00.000Z", "2001-01-01T00:00:00.000Z"]) {
      const late = await stored(must(await record(submission([bore([mm("62.17")])], { triedAt: wrong }))).fitCheckId);
      expect(Math.abs(late.check.at.getTime() - Date.now())).toBeLessThan(60_000);
    }
  });

  test("a cause is kept where something failed, and only there; it can be named and changed later", async () => {
    const { nameFitCause } = await import("#app/services/fit-checks.server.ts");
    const fits = must(await record(submission([bore([mm("62.17")])], { cause: "design" })));
    expect((await stored(fits.fitCheckId)).check.cause).toBeNull();
    expect(await nameFitCause(designer, fits.fitCheckId, "print", "")).toEqual({ ok: false, reason: "nothing-failed" });
    const fails = must(await record(submission([bore([mm("62.09")])], { cause: "print", remarks: "binds" })));
    expect((await stored(fails.fitCheckId)).check).toMatchObject({ cause: "print", remarks: "binds" });
    expect(await nameFitCause(designer, fails.fitCheckId, "misread", "ring was measured cold")).toEqual({ ok: true });
    expect((await stored(fails.fitCheckId)).check).toMatchObject({ cause: "misread", remarks: "ring was measured cold" });
  });

  test.each<[string, () => FitSubmission, number, RegExp]>([
    ["nothing tried", () => submission([]), 400, /nothing was tried/i],
    ["a reading that is none", () => submission([bore([mm("6o.2")])]), 400, /Spigot bore: “6o\.2”/],
    ["more readings than places", () => submission([bore([mm("62"), mm("62"), mm("62"), mm("62")])]), 400, /4 readings for 3 places/],
    ["a length beyond any bench", () => submission([bore([mm("62170000")])]), 400, /ten metres/],
    ["an answer where a reading belongs", () => submission([bore([], { answers: [true] })]), 400, /read, not answered/],
    ["a reading where an answer belongs", () => submission([bore([mm("1")], { characteristicId: at.dropsId })]), 400, /yes or no/],
    ["one characteristic twice", () => submission([bore([mm("62.17")]), bore([mm("62.17")])]), 400, /twice/],
    ["another mating part than it names", () => submission([bore([mm("62.17")])], { matingPartId: at.forkId }), 400, /another mating part/],
    ["a mating part that is not there", () => submission([bore([mm("62.17")])], { matingPartId: randomUUID() }), 400, /not one of this job/],
    ["an instrument that is not there", () => submission([bore([mm("62.17")], { instrumentId: randomUUID() })]), 400, /instrument/],
    ["a characteristic of no part", () => submission([bore([mm("62.17")], { characteristicId: randomUUID() })]), 400, /does not have/],
    ["a print that is not there", () => submission([bore([mm("62.17")])], { printId: randomUUID() }), 404, /not here/],
    ["a witness mark narrower than nothing", () => submission([bore([mm("62.17")], { bandWidth: mm("-1") })]), 400, /narrower/],
  ])("refuses %s, in words, and stores nothing", async (_what, draft, status, words) => {
    const before = await count();
    const refused = await record(draft());
    expect(refused).toMatchObject({ ok: false, status });
    expect("reason" in refused && refused.reason).toMatch(words);
    expect(await count()).toBe(before);
  });

  test("a partial print proves only what it names", async () => {
    const { recordPrint } = await import("#app/services/prints.server.ts");
    const slice = { presetId: at.presetId, whole: false, piece: "slice of the bore", fileId: at.stepId, scale: { x: null, y: null, z: null }, printedOn: "2026-11-21", note: "" };
    const { printId } = must(await recordPrint(designer, at.revisionId, { ...slice, proves: [at.boreId] }));
    must(await record(submission([bore([mm("62.17")])], { printId })));
    const refused = await record(submission([{ characteristicId: at.dropsId, readings: [], answers: [true], instrumentId: null, bandPosition: null, bandWidth: null }], { printId }));
    expect(refused).toMatchObject({ ok: false, status: 400 });
    expect(await recordPrint(designer, at.revisionId, { ...slice, proves: [randomUUID()] })).toEqual({ ok: false, reason: "not-there", field: "proves" });
    expect(await recordPrint(designer, at.revisionId, { ...slice, proves: [at.boreId], fileId: randomUUID() })).toEqual({ ok: false, reason: "not-there", field: "fileId" });
  });
});

describe("prints and fit checks of a sealed revision", () => {
  test("are refused in words; a draft that got through before is still answered", async () => {
    const sealed = await openTriedPrint(shop);
    const drops = (): Result => ({ characteristicId: sealed.dropsId, readings: [], answers: [true], instrumentId: null, bandPosition: null, bandWidth: null });
    const draft = submission([drops()], { printId: sealed.printId, matingPartId: sealed.ringId });
    const { fitCheckId } = must(await record(draft));
    await sealRevision(shop, sealed.revisionId);
    const { recordPrint, spoilPrint } = await import("#app/services/prints.server.ts");
    const { nameFitCause } = await import("#app/services/fit-checks.server.ts");
    expect(await record(draft)).toEqual({ ok: true, fitCheckId, already: true });
    const refused = await record(submission([drops()], { printId: sealed.printId, matingPartId: sealed.ringId }));
    expect(refused).toMatchObject({ ok: false, status: 409 });
    expect("reason" in refused && refused.reason).toMatch(/released and is sealed.*next revision/);
    expect(await nameFitCause(designer, fitCheckId, null, "late")).toEqual({ ok: false, reason: "sealed" });
    expect(await spoilPrint(designer, sealed.printId, "warped")).toEqual({ ok: false, reason: "sealed" });
    expect(await recordPrint(designer, sealed.revisionId, { presetId: sealed.presetId, whole: true, piece: "", proves: [], fileId: sealed.stepId, scale: { x: null, y: null, z: null }, printedOn: "2026-11-20", note: "" })).toEqual({ ok: false, reason: "sealed" });
    const { beginUpload } = await import("#app/services/uploads.server.ts");
    expect(await beginUpload(designer, { name: "late.jpg", bytes: 10, sha256: "0".repeat(64), kind: "photo", mediaType: "image/jpeg", unit: null, target: { to: "fit-check", id: fitCheckId, characteristicId: null } })).toMatchObject({ ok: false, status: 409 });
  });
});
