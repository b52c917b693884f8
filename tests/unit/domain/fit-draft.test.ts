import { describe, expect, test } from "vitest";
import { emptyEntry, foundOf, newDraft, nextPlace, putAt, readingMm, submissionOf, type DraftEntry } from "#app/domain/fit-draft.ts";

const mm = (text: string) => ({ text, unit: "mm" as const });

describe("a keyed reading", () => {
  test("is read in the unit it was keyed in", () => {
    expect(readingMm(mm("62.17"))).toEqual({ ok: true, mm: 62.17 });
    expect(readingMm(mm("62,17"))).toEqual({ ok: true, mm: 62.17 });
    // 1 in = 25.4 mm exactly (international yard and pound agreement, 1959).
    expect(readingMm({ text: "0.5", unit: "in" })).toEqual({ ok: true, mm: 12.7 });
    expect(readingMm(mm("1/2 in"))).toEqual({ ok: true, mm: 12.7 });
    expect(readingMm(mm("0"))).toEqual({ ok: true, mm: 0 });
  });
  test("says why it is none", () => {
    expect(readingMm(mm("."))).toMatchObject({ ok: false });
    expect(readingMm(mm("6o.2"))).toMatchObject({ ok: false });
    expect(readingMm(mm("10000"))).toMatchObject({ ok: true });
    expect(readingMm(mm("10000.1"))).toMatchObject({ ok: false, reason: expect.stringMatching(/ten metres/) });
  });
});

describe("places", () => {
  test("the next is the first without a value, null when all are there", () => {
    const entry = (readings: DraftEntry["readings"]): DraftEntry => ({ ...emptyEntry, readings });
    expect(nextPlace({ kind: "limits", places: 3 }, undefined)).toBe(0);
    expect(nextPlace({ kind: "limits", places: 3 }, entry([mm("1"), null, mm("3")]))).toBe(1);
    expect(nextPlace({ kind: "limits", places: 2 }, entry([mm("1"), mm("2")]))).toBeNull();
    expect(nextPlace({ kind: "yes-no", places: 1 }, { ...emptyEntry, answers: [false] })).toBeNull();
  });
  test("a value goes to its place, what was left out before it stays empty", () => {
    expect(putAt<number>([], 2, 7)).toEqual([null, null, 7]);
    expect(putAt([1, 2], 0, 9)).toEqual([9, 2]);
  });
  test("what was left out or can't be read is not judged", () => {
    expect(foundOf({ ...emptyEntry, readings: [mm("1"), null, mm("x")], answers: [true, null] })).toEqual({ readingsMm: [1], answers: [true], uncertaintyMm: null });
    expect(foundOf(undefined)).toEqual({ readingsMm: [], answers: [], uncertaintyMm: null });
  });
});

test("what is sent leaves out what was skipped, and an instrument where nothing was read", () => {
  const draft = {
    ...newDraft("key", "print", "Plate, print 1.1", "mm"),
    matingPartId: "ring",
    triedAt: "2026-11-20T10:00:00.000Z",
    remarks: "binds",
    entries: {
      read: { ...emptyEntry, readings: [mm("62.1"), null], instrumentId: "gauge", bandWidth: mm("2") },
      answered: { ...emptyEntry, answers: [false], instrumentId: "gauge" },
      skipped: { ...emptyEntry, instrumentId: "gauge" },
    },
  };
  expect(submissionOf(draft)).toEqual({
    draftKey: "key", printId: "print", matingPartId: "ring", cause: null, remarks: "binds", triedAt: "2026-11-20T10:00:00.000Z",
    results: [
      { characteristicId: "read", readings: [mm("62.1")], answers: [], instrumentId: "gauge", bandPosition: null, bandWidth: mm("2") },
      { characteristicId: "answered", readings: [], answers: [false], instrumentId: null, bandPosition: null, bandWidth: null },
    ],
  });
});
